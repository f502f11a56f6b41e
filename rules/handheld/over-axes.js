/** How what runs along an axis is reduced to what does not. */
import { bit, conditionOf, isEmpty, node, number, test, valueOf } from "./graph.js";
import { axisFrom, axisSize } from "./model.js";
import { both, hasValue } from "./truth.js";
import { COMPARISONS, NO_VALUE, isAbsent, isSettled, missing } from "./values.js";

const bits = (g, axes) => axes.reduce((all, a) => all | bit(g, a), 0);
const LOGIC = ["and", "or", "not"];

/** Paths of the inputs whose absence leaves some comparison in a condition without an operand. */
function missingIn(g, tree) {
  const [op, ...rest] = Array.isArray(tree) ? tree : [""], [name] = rest, named = op === "ref" && g.model.formulaNamed.get(name);
  if (COMPARISONS.includes(op)) return rest.map((t) => valueOf(g, t)).filter(isAbsent).flatMap(({ needs }) => (needs.length ? needs : [""]));
  if (!named) return LOGIC.includes(op) ? rest.flatMap((part) => missingIn(g, part)) : [];
  if (!g.lacking.has(name)) g.lacking.set(name, missingIn(g, named.tree));
  return g.lacking.get(name);
}

/** [node true where every operand compared in a condition has a value], or [] where that is certain. */
function knownIn(g, condition) {
  const operands = new Set(), queue = [condition];
  for (const { op, args } of queue) {
    if (COMPARISONS.includes(op)) args.filter((a) => !a.sure).forEach((a) => operands.add(a));
    else if (LOGIC.includes(op)) queue.push(...args);
  }
  const finite = [...operands].sort((a, b) => a.index - b.index).map((o) => hasValue(g, o));
  return finite.length ? [finite.reduce((all, f) => both(g, all, f))] : [];
}

const ofSamples = (op) => (g, tree) => {
  const a = valueOf(g, tree);
  return isAbsent(a) || !(a.axes & g.samples) ? a : node(g, op, [a], [], a.axes & ~g.samples);
};

const quantifier = (op, ofNothing) => (g, axis, tree) => {
  const c = conditionOf(g, tree), along = bit(g, axis);
  if (isEmpty(g, axis)) return ofNothing;
  return isSettled(c) || !(c.axes & along) ? c : test(g, op, [c], [axis], c.axes & ~along);
};

const extreme = (op) => (g, axis, tree) => {
  const x = valueOf(g, tree), along = bit(g, axis);
  if (isAbsent(x) || isEmpty(g, axis)) return missing([x]);
  return x.axes & along ? node(g, op, [x], [axis], x.axes & ~along) : x;
};

/** The form of what is made of values that must all be there, over axes none of which may be empty. */
const over = (make) => (g, axes, ...trees) => {
  const values = trees.map((t) => valueOf(g, t)), all = [axes].flat();
  return values.some(isAbsent) || all.some((a) => isEmpty(g, a)) ? missing(values) : make(g, all, ...values);
};

const at = (op) => over((g, axes, key, x) => node(g, op, [key, x], axes, (key.axes | x.axes) & ~bits(g, axes)));

const spread = over((g, axes, position, weight) =>
  node(g, "spread_onto", [position, weight], axes, ((position.axes | weight.axes) & ~bits(g, axes.slice(1))) | bit(g, axes[0])));

export const overAxes = {
  probability(g, tree) {
    const needs = missingIn(g, tree);
    if (needs.length) return { needs };
    const c = conditionOf(g, tree);
    if (isSettled(c)) return number(g, +c);
    const known = knownIn(g, c);
    return node(g, c.axes & g.samples ? "share" : "indicator", [c, ...known], [], c.axes & ~g.samples, !known.length);
  },
  mean: ofSamples("mean"),
  low_end: ofSamples("low_end"),
  high_end: ofSamples("high_end"),
  any_over: quantifier("any", false),
  all_over: quantifier("all", true),
  count_over(g, axis, tree) {
    const c = conditionOf(g, tree);
    if (isEmpty(g, axis) || c === false) return number(g, 0);
    return c === true ? overAxes.size_of(g, axis) : node(g, "count", [c], [axis], c.axes & ~bit(g, axis), true);
  },
  sum_over(g, axis, tree) {
    const x = valueOf(g, tree);
    return isEmpty(g, axis) ? number(g, 0) : isAbsent(x) ? x : node(g, "sum", [x], [axis], x.axes & ~bit(g, axis));
  },
  least_over: extreme("least"),
  greatest_over: extreme("greatest"),
  at_least: at("at_least"),
  at_greatest: at("at_greatest"),
  size_of(g, axis) {
    if (isEmpty(g, axis)) return number(g, 0);
    return axisFrom(g.model, axis) === "list" ? node(g, "size", [], [axis], 0, true) : number(g, axisSize(g.model, axis));
  },
  index_of: (g, axis) => (isEmpty(g, axis) ? NO_VALUE : node(g, "place", [], [axis], bit(g, axis), true)),
  weighted_quantile: over((g, axes, x, weight, share) => {
    const left = (x.axes | weight.axes) & ~bits(g, axes), ranking = node(g, "ranking", [x, weight], axes, left);      // sorted once for all shares
    return node(g, "quantile", [ranking, share], axes, left | share.axes);
  }),
  at_share: over((g, axes, x, weight, share) => {
    const reduced = bits(g, axes), left = (weight.axes | share.axes) & ~reduced;
    const place = node(g, "share_place", [weight, share], axes, left);      // found once, whatever is read there
    return node(g, "at_place", [x, place], axes, left | (x.axes & ~reduced));
  }),
  spread_onto: (g, onto, axes, ...trees) => spread(g, [onto, ...axes], ...trees),
};

/** How what runs along an axis is reduced to what does not. */
import { both, hasValue } from "./truth.js";
import { Absent, COMPARISONS, NO_VALUE, missing } from "./values.js";

const bits = (g, axes) => axes.reduce((all, a) => all | g.bit(a), 0);
const isEmpty = (g, axis) => g.model.axisFrom(axis) === "list" && !g.filled.has(axis);
const LOGIC = ["and", "or", "not"];

/** Paths of the inputs whose absence leaves some comparison in a condition without an operand. */
function missingIn(g, tree) {
  const [op, ...rest] = Array.isArray(tree) ? tree : [""];
  if (COMPARISONS.includes(op)) {
    return rest.map((t) => g.value(t)).filter((v) => v instanceof Absent).flatMap((v) => (v.needs.length ? v.needs : [""]));
  }
  if (LOGIC.includes(op)) return rest.flatMap((part) => missingIn(g, part));
  return op === "ref" && g.model.formulaNamed.has(rest[0]) ? missingIn(g, g.model.formulaNamed.get(rest[0]).tree) : [];
}

/** [node true where every operand compared in a condition has a value], or [] where that is certain. */
function knownIn(g, condition) {
  const operands = new Set(), queue = [condition];
  while (queue.length) {
    const node = queue.pop();
    if (COMPARISONS.includes(node.op)) node.args.filter((a) => !a.sure).forEach((a) => operands.add(a));
    else if (LOGIC.includes(node.op)) queue.push(...node.args);
  }
  const finite = [...operands].sort((a, b) => a.index - b.index).map((o) => hasValue(g, o));
  return finite.length ? [finite.reduce((all, f) => both(g, all, f))] : [];
}

const ofSamples = (op) => (g, tree) => {
  const a = g.value(tree);
  return a instanceof Absent || !(a.axes & g.samples) ? a : g.node(op, [a], { axes: a.axes & ~g.samples });
};

const reduce = (g, op, axis, value, boolean = false, sure = false) =>
  g.node(op, [value], { extra: [axis], axes: value.axes & ~g.bit(axis), boolean, sure });

const quantifier = (op, ofNothing) => (g, axis, tree) => {
  const c = g.condition(tree);
  if (isEmpty(g, axis)) return ofNothing;
  return typeof c === "boolean" || !(c.axes & g.bit(axis)) ? c : reduce(g, op, axis, c, true, true);
};

const extreme = (op) => (g, axis, tree) => {
  const x = g.value(tree);
  if (x instanceof Absent || isEmpty(g, axis)) return missing([x]);
  return x.axes & g.bit(axis) ? reduce(g, op, axis, x) : x;
};

const at = (op) => (g, axis, ...trees) => {
  const values = present(g, [axis], trees);
  return values instanceof Absent ? values : g.node(op, values, { extra: [axis], axes: (values[0].axes | values[1].axes) & ~g.bit(axis) });
};

/** Values of the trees, or an Absent where one is absent or one of the axes is empty. */
function present(g, axes, trees) {
  const values = trees.map((t) => g.value(t));
  return values.some((v) => v instanceof Absent) || axes.some((a) => isEmpty(g, a)) ? missing(values) : values;
}

export const overAxes = {
  probability(g, tree) {
    const needs = missingIn(g, tree);
    if (needs.length) return new Absent(needs);
    const c = g.condition(tree);
    if (typeof c === "boolean") return g.number(c ? 1 : 0);
    const known = knownIn(g, c);
    return g.node(c.axes & g.samples ? "share" : "indicator", [c, ...known], { axes: c.axes & ~g.samples, sure: !known.length });
  },
  mean: ofSamples("mean"),
  low_end: ofSamples("low_end"),
  high_end: ofSamples("high_end"),
  any_over: quantifier("any", false),
  all_over: quantifier("all", true),
  count_over(g, axis, tree) {
    const c = g.condition(tree);
    if (isEmpty(g, axis) || c === false) return g.number(0);
    return c === true ? overAxes.size_of(g, axis) : reduce(g, "count", axis, c, false, true);
  },
  sum_over(g, axis, tree) {
    const x = g.value(tree);
    return isEmpty(g, axis) ? g.number(0) : x instanceof Absent ? x : reduce(g, "sum", axis, x);
  },
  least_over: extreme("least"),
  greatest_over: extreme("greatest"),
  at_least: at("at_least"),
  at_greatest: at("at_greatest"),
  size_of(g, axis) {
    if (isEmpty(g, axis)) return g.number(0);
    return g.model.axisFrom(axis) === "list" ? g.node("size", [], { extra: [axis], sure: true }) : g.number(g.model.axisSize(axis));
  },
  index_of: (g, axis) => (isEmpty(g, axis) ? NO_VALUE : g.node("place", [], { extra: [axis], axes: g.bit(axis), sure: true })),
  weighted_quantile(g, axes, ...trees) {
    const values = present(g, axes, trees);
    if (values instanceof Absent) return values;
    const [x, weight, share] = values, left = (x.axes | weight.axes) & ~bits(g, axes);
    const ranking = g.node("ranking", [x, weight], { extra: axes, axes: left });      // sorted once, whatever the shares asked for
    return g.node("quantile", [ranking, share], { extra: axes, axes: left | share.axes });
  },
  at_share(g, axes, ...trees) {
    const values = present(g, axes, trees);
    if (values instanceof Absent) return values;
    const [x, weight, share] = values, reduced = bits(g, axes), left = (weight.axes | share.axes) & ~reduced;
    const place = g.node("share_place", [weight, share], { extra: axes, axes: left });     // found once, whatever is read there
    return g.node("at_place", [x, place], { extra: axes, axes: left | (x.axes & ~reduced) });
  },
  spread_onto(g, onto, axes, ...trees) {
    const values = present(g, [onto, ...axes], trees);
    if (values instanceof Absent) return values;
    return g.node("spread_onto", values, { extra: [onto, ...axes], axes: ((values[0].axes | values[1].axes) & ~bits(g, axes)) | g.bit(onto) });
  },
};

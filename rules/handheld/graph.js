/** The graph that a check becomes for one signature (specialise.js): its nodes, and how an expression tree gets its value. */
import { axisFrom } from "./model.js";
import { isAbsent } from "./values.js";

/** The bit of an axis. */
export const bit = (g, axis) => 1 << g.order.indexOf(axis);

/** Places in the order of axes of those in a set. */
export function placesIn({ order, sets }, axes) {
  if (!sets.has(axes)) sets.set(axes, [...order.keys()].filter((k) => axes & (1 << k)));
  return sets.get(axes);
}

/** Whether an axis is a list without items. */
export const isEmpty = (g, axis) => axisFrom(g.model, axis) === "list" && !g.filled.has(axis);

const NONE = [];

/** The node for this operation; the same one when asked again. */
export function node(g, op, args, extra = NONE, axes = args.reduce((all, a) => all | a.axes, 0), sure = false, boolean = false) {
  let key = `${op} ${axes} ${extra}`;
  for (const a of args) key += ` ${a.index}`;
  let found = g.nodes.get(key);
  if (!found) g.nodes.set(key, (found = { op, args, extra, axes, boolean, sure, index: g.nodes.size }));
  return found;
}

/** A constant of the mathematics, not of the trade. */
export const number = (g, value) => node(g, "number", [], [value], 0, true);

/** A boolean node. */
export const test = (g, op, args, extra, axes) => node(g, op, args, extra, axes, true, true);

/** The value of an expression tree. */
export function valueOf(g, tree) {
  if (typeof tree === "number") return number(g, tree);
  const form = g.forms.get(tree[0]);      // most have one operand or two: they go without a list of them
  return tree.length < 4 ? form(g, tree[1], tree[2]) : form(g, ...tree.slice(1));
}

/** A condition: true, false or a boolean node. What is absent is false. */
export function conditionOf(g, tree) {
  const value = valueOf(g, tree);
  return isAbsent(value) ? false : value;
}

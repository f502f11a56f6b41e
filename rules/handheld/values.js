/**
 * The things a specialised graph is made of. Axes are bits: bit k is the check's k-th axis, the highest one the samples.
 */

export const COMPARISONS = ["eq", "ne", "lt", "le", "gt", "ge"];

/** One operation: `op` on `args` (nodes) with constants in `extra`, running along `axes`. */
export class Node {
  constructor(op, args, extra, axes, boolean, sure, index) {
    this.op = op;
    this.args = args;
    this.extra = extra;
    this.axes = axes;
    this.boolean = boolean;
    this.sure = sure;
    this.index = index;
  }
}

/** A complex value: two real nodes. */
export class Pair {
  constructor(re, im) {
    this.re = re;
    this.im = im;
  }
}

/** No value, and the paths of the inputs whose absence is the cause. */
export class Absent {
  constructor(needs = []) {
    this.needs = needs;
  }
}

/** A choice settled by the signature. */
export class Key {
  constructor(key) {
    this.key = key;
  }
}

export const NO_VALUE = new Absent();

/** The Absent that lacks what all absent ones of `values` lack. */
export function missing(values) {
  const needs = new Set();
  for (const value of values) if (value instanceof Absent) value.needs.forEach((n) => needs.add(n));
  return new Absent([...needs]);
}

/** How many uncertain quantities a node without other axes rests on; a list counts as many. */
export function sampledLeaves(node, samples) {
  let leaves = 0;
  const seen = new Set(), queue = [node];
  while (queue.length) {
    node = queue.pop();
    if (seen.has(node.index) || !(node.axes & samples)) continue;
    seen.add(node.index);
    queue.push(...node.args);
    if (node.op === "slot" || node.op === "uniform") leaves += node.axes === samples ? 1 : 2;
  }
  return leaves;
}

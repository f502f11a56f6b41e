/**
 * The things a specialised graph is made of. Sets of axes are bits: bit k is the check's k-th axis, the highest one the samples.
 *
 * A node is one operation, {op, args, extra, axes, boolean, sure, index}: `op` on `args` (nodes) with constants in `extra`, running along
 * `axes`; `boolean` says what it gives, `sure` that it cannot be absent. A complex value is {re, im}, two nodes. What has no value is {needs}, the
 * paths of the inputs whose absence is the cause. A choice settled by the signature is {key}; other booleans are true or false.
 */

export const COMPARISONS = ["eq", "ne", "lt", "le", "gt", "ge"];
export const NO_VALUE = { needs: [] };

export const isNode = (value) => value.op !== undefined;
export const isComplex = (value) => value.re !== undefined;
export const isAbsent = (value) => value.needs !== undefined;
export const isKey = (value) => value.key !== undefined;
export const isSettled = (value) => typeof value === "boolean";

/** What lacks all that the absent ones of `values` lack. */
export function missing(values) {
  const absent = values.filter(isAbsent);
  return absent.length === 1 && absent[0].needs.length < 2 ? absent[0] : { needs: [...new Set(absent.flatMap((v) => v.needs))] };
}

/** How many uncertain quantities a node without other axes rests on; a list counts as many. */
export function sampledLeaves(node, samples) {
  let leaves = 0;
  const seen = new Set(), queue = [node];
  for (const { index, args, op, axes } of queue) {
    if (seen.has(index) || !(axes & samples)) continue;
    seen.add(index);
    queue.push(...args);
    if (op === "slot" || op === "uniform") leaves += axes === samples ? 1 : 2;
  }
  return leaves;
}

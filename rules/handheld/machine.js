/**
 * What a program is made of: places for values, an input for what a request gives, and steps on registers for single numbers and typed arrays for what runs along axes.
 */
import { KERNELS } from "./elementwise.js";
import { nest, total } from "./shapes.js";
import { sampledLeaves } from "./values.js";

const SIDED = ["lt", "le", "gt", "ge"];      // comparisons whose probability can be corrected by the difference of their sides

const pool = new Map();      // arrays that no run uses, by kind and length

const kindOf = (size, boolean) => size * 2 + boolean;

/** An array of numbers or truth values, from the pool where it has one. */
export const take = (size, boolean = false) => pool.get(kindOf(size, boolean))?.pop() ?? (boolean ? new Uint8Array(size) : new Float64Array(size));

/** Give an array back to the pool. */
export function give(data) {
  const key = kindOf(data.length, data instanceof Uint8Array);
  if (pool.has(key)) pool.get(key).push(data);
  else pool.set(key, [data]);
}

/** Whether the probability of a comparison is corrected: on one uncertain input alone the points are even. */
export const isCorrected = ({ graph }, condition) => SIDED.includes(condition.op) && sampledLeaves(condition, graph.samples) !== 1;

/** The number of a node in one lane. */
export const numberOf = ({ graph }, node, lane) => node.index * 2 + (lane === "s" && node.axes & graph.samples ? 1 : 0);

/** Where a node's value stands in a lane. */
export const at = (p, node, lane) => p.found[numberOf(p, node, lane)];

/** The place of an axis in the order of axes. */
export const axisAt = ({ graph }, axis) => graph.order.indexOf(axis);

/** A place {places, boolean, k, d}: `places` of the axes a value runs along, and its register `k` in S (-1: none) or its array `d` of the present run. */
export const place = (places, boolean = false, k = -1) => ({ places, boolean, k, d: null });

const NOWHERE = [];

/** A place for a single number. */
export function register(p, value, boolean) {
  p.S[p.used] = value;
  return place(NOWHERE, boolean, p.used++);
}

/** The place of a number that never changes. */
export function constantPlace(p, value) {
  if (!p.constants.has(value)) p.constants.set(value, register(p, value));
  return p.constants.get(value);
}

/** Add a step to the program; `reads` are the places it reads, `made` the one whose array it takes from the pool. */
export const step = (p, reads, run, made) => p.steps.push({ run, reads, made, spent: null });

/** A place that is set from the request before each run. */
export function input(p, out, read) {
  p.inputs.push((request) => {
    const value = read(request);
    if (out.k < 0) out.d = value;
    else p.S[out.k] = value;
  });
  return out;
}

/** What depends on the sizes of lists alone, made anew when they change. */
export function perSizes(p, make) {
  let version, made;
  return () => {
    if (version !== p.version) made = make(p.size);
    version = p.version;
    return made;
  };
}

/** A step on single numbers. */
function single({ S }, kernel, [i, j, l], k) {
  return () => kernel(S, k, 1, S, i, 0, S, j, 0, S, l, 0);
}

/** A step that applies an operation number by number. */
export function apply(p, op, operands, out) {
  const [x, y = x, z = x] = operands, starts = [x, y, z].map((o) => Math.max(o.k, 0));
  if (out.k >= 0) step(p, operands, single(p, KERNELS[op], starts, out.k));
  else step(p, operands, onArrays(p, KERNELS[op], [x, y, z], starts, operands.map((o) => o.places), out), out);
}

function onArrays(p, kernel, [x, y, z], starts, places, out) {
  const loops = perSizes(p, (size) => nest(size, kernel, out.places, places));
  return () => {
    out.d = take(total(p.size, out.places), out.boolean);
    loops()(out.d, 0, [x.d ?? p.S, y.d ?? p.S, z.d ?? p.S], starts);
  };
}

/** Reads the numbers of a place, within a step, as an array that runs along `places`: its own where it already does. */
export function along(p, from, places) {
  if (`${from.places}` === `${places}`) return () => from.d ?? p.S.subarray(from.k, from.k + 1);
  const loops = perSizes(p, (size) => nest(size, KERNELS.copy, places, [from.places])), start = [Math.max(from.k, 0)];
  return () => {
    const out = take(total(p.size, places), from.boolean);
    p.borrowed.push(out);
    loops()(out, 0, [from.d ?? p.S], start);
    return out;
  };
}

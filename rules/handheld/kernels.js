/** Operations along axes, on arrays laid out as rows of n neighbouring numbers, in the stated order. */
import { foldSum } from "./exact-math.js";

/** Reductions of outer x n x inner numbers to outer x inner ones: op -> (out, x, outer, n, inner). */
export const REDUCTIONS = {
  any: along((x, at, n, step) => some(x, at, n, step, 1)),
  all: along((x, at, n, step) => 1 - some(x, at, n, step, 0)),
  count: along((x, at, n, step) => {
    let total = 0;
    for (let i = 0; i < n; i++) total += x[at + i * step];
    return total;
  }),
  least: along((x, at, n, step) => extreme(x, at, n, step, 1)),
  greatest: along((x, at, n, step) => extreme(x, at, n, step, -1)),
  sum(out, x, outer, n, inner) {
    const scratch = inner > 1 ? new Float64Array(n * inner) : null;
    for (let o = 0; o < outer; o++) {
      if (inner === 1) out[o] = foldSum(x, o * n, n);
      else out.set(foldRows(scratch, x.subarray(o * n * inner, (o + 1) * n * inner), n, inner), o * inner);
    }
  },
};

function along(reduce) {
  return (out, x, outer, n, inner) => {
    for (let o = 0; o < outer; o++) for (let i = 0; i < inner; i++) out[o * inner + i] = reduce(x, o * n * inner + i, n, inner);
  };
}

function some(x, at, n, step, wanted) {
  for (let i = 0; i < n; i++) if (x[at + i * step] === wanted) return 1;
  return 0;
}

/** The least (sign 1) or greatest (-1) that is not absent. */
function extreme(x, at, n, step, sign) {
  let best = NaN;
  for (let i = 0; i < n; i++) {
    const value = x[at + i * step];
    if (!(value * sign >= best * sign) && value === value) best = value;
  }
  return best;
}

function foldRows(scratch, x, n, width) {
  scratch.set(x);
  for (let half; n > 1; n = half) {
    half = (n + 1) >> 1;
    for (let i = 0, shift = half * width, most = (n - half) * width; i < most; i++) scratch[i] += scratch[shift + i];
  }
  return scratch.subarray(0, width);
}

/**
 * x in each row at the first place where key is least (sign 1) or greatest (-1), absent keys passed over; NaN where all are.
 * `plain`: no other axis, where a key that is infinite is told from an absent one.
 */
export function atExtreme(out, key, x, rows, n, sign, plain) {
  for (let r = 0; r < rows; r++) {
    let at = -1, best = sign * Infinity, known = false;
    for (let i = r * n; i < r * n + n; i++) {
      let k = key[i];
      if (k !== k) {
        if (plain) continue;
        k = sign * Infinity;
      } else {
        known = true;
      }
      if (at < 0 || k * sign < best * sign) {
        at = i;
        best = k;
      }
    }
    out[r] = known ? x[at] : NaN;
  }
}

/** Running sums of each row, added one after another. */
export function running(weight, rows, n) {
  const sums = new Float64Array(rows * n);
  for (let r = 0; r < rows; r++) {
    let total = (sums[r * n] = weight[r * n]);
    for (let i = r * n + 1; i < r * n + n; i++) sums[i] = total += weight[i];
  }
  return sums;
}

/** The first place in a row of running sums that reaches a share of its total; -1 without weight. */
export function placeOf(sums, row, n, share) {
  const start = row * n, total = sums[start + n - 1], wanted = share * total;
  if (!(total > 0)) return -1;
  if (wanted !== wanted) return n - 1;
  let low = 0, high = n;
  while (low < high) {
    const middle = (low + high) >> 1;
    if (sums[start + middle] < wanted) low = middle + 1;
    else high = middle;
  }
  return Math.min(low, n - 1);
}

/** Each row sorted by x, equal ones in their order and absent ones last: {x, sums of the weights in that order}. */
export function ranked(x, weight, rows, n) {
  const sortedX = new Float64Array(rows * n), sortedWeight = new Float64Array(rows * n);
  for (let r = 0; r < rows; r++) {
    const start = r * n, order = rising(x.subarray(start, start + n));
    for (let i = 0; i < n; i++) {
      sortedX[start + i] = x[start + order[i]];
      sortedWeight[start + i] = weight[start + order[i]];
    }
  }
  return { x: sortedX, sums: running(sortedWeight, rows, n) };
}

/** Places of x in rising order: a merge sort, so that equal ones keep their order. */
function rising(x) {
  const n = x.length;
  let from = Uint32Array.from(x, (_, i) => i), to = new Uint32Array(n);
  const after = (a, b) => x[a] > x[b] || (x[a] !== x[a] && x[b] === x[b]);
  for (let start = 0; start < n; start += 8) {
    for (let i = start + 1, end = Math.min(start + 8, n); i < end; i++) {
      const place = from[i];
      let k = i;
      for (; k > start && after(from[k - 1], place); k--) from[k] = from[k - 1];
      from[k] = place;
    }
  }
  for (let width = 8; width < n; width *= 2) {
    for (let start = 0; start < n; start += 2 * width) {
      const middle = Math.min(start + width, n), end = Math.min(start + 2 * width, n);
      if (middle < end && after(from[middle - 1], from[middle])) {
        for (let i = start, j = middle, k = start; k < end; k++) to[k] = j >= end || (i < middle && !after(from[i], from[j])) ? from[i++] : from[j++];
      } else {
        to.set(from.subarray(start, end), start);
      }
    }
    [from, to] = [to, from];
  }
  return from;
}

/** Weights set down along `onto` places, each shared between the two nearest its position; NaN for a row in which one is absent. */
export function spreadOnto(position, weight, rows, n, onto) {
  const out = new Float64Array(rows * onto), upper = new Float64Array(onto);
  for (let r = 0; r < rows; r++) {
    const base = r * onto;
    let known = true;
    upper.fill(0);
    for (let i = r * n; i < r * n + n; i++) {
      const p = position[i], w = weight[i];
      known &&= p === p && w === w;
      const at = Math.min(Math.max(p === p ? p : 0, 0), onto - 1), low = Math.floor(at), part = at - low;
      out[base + low] += w * (1 - part);
      upper[Math.min(low + 1, onto - 1)] += w * part;
    }
    for (let k = 0; k < onto; k++) out[base + k] = known ? out[base + k] + upper[k] : NaN;
  }
  return out;
}

/** The outer tenths of 4 096 samples in order, without sorting what lies between them. */
import { POINTS } from "./points.js";

export const TAIL = Math.floor(POINTS / 10);
const BINS = 1024, CROWD = 48;      // where more samples than that share a bin, sorting is quicker than inserting

const starts = new Uint16Array(BINS + 2), bins = new Uint16Array(POINTS), kept = new Float64Array(POINTS);

/**
 * Fills `low` with the TAIL least samples in rising order and `high` with the TAIL greatest in falling order.
 * @param {Float64Array} x @param {Float64Array} low @param {Float64Array} high
 * @returns {boolean} false where a sample has no value or the range is not finite
 */
export function tails(x, low, high) {
  let least = x[0], most = least;
  for (let i = 0; i < POINTS; i++) {
    const value = x[i];
    if (value < least) least = value;
    else if (value > most) most = value;
    else if (value !== value) return false;
  }
  if (!(most - least < Infinity)) return false;
  // Bins of equal width, in order: a sample's bin never falls as the sample rises.
  const scale = BINS / (most - least);
  let bottom = POINTS, top = POINTS;
  if (scale < Infinity) [bottom, top] = binned(x, least, scale);
  else kept.set(x);
  if (bottom === POINTS) kept.sort();
  for (let i = 0; i < TAIL; i++) {
    low[i] = kept[i];
    high[i] = kept[POINTS - 1 - i];
  }
  return true;
}

/** Leaves the bins that hold the outer samples in order at the two ends of `kept`, or all samples in any order; how many are below, where the rest begins. */
function binned(x, least, scale) {
  starts.fill(0);
  for (let i = 0; i < POINTS; i++) {
    const bin = ((x[i] - least) * scale) | 0;
    bins[i] = bin;
    starts[bin + 1]++;
  }
  let lowBin = 0, highBin = BINS, below = starts[1], above = starts[BINS + 1], crowd = Math.max(below, above);
  while (below < TAIL) {
    below += starts[++lowBin + 1];
    crowd = Math.max(crowd, starts[lowBin + 1]);
  }
  while (above < TAIL) {
    above += starts[highBin--];
    crowd = Math.max(crowd, starts[highBin + 1]);
  }
  if (lowBin >= highBin) {
    kept.set(x);
    return [POINTS, POINTS];
  }
  for (let bin = 1; bin <= BINS; bin++) starts[bin] += starts[bin - 1];
  for (let i = 0; i < POINTS; i++) {
    const bin = bins[i];
    if (bin <= lowBin || bin >= highBin) kept[starts[bin]++] = x[i];
  }
  for (const [from, to] of [[0, below], [POINTS - above, POINTS]]) {
    if (crowd > CROWD) kept.subarray(from, to).sort();
    else inserted(from, to);
  }
  return [below, POINTS - above];
}

function inserted(from, to) {
  for (let i = from + 1; i < to; i++) {
    const value = kept[i];
    let k = i;
    for (; k > from && kept[k - 1] > value; k--) kept[k] = kept[k - 1];
    kept[k] = value;
  }
}

/** The outer tenths of 4 096 samples in order, without sorting what lies between them. */
import { POINTS } from "./points.js";

export const TAIL = Math.floor(POINTS / 10);
const BINS = 1024;

const counts = new Uint16Array(BINS + 1), bins = new Uint16Array(POINTS);
let kept = new Float64Array(POINTS);

/**
 * Fills `low` with the TAIL least samples in rising order and `high` with the TAIL greatest in falling order.
 * @param {Float64Array} x @param {Float64Array} low @param {Float64Array} high
 * @returns {boolean} false where a sample has no value or the range is not finite
 */
export function tails(x, low, high) {
  let least = Infinity, most = -Infinity, broken = 0;
  for (let i = 0; i < POINTS; i++) {
    const value = x[i];
    if (value < least) least = value;
    if (value > most) most = value;
    broken += value - value;
  }
  if (broken !== 0 || !(most - least < Infinity)) return false;
  // Bins of equal width, in order: a sample's bin never falls as the sample rises.
  const scale = BINS / (most - least);
  if (!(scale < Infinity)) return sorted(x, low, high);
  counts.fill(0);
  for (let i = 0; i < POINTS; i++) {
    const bin = ((x[i] - least) * scale) | 0;
    bins[i] = bin;
    counts[bin]++;
  }
  let lowBin = 0, highBin = BINS, below = counts[0], above = counts[BINS];
  while (below < TAIL) below += counts[++lowBin];
  while (above < TAIL) above += counts[--highBin];
  if (lowBin >= highBin) return sorted(x, low, high);
  let bottom = 0, top = POINTS;
  for (let i = 0; i < POINTS; i++) {
    if (bins[i] <= lowBin) kept[bottom++] = x[i];
    else if (bins[i] >= highBin) kept[--top] = x[i];
  }
  low.set(kept.subarray(0, bottom).sort().subarray(0, TAIL));
  high.set(kept.subarray(top).sort().subarray(-TAIL).reverse());
  return true;
}

function sorted(x, low, high) {
  kept.set(x);
  kept.sort();
  low.set(kept.subarray(0, TAIL));
  high.set(kept.subarray(-TAIL).reverse());
  return true;
}

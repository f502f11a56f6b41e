/**
 * The reader of a table or curve by its own rule (`between` linear or step; `below` and `above` absent or hold): read(x, [xs, ys]) is the
 * value at x, NaN where there is none.
 */
export const lookup = ({ between, below, above }) => (x, [xs, ys]) => {
  const last = xs.length - 1;
  if (x !== x || x < xs[0]) return x < xs[0] && below === "hold" ? ys[0] : NaN;
  if (x >= xs[last]) return x === xs[last] || above === "hold" ? ys[last] : NaN;
  let low = 0, high = last;      // the last place at or below x
  while (high - low > 1) {
    const middle = (low + high) >> 1;
    if (xs[middle] <= x) low = middle;
    else high = middle;
  }
  return between === "step" ? ys[low] : ys[low] + (ys[low + 1] - ys[low]) * ((x - xs[low]) / (xs[low + 1] - xs[low]));
};

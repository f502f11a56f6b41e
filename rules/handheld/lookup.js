/** A table or curve read by its own rule: `between` linear or step; `below` and `above` absent or hold. */
export class Lookup {
  constructor({ between, below, above }, data = null) {
    this.step = between === "step";
    this.holdBelow = below === "hold";
    this.holdAbove = above === "hold";
    this.data = data;
  }

  /** The value at x; NaN where there is none. @param {number} x @param {[ArrayLike<number>, ArrayLike<number>]} data @returns {number} */
  read(x, [xs, ys] = this.data) {
    const last = xs.length - 1;
    if (x !== x || x < xs[0]) return x < xs[0] && this.holdBelow ? ys[0] : NaN;
    if (x >= xs[last]) return x === xs[last] || this.holdAbove ? ys[last] : NaN;
    let low = 0, high = last;      // the last place at or below x
    while (high - low > 1) {
      const middle = (low + high) >> 1;
      if (xs[middle] <= x) low = middle;
      else high = middle;
    }
    return this.step ? ys[low] : ys[low] + (ys[low + 1] - ys[low]) * ((x - xs[low]) / (xs[low + 1] - xs[low]));
  }
}

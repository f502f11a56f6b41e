/** How operands along different axes line up: sizes, strides, and nests of loops. An axis is its place in the graph's order. */
import { KERNELS } from "./elementwise.js";

/** Sizes of the axes of one run. The version rises when a list has another length than before. */
export class Shapes {
  /** @param {number[]} fixed size of every axis; that of a list is set for each run */
  constructor(fixed) {
    this.size = fixed;
    this.version = 0;
  }

  set(place, size) {
    if (this.size[place] === size) return;
    this.size[place] = size;
    this.version++;
  }

  total(places) {
    return places.reduce((product, p) => product * this.size[p], 1);
  }

  /** Step in an array that runs along `from` (in that order) for each of the places in `to`; 0 where it does not run along one. */
  strides(from, to) {
    const step = new Map();
    let width = 1;
    for (let k = from.length - 1; k >= 0; k--) {
      step.set(from[k], width);
      width *= this.size[from[k]];
    }
    return to.map((p) => step.get(p) ?? 0);
  }

  /** For each element along `to`, the place of its element in an array that runs along `from`. */
  offsets(from, to) {
    const strides = this.strides(from, to), found = new Int32Array(this.total(to));
    let filled = 1;
    for (let k = to.length - 1; k >= 0; k--) {
      const width = filled;
      for (let i = 1; i < this.size[to[k]]; i++) for (let j = 0; j < width; j++) found[filled++] = found[j] + i * strides[k];
    }
    return found;
  }

  /**
   * Loops that run a kernel along the places `to`: run(out, arrays, starts).
   * @param {Function} kernel @param {number[]} to @param {number[][]} operands the places each operand runs along
   */
  nest(kernel, to, operands) {
    let sizes = [], strides = operands.map(() => []);
    const all = operands.map((from) => this.strides(from, to));
    to.forEach((p, k) => {      // neighbouring axes along which every operand steps evenly are one
      const last = sizes.length - 1, size = this.size[p];
      if (last >= 0 && all.every((s, i) => strides[i][last] === s[k] * size)) {
        sizes[last] *= size;
        all.forEach((s, i) => { strides[i][last] = s[k]; });
      } else {
        sizes.push(size);
        all.forEach((s, i) => { strides[i].push(s[k]); });
      }
    });
    const inner = sizes.length - 1, [sa, sb = [], sc = []] = strides, widths = sizes.map((_, d) => sizes.slice(d + 1).reduce((a, b) => a * b, 1));
    return (out, [a, b, c], [startA, startB, startC]) => {
      const visit = (d, o, ia, ib, ic) => {
        if (d === inner) {
          kernel(out, o, sizes[d], a, ia, sa[d], b, ib, sb[d], c, ic, sc[d]);
          return;
        }
        for (let i = 0; i < sizes[d]; i++) visit(d + 1, o + i * widths[d], ia + i * sa[d], ib + i * sb[d], ic + i * sc[d]);
      };
      visit(0, 0, startA, startB, startC);
    };
  }

  /** A copy of `data`, which runs along `from`, laid out along `to`. */
  laidOut(data, start, from, to, out) {
    if (!to.length) out[0] = data[start];
    else this.nest(KERNELS.copy, to, [from])(out, [data], [start]);
    return out;
  }
}

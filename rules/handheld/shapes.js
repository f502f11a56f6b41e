/** How operands along different axes line up: sizes, strides, and nests of loops. An axis is its place in the order of axes; `size` has the sizes. */
import { KERNELS } from "./elementwise.js";

/** How many elements run along some axes. */
export const total = (size, places) => places.reduce((product, p) => product * size[p], 1);

/** Step in an array that runs along `from` (in that order) for each of the places in `to`; 0 where it does not run along one. */
const strides = (size, from, to) => to.map((p) => (from.includes(p) ? total(size, from.slice(from.indexOf(p) + 1)) : 0));

/** For each element along `to`, the place of its element in an array that runs along `from`. */
export function offsets(size, from, to) {
  const steps = strides(size, from, to), found = new Int32Array(total(size, to));
  let filled = 1;
  for (let k = to.length - 1; k >= 0; k--) {
    const width = filled;
    for (let i = 1; i < size[to[k]]; i++) for (let j = 0; j < width; j++) found[filled++] = found[j] + i * steps[k];
  }
  return found;
}

/**
 * Loops that run a kernel along the places `to`: run(out, start of out, arrays, their starts). `operands` has the places each array runs along.
 */
export function nest(size, kernel, to, operands) {
  const sizes = [], steps = [[], [], []], all = operands.map((from) => strides(size, from, to));
  to.forEach((p, k) => {
    let last = sizes.length - 1;
    // Neighbouring axes along which every operand steps evenly are one.
    if (last >= 0 && all.every((s, i) => steps[i][last] === s[k] * size[p])) sizes[last] *= size[p];
    else last = sizes.push(size[p]) - 1;
    all.forEach((s, i) => { steps[i][last] = s[k]; });
  });
  const inner = Math.max(sizes.length - 1, 0), [sa, sb, sc] = steps, n = sizes[inner] ?? 1;
  const visit = (out, a, b, c, d, o, ia, ib, ic) => {
    if (d === inner) {
      kernel(out, o, n, a, ia, sa[d], b, ib, sb[d], c, ic, sc[d]);
      return;
    }
    const width = sizes.slice(d + 1).reduce((x, y) => x * y, 1);
    for (let i = 0; i < sizes[d]; i++) visit(out, a, b, c, d + 1, o + i * width, ia + i * sa[d], ib + i * sb[d], ic + i * sc[d]);
  };
  return (out, o, [a, b, c], [ia, ib, ic]) => visit(out, a, b, c, 0, o, ia, ib, ic);
}

/** The copying loops that lay an array along `from` out along `to`. */
export const layOut = (size, from, to) => nest(size, KERNELS.copy, to, [from]);

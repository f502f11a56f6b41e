/**
 * Operations number by number, as loops: kernel(out, o, n, a, ia, sa, b, ib, sb, c, ic, sc) writes n elements of `out` from o on; operand a is
 * read from ia on in steps of sa, and so on. A truth value is 0 or 1. Registers of single numbers are arrays too, with n = 1.
 */
import { cos, exp, ln, sin } from "./exact-math.js";

// A loop that calls a function costs several times one that spells the operation out: the frequent ones are spelled out.
const one = (f) => (out, o, n, a, ia, sa) => { for (const e = o + n; o < e; o++, ia += sa) out[o] = f(a[ia]); };
const two = (f) => (out, o, n, a, ia, sa, b, ib, sb) => { for (const e = o + n; o < e; o++, ia += sa, ib += sb) out[o] = f(a[ia], b[ib]); };

export const KERNELS = {
  copy: (out, o, n, a, ia, sa) => { for (const e = o + n; o < e; o++, ia += sa) out[o] = a[ia]; },
  neg: (out, o, n, a, ia, sa) => { for (const e = o + n; o < e; o++, ia += sa) out[o] = -a[ia]; },
  abs: (out, o, n, a, ia, sa) => { for (const e = o + n; o < e; o++, ia += sa) out[o] = Math.abs(a[ia]); },
  sqrt: (out, o, n, a, ia, sa) => { for (const e = o + n; o < e; o++, ia += sa) out[o] = Math.sqrt(a[ia]); },
  add: (out, o, n, a, ia, sa, b, ib, sb) => { for (const e = o + n; o < e; o++, ia += sa, ib += sb) out[o] = a[ia] + b[ib]; },
  sub: (out, o, n, a, ia, sa, b, ib, sb) => { for (const e = o + n; o < e; o++, ia += sa, ib += sb) out[o] = a[ia] - b[ib]; },
  mul: (out, o, n, a, ia, sa, b, ib, sb) => { for (const e = o + n; o < e; o++, ia += sa, ib += sb) out[o] = a[ia] * b[ib]; },
  div: (out, o, n, a, ia, sa, b, ib, sb) => { for (const e = o + n; o < e; o++, ia += sa, ib += sb) out[o] = a[ia] / b[ib]; },
  lt: (out, o, n, a, ia, sa, b, ib, sb) => { for (const e = o + n; o < e; o++, ia += sa, ib += sb) out[o] = a[ia] < b[ib] ? 1 : 0; },
  le: (out, o, n, a, ia, sa, b, ib, sb) => { for (const e = o + n; o < e; o++, ia += sa, ib += sb) out[o] = a[ia] <= b[ib] ? 1 : 0; },
  gt: (out, o, n, a, ia, sa, b, ib, sb) => { for (const e = o + n; o < e; o++, ia += sa, ib += sb) out[o] = a[ia] > b[ib] ? 1 : 0; },
  ge: (out, o, n, a, ia, sa, b, ib, sb) => { for (const e = o + n; o < e; o++, ia += sa, ib += sb) out[o] = a[ia] >= b[ib] ? 1 : 0; },
  and: (out, o, n, a, ia, sa, b, ib, sb) => { for (const e = o + n; o < e; o++, ia += sa, ib += sb) out[o] = a[ia] & b[ib]; },
  select: (out, o, n, a, ia, sa, b, ib, sb, c, ic, sc) => {
    for (const e = o + n; o < e; o++, ia += sa, ib += sb, ic += sc) out[o] = a[ia] ? b[ib] : c[ic];
  },
  uniform: (out, o, n, a, ia, sa, b, ib, sb, c, ic, sc) => {
    for (const e = o + n; o < e; o++, ia += sa, ib += sb, ic += sc) out[o] = a[ia] + (b[ib] - a[ia]) * c[ic];
  },
  exp: one(exp),
  ln: one(ln),
  sin: one(sin),
  cos: one(cos),
  floor: one(Math.floor),
  not: one((a) => 1 - a),
  finite: one((a) => (a - a === 0 ? 1 : 0)),
  min: two((a, b) => (a < b || a !== a ? a : b)),
  max: two((a, b) => (a > b || a !== a ? a : b)),
  eq: two((a, b) => (a === b ? 1 : 0)),
  ne: two((a, b) => (a !== b ? 1 : 0)),
  or: two((a, b) => a | b),
  indicator: two((holds, known) => (known ? holds : NaN)),
};

/**
 * Operations number by number: `SCALARS` make a closure over the registers of single numbers, `KERNELS` are loops over arrays.
 * A truth value is 0 or 1. A kernel writes n elements of `out` from o on; operand a is read from ia on in steps of sa, and so on.
 */
import { cos, exp, ln, sin } from "./exact-math.js";

/** op -> (S, k, i, j, l) => the closure that sets S[k] from S[i], S[j], S[l]. */
export const SCALARS = {
  add: (S, k, i, j) => () => { S[k] = S[i] + S[j]; },
  sub: (S, k, i, j) => () => { S[k] = S[i] - S[j]; },
  mul: (S, k, i, j) => () => { S[k] = S[i] * S[j]; },
  div: (S, k, i, j) => () => { S[k] = S[i] / S[j]; },
  neg: (S, k, i) => () => { S[k] = -S[i]; },
  abs: (S, k, i) => () => { S[k] = Math.abs(S[i]); },
  sqrt: (S, k, i) => () => { S[k] = Math.sqrt(S[i]); },
  floor: (S, k, i) => () => { S[k] = Math.floor(S[i]) + 0; },
  min: (S, k, i, j) => () => { S[k] = S[i] < S[j] || S[i] !== S[i] ? S[i] : S[j]; },
  max: (S, k, i, j) => () => { S[k] = S[i] > S[j] || S[i] !== S[i] ? S[i] : S[j]; },
  exp: (S, k, i) => () => { S[k] = exp(S[i]); },
  ln: (S, k, i) => () => { S[k] = ln(S[i]); },
  sin: (S, k, i) => () => { S[k] = sin(S[i]); },
  cos: (S, k, i) => () => { S[k] = cos(S[i]); },
  lt: (S, k, i, j) => () => { S[k] = S[i] < S[j] ? 1 : 0; },
  le: (S, k, i, j) => () => { S[k] = S[i] <= S[j] ? 1 : 0; },
  gt: (S, k, i, j) => () => { S[k] = S[i] > S[j] ? 1 : 0; },
  ge: (S, k, i, j) => () => { S[k] = S[i] >= S[j] ? 1 : 0; },
  eq: (S, k, i, j) => () => { S[k] = S[i] === S[j] ? 1 : 0; },
  ne: (S, k, i, j) => () => { S[k] = S[i] !== S[j] ? 1 : 0; },
  and: (S, k, i, j) => () => { S[k] = S[i] & S[j]; },
  or: (S, k, i, j) => () => { S[k] = S[i] | S[j]; },
  not: (S, k, i) => () => { S[k] = 1 - S[i]; },
  finite: (S, k, i) => () => { S[k] = S[i] - S[i] === 0 ? 1 : 0; },
  select: (S, k, i, j, l) => () => { S[k] = S[i] ? S[j] : S[l]; },
  uniform: (S, k, i, j, l) => () => { S[k] = S[i] + (S[j] - S[i]) * S[l]; },
  indicator: (S, k, i, j) => () => { S[k] = S[j] ? S[i] : NaN; },
};

const function1 = (f) => (out, o, n, a, ia, sa) => { for (let e = o + n; o < e; o++, ia += sa) out[o] = f(a[ia]); };

export const KERNELS = {
  copy: (out, o, n, a, ia, sa) => { for (let e = o + n; o < e; o++, ia += sa) out[o] = a[ia]; },
  add: (out, o, n, a, ia, sa, b, ib, sb) => { for (let e = o + n; o < e; o++, ia += sa, ib += sb) out[o] = a[ia] + b[ib]; },
  sub: (out, o, n, a, ia, sa, b, ib, sb) => { for (let e = o + n; o < e; o++, ia += sa, ib += sb) out[o] = a[ia] - b[ib]; },
  mul: (out, o, n, a, ia, sa, b, ib, sb) => { for (let e = o + n; o < e; o++, ia += sa, ib += sb) out[o] = a[ia] * b[ib]; },
  div: (out, o, n, a, ia, sa, b, ib, sb) => { for (let e = o + n; o < e; o++, ia += sa, ib += sb) out[o] = a[ia] / b[ib]; },
  neg: (out, o, n, a, ia, sa) => { for (let e = o + n; o < e; o++, ia += sa) out[o] = -a[ia]; },
  abs: (out, o, n, a, ia, sa) => { for (let e = o + n; o < e; o++, ia += sa) out[o] = Math.abs(a[ia]); },
  sqrt: (out, o, n, a, ia, sa) => { for (let e = o + n; o < e; o++, ia += sa) out[o] = Math.sqrt(a[ia]); },
  floor: (out, o, n, a, ia, sa) => { for (let e = o + n; o < e; o++, ia += sa) out[o] = Math.floor(a[ia]); },
  min: (out, o, n, a, ia, sa, b, ib, sb) => {
    for (let e = o + n; o < e; o++, ia += sa, ib += sb) out[o] = a[ia] < b[ib] || a[ia] !== a[ia] ? a[ia] : b[ib];
  },
  max: (out, o, n, a, ia, sa, b, ib, sb) => {
    for (let e = o + n; o < e; o++, ia += sa, ib += sb) out[o] = a[ia] > b[ib] || a[ia] !== a[ia] ? a[ia] : b[ib];
  },
  exp: function1(exp),
  ln: function1(ln),
  sin: function1(sin),
  cos: function1(cos),
  lt: (out, o, n, a, ia, sa, b, ib, sb) => { for (let e = o + n; o < e; o++, ia += sa, ib += sb) out[o] = a[ia] < b[ib] ? 1 : 0; },
  le: (out, o, n, a, ia, sa, b, ib, sb) => { for (let e = o + n; o < e; o++, ia += sa, ib += sb) out[o] = a[ia] <= b[ib] ? 1 : 0; },
  gt: (out, o, n, a, ia, sa, b, ib, sb) => { for (let e = o + n; o < e; o++, ia += sa, ib += sb) out[o] = a[ia] > b[ib] ? 1 : 0; },
  ge: (out, o, n, a, ia, sa, b, ib, sb) => { for (let e = o + n; o < e; o++, ia += sa, ib += sb) out[o] = a[ia] >= b[ib] ? 1 : 0; },
  eq: (out, o, n, a, ia, sa, b, ib, sb) => { for (let e = o + n; o < e; o++, ia += sa, ib += sb) out[o] = a[ia] === b[ib] ? 1 : 0; },
  ne: (out, o, n, a, ia, sa, b, ib, sb) => { for (let e = o + n; o < e; o++, ia += sa, ib += sb) out[o] = a[ia] !== b[ib] ? 1 : 0; },
  and: (out, o, n, a, ia, sa, b, ib, sb) => { for (let e = o + n; o < e; o++, ia += sa, ib += sb) out[o] = a[ia] & b[ib]; },
  or: (out, o, n, a, ia, sa, b, ib, sb) => { for (let e = o + n; o < e; o++, ia += sa, ib += sb) out[o] = a[ia] | b[ib]; },
  not: (out, o, n, a, ia, sa) => { for (let e = o + n; o < e; o++, ia += sa) out[o] = 1 - a[ia]; },
  finite: (out, o, n, a, ia, sa) => { for (let e = o + n; o < e; o++, ia += sa) out[o] = a[ia] - a[ia] === 0 ? 1 : 0; },
  select: (out, o, n, a, ia, sa, b, ib, sb, c, ic, sc) => {
    for (let e = o + n; o < e; o++, ia += sa, ib += sb, ic += sc) out[o] = a[ia] ? b[ib] : c[ic];
  },
  uniform: (out, o, n, a, ia, sa, b, ib, sb, c, ic, sc) => {
    for (let e = o + n; o < e; o++, ia += sa, ib += sb, ic += sc) out[o] = a[ia] + (b[ib] - a[ia]) * c[ic];
  },
  indicator: (out, o, n, a, ia, sa, b, ib, sb) => { for (let e = o + n; o < e; o++, ia += sa, ib += sb) out[o] = b[ib] ? a[ia] : NaN; },
};

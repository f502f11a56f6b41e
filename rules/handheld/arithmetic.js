/** How arithmetic and functions of numbers become nodes: absence passes through, a complex number is spelled out in real operations. */
import { node, number, valueOf } from "./graph.js";
import { isAbsent, isComplex, missing } from "./values.js";

const pair = (g, v) => (isComplex(v) ? v : { re: v, im: number(g, 0) });
const parts = (a, f) => ({ re: f(a.re), im: f(a.im) });

/** The form of a function of the values of its one or two operands, absent where one of them is. */
const of = (make) => (g, tree, other) => {
  const a = valueOf(g, tree);
  if (other === undefined) return isAbsent(a) ? a : make(g, a);
  const b = valueOf(g, other);
  return isAbsent(a) || isAbsent(b) ? missing([a, b]) : make(g, a, b);
};

const plain = (op) => {
  const form = of((g, a, b) => node(g, op, b === undefined ? [a] : [a, b]));
  return (g, tree, other) => {
    const value = form(g, tree, other);
    return isAbsent(value) ? missing([value]) : value;
  };
};

// Adding zero and multiplying by one change nothing, so they are not nodes.
const is = (a, value) => a.op === "number" && a.extra[0] === value;
const sum = (g, op, a, b) => (is(b, 0) ? a : op === "add" && is(a, 0) ? b : node(g, op, [a, b]));
const times = (g, a, b) => (is(a, 1) ? b : is(b, 1) ? a : node(g, "mul", [a, b]));

const added = (op) => of((g, a, b) => {
  if (!isComplex(a) && !isComplex(b)) return sum(g, op, a, b);
  a = pair(g, a);
  b = pair(g, b);
  return { re: sum(g, op, a.re, b.re), im: sum(g, op, a.im, b.im) };
});

function product(g, a, b) {
  if (!isComplex(b)) return isComplex(a) ? parts(a, (p) => times(g, p, b)) : times(g, a, b);
  if (!isComplex(a)) return parts(b, (p) => times(g, a, p));
  return { re: sum(g, "sub", times(g, a.re, b.re), times(g, a.im, b.im)), im: sum(g, "add", times(g, a.re, b.im), times(g, a.im, b.re)) };
}

const sizeSquared = (g, { re, im }) => sum(g, "add", node(g, "mul", [re, re]), node(g, "mul", [im, im]));
const conjugate = (g, { re, im }) => ({ re, im: node(g, "neg", [im]) });

function quotient(g, a, b) {
  if (isComplex(b)) {
    a = product(g, a, conjugate(g, b));
    b = sizeSquared(g, b);
  }
  const over = (p) => node(g, "div", [p, b]);
  return isComplex(a) ? parts(a, over) : over(a);
}

export const arithmetic = {
  neg: of((g, a) => (isComplex(a) ? parts(a, (p) => node(g, "neg", [p])) : node(g, "neg", [a]))),
  add: added("add"),
  sub: added("sub"),
  mul: of(product),
  div: of(quotient),
  pow(g, tree, power) {
    const a = valueOf(g, tree);
    if (isAbsent(a)) return a;
    if (power === 0) return number(g, 1);
    let result = a;
    for (let n = Math.abs(power); n > 1; n--) result = product(g, result, a);
    return power < 0 ? quotient(g, number(g, 1), result) : result;
  },
  abs: of((g, a) => (isComplex(a) ? node(g, "sqrt", [sizeSquared(g, a)]) : node(g, "abs", [a]))),
  abs_squared: of((g, a) => (isComplex(a) ? sizeSquared(g, a) : node(g, "mul", [a, a]))),
  complex: of((g, re, im) => ({ re, im })),
  re: of((g, a) => pair(g, a).re),
  im: of((g, a) => pair(g, a).im),
  conj: of((g, a) => conjugate(g, pair(g, a))),
  lookup(g, source, name, ...rest) {
    const index = g.model.slotIndex.get(name), curve = source === "curve";
    if (curve && g.states[index] === "a") return { needs: [name] };
    const x = valueOf(g, rest.at(-1));
    return isAbsent(x) ? x : node(g, "lookup", [x], curve ? [source, index] : [source, name, rest[0]]);
  },
  uniform: of((g, low, high) => node(g, "uniform", [low, high], [g.uniforms++], low.axes | high.axes | g.samples)),
};

for (const op of ["sqrt", "min", "max", "floor", "exp", "ln", "sin", "cos"]) arithmetic[op] = plain(op);

/** How arithmetic and functions of numbers become nodes: absence passes through, a complex number is spelled out in real operations. */
import { Absent, Pair, missing } from "./values.js";

const absent = (v) => v instanceof Absent;
const complex = (v) => v instanceof Pair;
const pair = (g, v) => (complex(v) ? v : new Pair(v, g.number(0)));

/** The form of a function of the values of its operands, absent where one of them is. */
const of = (make) => (g, ...trees) => {
  const values = trees.map((t) => g.value(t));
  return values.some(absent) ? missing(values) : make(g, ...values);
};

const plain = (op) => of((g, ...values) => g.node(op, values));

// Adding zero and multiplying by one change nothing, so they are not nodes.
const is = (node, value) => node.op === "number" && node.extra[0] === value;
const sum = (g, op, a, b) => (is(b, 0) ? a : op === "add" && is(a, 0) ? b : g.node(op, [a, b]));
const times = (g, a, b) => (is(a, 1) ? b : is(b, 1) ? a : g.node("mul", [a, b]));

const added = (op) => of((g, a, b) => {
  if (!complex(a) && !complex(b)) return sum(g, op, a, b);
  a = pair(g, a);
  b = pair(g, b);
  return new Pair(sum(g, op, a.re, b.re), sum(g, op, a.im, b.im));
});

function product(g, a, b) {
  if (complex(a) && complex(b)) {
    return new Pair(sum(g, "sub", times(g, a.re, b.re), times(g, a.im, b.im)), sum(g, "add", times(g, a.re, b.im), times(g, a.im, b.re)));
  }
  if (complex(a)) return new Pair(times(g, a.re, b), times(g, a.im, b));
  return complex(b) ? new Pair(times(g, a, b.re), times(g, a, b.im)) : times(g, a, b);
}

const sizeSquared = (g, a) => sum(g, "add", g.node("mul", [a.re, a.re]), g.node("mul", [a.im, a.im]));
const conjugate = (g, a) => new Pair(a.re, g.node("neg", [a.im]));

function quotient(g, a, b) {
  if (complex(b)) {
    a = product(g, a, conjugate(g, b));
    b = sizeSquared(g, b);
  }
  return complex(a) ? new Pair(g.node("div", [a.re, b]), g.node("div", [a.im, b])) : g.node("div", [a, b]);
}

export const arithmetic = {
  neg: of((g, a) => (complex(a) ? new Pair(g.node("neg", [a.re]), g.node("neg", [a.im])) : g.node("neg", [a]))),
  add: added("add"),
  sub: added("sub"),
  mul: of(product),
  div: of(quotient),
  pow(g, tree, power) {
    const a = g.value(tree);
    if (absent(a)) return a;
    if (power === 0) return g.number(1);
    let result = a;
    for (let n = Math.abs(power); n > 1; n--) result = product(g, result, a);
    return power < 0 ? quotient(g, g.number(1), result) : result;
  },
  sqrt: plain("sqrt"),
  abs: of((g, a) => (complex(a) ? g.node("sqrt", [sizeSquared(g, a)]) : g.node("abs", [a]))),
  abs_squared: of((g, a) => (complex(a) ? sizeSquared(g, a) : g.node("mul", [a, a]))),
  min: plain("min"),
  max: plain("max"),
  floor: plain("floor"),
  exp: plain("exp"),
  ln: plain("ln"),
  sin: plain("sin"),
  cos: plain("cos"),
  complex: of((g, re, im) => new Pair(re, im)),
  re: of((g, a) => pair(g, a).re),
  im: of((g, a) => pair(g, a).im),
  conj: of((g, a) => conjugate(g, pair(g, a))),
  lookup(g, source, name, ...rest) {
    const curve = source === "curve", index = g.model.slotIndex.get(name);
    if (curve && g.states[index] === "a") return new Absent([name]);
    const x = g.value(rest[curve ? 0 : 1]);
    return absent(x) ? x : g.node("lookup", [x], { extra: curve ? ["curve", index] : ["table", name, rest[0]] });
  },
  uniform: of((g, low, high) => g.node("uniform", [low, high], { extra: [g.uniforms++], axes: low.axes | high.axes | g.samples })),
};

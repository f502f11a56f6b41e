/** How comparisons, conditionals and questions of absence become nodes, or are settled by the signature. */
import { conditionOf, node, number, test, valueOf } from "./graph.js";
import { columnField } from "./model.js";
import { COMPARISONS, isAbsent, isComplex, isKey, isNode, isSettled, missing } from "./values.js";

const asNode = (g, value) => (isSettled(value) ? test(g, "truth", [], [value]) : value);

export const both = (g, a, b) => test(g, "and", [a, b]);
const not = (g, a) => test(g, "not", [a]);
const codeIs = (g, codes, code) => test(g, "code_is", [codes], [code]);
const known = (g, codes) => not(g, codeIs(g, codes, -1));

/** Whether a value is there: true where that is certain. */
export function hasValue(g, value) {
  if (!isComplex(value)) return !isNode(value) || value.sure || test(g, "finite", [value]);
  const a = hasValue(g, value.re), b = hasValue(g, value.im);
  return a === true ? b : b === true ? a : both(g, a, b);
}

function codeOf({ model }, { op, extra }, key) {
  const field = op === "slot" ? model.slots[extra[0]].field : columnField(model, ...extra);
  return field.choices.findIndex((c) => c.key === key);
}

function compare(g, op, a, b) {
  if (isAbsent(a) || isAbsent(b)) return false;
  if (isKey(a) && isKey(b)) return (a.key === b.key) === (op === "eq");
  if (isKey(a)) [a, b] = [b, a];
  if (!isKey(b)) return test(g, op, isSettled(a) || isSettled(b) ? [asNode(g, a), asNode(g, b)] : [a, b]);
  const same = codeIs(g, a, codeOf(g, a, b.key));
  return op === "eq" ? same : both(g, known(g, a), not(g, same));
}

function either(g, a, b) {
  if (a === true || b === true) return true;
  return a === false ? b : b === false ? a : test(g, "or", [a, b]);
}

function select(g, condition, a, b) {
  if (isSettled(condition)) return condition ? a : b;
  if (isComplex(a) || isComplex(b)) {
    [a, b] = [a, b].map((v) => (isComplex(v) ? v : { re: v, im: isAbsent(v) ? v : number(g, 0) }));
    return { re: select(g, condition, a.re, b.re), im: select(g, condition, a.im, b.im) };
  }
  if ([a, b].some((v) => isSettled(v) || v.boolean)) return test(g, "select", [condition, ...[a, b].map((v) => asNode(g, isAbsent(v) ? false : v))]);
  const sure = a.sure === true && b.sure === true, args = [a, b].map((v) => (isAbsent(v) ? node(g, "nothing", []) : v));
  return node(g, "select", [condition, ...args], [], undefined, sure);
}

export const truth = {
  in: (g, a, keys) => keys.reduce((result, key) => either(g, result, compare(g, "eq", valueOf(g, a), { key })), false),
  and(g, a, b) {
    a = conditionOf(g, a);
    if (a === false) return false;
    b = conditionOf(g, b);
    if (a === true || b === false) return b;
    return b === true ? a : both(g, a, b);
  },
  or: (g, a, b) => either(g, conditionOf(g, a), conditionOf(g, b)),
  not(g, a) {
    a = conditionOf(g, a);
    return isSettled(a) ? !a : not(g, a);
  },
  given(g, a) {
    a = valueOf(g, a);
    if (isAbsent(a)) return false;
    return a.op === "slot" && g.model.slots[a.extra[0]].kind === "choice" ? known(g, a) : hasValue(g, a);
  },
  first_of(g, ...trees) {
    const lacking = [], options = [];
    for (const tree of trees) {
      if (tree === undefined) continue;
      const value = valueOf(g, tree), { re, im } = value;
      if (isAbsent(value)) {
        lacking.push(value);
        continue;
      }
      options.push(value);
      if (isComplex(value) ? re.sure && im.sure : !isNode(value) || value.sure) break;
    }
    return options.length ? options.reduceRight((result, value) => select(g, hasValue(g, value), value, result)) : missing(lacking);
  },
  if(g, condition, a, b) {
    condition = conditionOf(g, condition);
    if (isSettled(condition)) return valueOf(g, condition ? a : b);
    a = valueOf(g, a);
    b = valueOf(g, b);
    return isAbsent(a) && isAbsent(b) ? missing([a, b]) : select(g, condition, a, b);
  },
};

for (const op of COMPARISONS) truth[op] = (g, a, b) => compare(g, op, valueOf(g, a), valueOf(g, b));

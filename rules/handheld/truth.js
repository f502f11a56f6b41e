/** How comparisons, conditionals and questions of absence become nodes, or are settled by the signature. */
import { Absent, COMPARISONS, Key, Node, Pair, missing } from "./values.js";

const settled = (value) => typeof value === "boolean";
const asNode = (g, value) => (settled(value) ? g.test("truth", [], [value]) : value);

export const both = (g, a, b) => g.test("and", [a, b]);
const not = (g, a) => g.test("not", [a]);
const codeIs = (g, codes, code) => g.test("code_is", [codes], [code]);
const known = (g, codes) => not(g, codeIs(g, codes, -1));

/** Whether a node has a value: true where that is certain. */
export const hasValue = (g, node) => (node.sure ? true : g.test("finite", [node]));

function valueOfBoth(g, { re, im }) {
  const a = hasValue(g, re), b = hasValue(g, im);
  return a === true ? b : b === true ? a : both(g, a, b);
}

function choiceCode(g, node, key) {
  const field = node.op === "slot" ? g.model.slots[node.extra[0]].field : g.model.columnField(...node.extra);
  return field.choices.findIndex((c) => c.key === key);
}

function compareKeys(g, op, a, b) {
  if (a instanceof Key && b instanceof Key) return (a.key === b.key) === (op === "eq");
  const [codes, { key }] = b instanceof Key ? [a, b] : [b, a];
  const same = codeIs(g, codes, choiceCode(g, codes, key));
  return op === "eq" ? same : both(g, known(g, codes), not(g, same));
}

function compare(g, op, a, b) {
  if (a instanceof Absent || b instanceof Absent) return false;
  if (a instanceof Key || b instanceof Key) return compareKeys(g, op, a, b);
  return g.test(op, settled(a) || settled(b) ? [asNode(g, a), asNode(g, b)] : [a, b]);
}

function either(g, a, b) {
  if (a === true || b === true) return true;
  return a === false ? b : b === false ? a : g.test("or", [a, b]);
}

function select(g, condition, a, b) {
  if (settled(condition)) return condition ? a : b;
  if (a instanceof Pair || b instanceof Pair) {
    [a, b] = [a, b].map((v) => (v instanceof Absent ? new Pair(v, v) : v instanceof Pair ? v : new Pair(v, g.number(0))));
    return new Pair(select(g, condition, a.re, b.re), select(g, condition, a.im, b.im));
  }
  if ([a, b].some((v) => settled(v) || (v instanceof Node && v.boolean))) {
    return g.test("select", [condition, ...[a, b].map((v) => asNode(g, v instanceof Absent ? false : v))]);
  }
  const sure = a instanceof Node && a.sure && b instanceof Node && b.sure;
  return g.node("select", [condition, ...[a, b].map((v) => (v instanceof Absent ? g.node("nothing", []) : v))], { sure });
}

export const truth = {
  in: (g, a, keys) => keys.reduce((result, key) => either(g, result, compare(g, "eq", g.value(a), new Key(key))), false),
  and(g, a, b) {
    a = g.condition(a);
    if (a === false) return false;
    b = g.condition(b);
    if (a === true || b === false) return b;
    return b === true ? a : both(g, a, b);
  },
  or: (g, a, b) => either(g, g.condition(a), g.condition(b)),
  not(g, a) {
    a = g.condition(a);
    return settled(a) ? !a : not(g, a);
  },
  given(g, a) {
    a = g.value(a);
    if (a instanceof Absent) return false;
    if (a instanceof Key || settled(a)) return true;
    if (a instanceof Pair) return valueOfBoth(g, a);
    return a.op === "slot" && g.model.slots[a.extra[0]].kind === "choice" ? known(g, a) : hasValue(g, a);
  },
  first_of(g, ...trees) {
    const lacking = [], options = [];
    for (const tree of trees) {
      const value = g.value(tree);
      if (value instanceof Absent) {
        lacking.push(value);
        continue;
      }
      options.push(value);
      if (value instanceof Pair ? value.re.sure && value.im.sure : !(value instanceof Node) || value.sure) break;
    }
    if (!options.length) return missing(lacking);
    return options.reduceRight((result, value) => select(g, value instanceof Pair ? valueOfBoth(g, value) : hasValue(g, value), value, result));
  },
  if(g, condition, a, b) {
    condition = g.condition(condition);
    if (settled(condition)) return g.value(condition ? a : b);
    a = g.value(a);
    b = g.value(b);
    return a instanceof Absent && b instanceof Absent ? missing([a, b]) : select(g, condition, a, b);
  },
};

for (const op of COMPARISONS) truth[op] = (g, a, b) => compare(g, op, g.value(a), g.value(b));

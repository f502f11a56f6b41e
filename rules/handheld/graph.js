/**
 * From a check's formula trees and one request's signature to a graph of plain operations: everything that depends on the signature alone
 * (conditionals on choices, `given`, `first_of`, absence) is settled here, once. A complex number is a pair of nodes; equal operations on
 * equal operands are one node.
 */
import { arithmetic } from "./arithmetic.js";
import { overAxes } from "./over-axes.js";
import { truth } from "./truth.js";
import { Absent, Key, NO_VALUE, Node } from "./values.js";

const leaves = {
  ref(g, name) {
    if (g.model.formulaNamed.has(name)) return g.formula(name);
    const index = g.model.slotIndex.get(name);
    if (index !== undefined) return slot(g, g.model.slots[index], index);
    const dot = name.indexOf(".");
    return column(g, name.slice(0, dot), name.slice(dot + 1));
  },
  const: (g, name) => g.node("constant", [], { extra: [name], sure: true }),
  key: (g, key) => new Key(key),
  pi: (g) => g.number(Math.PI),
  absent: () => NO_VALUE,
  true: () => true,
  false: () => false,
};

const FORMS = new Map(Object.entries({ ...leaves, ...arithmetic, ...truth, ...overAxes }));

function slot(g, declared, index) {
  const state = g.states[index];
  if (state === null || state === "a") return new Absent([declared.path]);
  if (declared.axis === null) {
    if (declared.kind === "choice") return new Key(state);
    if (declared.kind === "switch") return state;
    return g.node("slot", [], { extra: [index], axes: state === "u" ? g.samples : 0, sure: true });
  }
  const axes = g.bit(declared.axis) | (state === "U" || state === "V" ? g.samples : 0);
  return g.node("slot", [], { extra: [index], axes, boolean: declared.kind === "switch", sure: state === "L" || state === "U" });
}

/** A column of a table or of a catalogue: an array fixed in the bundle. */
function column(g, axis, name) {
  const values = g.model.column(axis, name), kind = g.model.columnKind(axis, name);
  if (values.every((v) => v === null)) return NO_VALUE;
  const sure = kind !== "number" || values.every((v) => v !== null);
  return g.node("column", [], { extra: [axis, name], axes: g.bit(axis), boolean: kind === "switch", sure });
}

/** The specialised graph of one check for one signature. */
export class Graph {
  /** @param model the CheckModel @param {Array} states the signature @param {Set<string>} filled the list axes that have an item */
  constructor(model, states, filled) {
    this.model = model;
    this.states = states;
    this.filled = filled;
    this.order = [...model.axes.map((a) => a.name), "samples"];
    this.samples = 1 << (this.order.length - 1);
    this.values = new Map();
    this.uniforms = 0;
    this.nodes = new Map();
  }

  /** The bit of an axis. */
  bit(axis) {
    return 1 << this.order.indexOf(axis);
  }

  /** Places in `order` of the axes in a set. */
  places(axes) {
    return this.order.map((_, k) => k).filter((k) => axes & (1 << k));
  }

  /** The node for this operation; the same one when asked again. */
  node(op, args, { extra = [], axes = args.reduce((all, a) => all | a.axes, 0), boolean = false, sure = false } = {}) {
    const key = `${op} ${axes} ${args.map((a) => a.index)} ${extra}`;
    let found = this.nodes.get(key);
    if (!found) this.nodes.set(key, (found = new Node(op, args, extra, axes, boolean, sure, this.nodes.size)));
    return found;
  }

  /** A constant of the mathematics, not of the trade. */
  number(value) {
    return this.node("number", [], { extra: [value], sure: true });
  }

  /** A boolean node. */
  test(op, args, extra = []) {
    return this.node(op, args, { extra, boolean: true, sure: true });
  }

  /** The value of a formula: Node, Pair, Absent, Key or boolean. */
  formula(name) {
    if (!this.values.has(name)) this.values.set(name, this.value(this.model.formulaNamed.get(name).tree));
    return this.values.get(name);
  }

  /** The value of an expression tree. */
  value(tree) {
    return typeof tree === "number" ? this.number(tree) : FORMS.get(tree[0])(this, ...tree.slice(1));
  }

  /** A condition: true, false or a boolean Node. What is absent is false. */
  condition(tree) {
    const value = this.value(tree);
    return value instanceof Absent ? false : value;
  }
}

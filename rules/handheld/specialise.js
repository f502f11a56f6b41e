/**
 * From a check's formula trees and one request's signature to a graph of plain operations: everything that depends on the signature alone
 * (conditionals on choices, `given`, `first_of`, absence) is settled here, once. Equal operations on equal operands are one node.
 */
import { arithmetic } from "./arithmetic.js";
import { bit, node, number, valueOf } from "./graph.js";
import { column, columnKind } from "./model.js";
import { overAxes } from "./over-axes.js";
import { truth } from "./truth.js";
import { NO_VALUE } from "./values.js";

/**
 * The graph of one check for one signature, with the values of its formulas by name.
 * @param model the CheckModel @param {Array} states the signature @param {Set<string>} filled the list axes that have an item
 */
export function specialised(model, states, filled) {
  const order = [...model.axes.map((a) => a.name), "samples"];
  const graph = { model, states, filled, order, forms, samples: 1 << (order.length - 1), uniforms: 0 };
  for (const kept of ["values", "nodes", "sets", "lacking"]) graph[kept] = new Map();
  for (const { name } of model.formulas) formula(graph, name);      // in dependency order, so that no recursion grows deep
  return graph;
}

function formula(g, name) {
  if (!g.values.has(name)) g.values.set(name, valueOf(g, g.model.formulaNamed.get(name).tree));
  return g.values.get(name);
}

function slot(g, { path, axis, kind }, index) {
  const state = g.states[index];
  if (state === null || state === "a") return { needs: [path] };
  if (axis === null && kind === "choice") return { key: state };
  if (axis === null && kind === "switch") return state;
  const sampled = axis === null ? state === "u" : state === "U" || state === "V", sure = axis === null || state === "L" || state === "U";
  return node(g, "slot", [], [index], (axis === null ? 0 : bit(g, axis)) | (sampled && g.samples), sure, kind === "switch");
}

/** A column of a table or of a catalogue: an array fixed in the bundle. */
function columnNode(g, axis, name) {
  const values = column(g.model, axis, name), kind = columnKind(g.model, axis, name), given = values.map((v) => v !== null);
  return given.includes(true) ? node(g, "column", [], [axis, name], bit(g, axis), kind !== "number" || !given.includes(false), kind === "switch") : NO_VALUE;
}

const forms = new Map(Object.entries({
  ref(g, name) {
    const { formulaNamed, slotIndex, slots } = g.model, index = slotIndex.get(name), dot = name.indexOf(".");
    if (formulaNamed.has(name)) return formula(g, name);
    return index === undefined ? columnNode(g, name.slice(0, dot), name.slice(dot + 1)) : slot(g, slots[index], index);
  },
  const: (g, name) => node(g, "constant", [], [name], 0, true),
  key: (g, key) => ({ key }),
  pi: (g) => number(g, Math.PI),
  absent: () => NO_VALUE,
  true: () => true,
  false: () => false,
  ...arithmetic,
  ...truth,
  ...overAxes,
}));

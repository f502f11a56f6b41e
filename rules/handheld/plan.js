/** One check compiled for one signature: the steps, and where in their results each part of the answer is found. */
import { compiled } from "./compile.js";
import { coverageEnds, evenEnds } from "./coverage.js";
import { bit, conditionOf } from "./graph.js";
import { axisFrom, fixedOrigins, isWeak } from "./model.js";
import { endsOfRows } from "./over-axes-steps.js";
import { specialised } from "./specialise.js";
import { isAbsent, isComplex, isKey, isNode, isSettled, sampledLeaves } from "./values.js";

const HIDDEN_AXES = ["count", "table"];

/**
 * Where a formula's value stands in the results: `place` is an index, `samples` that of its samples or null, `fixed` the value itself
 * where the signature settles it, `absent` an Absent, `hidden` the axes of a grid that is not reported.
 */
class Output {
  constructor(formula, units) {
    this.formula = formula;
    this.names = formula.names;
    this.factor = formula.unit ? units[formula.unit].factor : 1;
    this.place = this.imaginary = this.samples = this.fixed = this.absent = null;
    this.hidden = [];
    this.axes = [];
  }
}

/** Read through `live` (findings that can hold), `cautions`, `assumptions` and `outputs`. */
export class Plan {
  constructor(model, states, filled) {
    this.model = model;
    this.states = states;
    this.layouts = new Map();
    const graph = (this.graph = specialised(model, states, filled));
    this.wanted = [];
    this.places = new Map();
    this.ends = new Map();      // place of samples reported with an interval -> how its ends are found
    this.holding = model.findings.map((f) => ("when" in f ? conditionOf(graph, f.when) : true));
    this.live = this.holding.map((value, number) => [number, this.placeOf(value)]).filter(([, place]) => place !== false);
    const conditions = (list = []) => list.map(({ when }) => this.placeOf(when === undefined || when === null ? true : conditionOf(graph, when)));
    this.cautions = conditions(model.declared.cautions);
    this.assumptions = conditions(model.declared.assumptions);
    this.outputs = new Map(model.formulas.map((f) => [f.name, this.output(f)]));
    this.program = compiled(graph, this.wanted);
    this.uniformCount = this.program.uniforms.length;      // those that something reported rests on
    this.bases = new Map();
    this.sampled = states.map((_, i) => i).filter((i) => isSampled(model.slots[i], states[i]));
    this.exact = !this.program.arrays;
  }

  want(node, lane = "a") {
    const key = node.index + lane;
    if (!this.places.has(key)) this.places.set(key, this.wanted.push([node, lane]) - 1);
    return this.places.get(key);
  }

  placeOf(condition) {
    return isSettled(condition) ? condition : this.want(condition);
  }

  output(formula) {
    const { model, graph } = this, output = new Output(formula, model.bundle.units), value = graph.values.get(formula.name);
    if (isAbsent(value)) {
      output.absent = value;
    } else if (isSettled(value) || isKey(value)) {
      output.fixed = value.key ?? value;
    } else {
      const parts = isComplex(value) ? [value.re, value.im] : [value], axes = parts.reduce((all, p) => all | p.axes, 0);
      output.axes = model.axes.map((a) => a.name).filter((a) => axes & bit(graph, a));
      output.hidden = output.axes.filter((a) => HIDDEN_AXES.includes(axisFrom(model, a)));
      if (!output.hidden.length) this.place(output, parts, axes);
    }
    return output;
  }

  place(output, parts, axes) {
    const { formula } = output, { samples } = this.graph;
    if (formula.show === "hidden" && !this.model.mentioned.has(formula.name)) return;
    output.place = this.want(parts[0]);
    if (parts.length === 2) {
      output.imaginary = this.want(parts[1]);
    } else if (axes & samples && formula.show === "result" && !parts[0].boolean) {
      output.samples = this.want(parts[0], "s");
      this.ends.set(output.samples, axes === samples && sampledLeaves(parts[0], samples) === 1 ? evenEnds : coverageEnds);
    }
  }

  /** Place of samples -> [low, high] of every result reported with an interval; arrays where the result runs along axes. */
  intervals(results, drawn) {
    const found = new Map();
    this.ends.forEach((endsOf, place) => {
      const { data, sizes } = results[place], pairs = endsOfRows(data, (row) => endsOf(row, drawn)), rows = sizes.slice(0, -1);
      const part = (k) => ({ data: Float64Array.from(pairs, (p) => p[k]), sizes: rows });
      found.set(place, rows.length ? [part(0), part(1)] : pairs[0]);
    });
    return found;
  }

  /** {fixed: [name, record] of the unverified numbers of the bundle, slots} on which the conditions of findings 0..decided rest. */
  basis(decided) {
    if (this.bases.has(decided)) return this.bases.get(decided);
    const seen = new Set(), leaves = new Map(), queue = this.holding.slice(0, decided + 1).filter(isNode);
    while (queue.length) {
      const node = queue.pop();
      if (seen.has(node.index)) continue;
      seen.add(node.index);
      queue.push(...node.args);
      if (["slot", "constant", "column", "lookup"].includes(node.op)) leaves.set(written([node.op, ...node.extra]), [node.op, ...node.extra]);
    }
    const fixed = new Map(), slots = [];
    for (const key of [...leaves.keys()].sort()) {
      const leaf = leaves.get(key);
      if (leaf[0] === "slot" || leaf[1] === "curve") slots.push(leaf.at(-1));
      else fixedOrigins(this.model, leaf).filter(([, record]) => isWeak(this.model, record)).forEach(([name, record]) => fixed.set(name, record));
    }
    const basis = { fixed: [...fixed], slots };
    this.bases.set(decided, basis);
    return basis;
  }
}

/** Whether samples or an array are made from this slot: an uncertain number, or the column of a list. */
function isSampled(slot, state) {
  return slot.axis ? ["L", "U", "N", "V"].includes(state) : slot.kind === "number" && state === "u";
}

/** A leaf as text; the order of these texts is the order in which an answer lists what a verdict rests on. */
const written = (leaf) => `(${leaf.map((part) => (typeof part === "number" ? part : `'${part}'`)).join(", ")})`;

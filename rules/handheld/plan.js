/** One check compiled for one signature: the steps, and where in their results each part of the answer is found. */
import { compiled } from "./compile.js";
import { coverageEnds, evenEnds } from "./coverage.js";
import { bit, conditionOf } from "./graph.js";
import { axisFrom, fixedOrigins, isWeak } from "./model.js";
import { endsOfRows } from "./over-axes-steps.js";
import { specialised } from "./specialise.js";
import { isAbsent, isComplex, isKey, isNode, isSettled, sampledLeaves } from "./values.js";

const HIDDEN_AXES = ["count", "table"], NONE = [];
const LEAVES = ["slot", "constant", "column", "lookup"];

/**
 * The plan of a check for one signature: `run` and `uniforms` (compile.js), `live` (findings that can hold, with their places), `cautions` and
 * `assumptions` (true, false or a place), `outputs` by name of the formula, `sampled` (slots from which samples or arrays are made), `exact` (nothing
 * runs along an axis), `layouts` (kept by the answer writer), intervals(results, drawn) and basis(decided).
 *
 * An output says where a formula's value stands: `place` is an index, `samples` that of its samples or null, `fixed` the value itself where the
 * signature settles it, `absent` what is lacking, `hidden` the axes of a grid that is not reported.
 */
export function planOf(model, states, filled) {
  const graph = specialised(model, states, filled), { samples } = graph, wanted = [], places = new Map(), ends = [];

  function want(node, lane = "a") {
    const key = node.index + lane;
    if (!places.has(key)) places.set(key, wanted.push([node, lane]) - 1);
    return places.get(key);
  }

  const placeOf = (condition) => (isSettled(condition) ? condition : want(condition));
  const conditionAt = (when) => (when === undefined || when === null ? true : conditionOf(graph, when));
  const placesOf = (list = []) => list.map(({ when }) => placeOf(conditionAt(when)));

  function outputOf(formula) {
    const { name, names, unit, show } = formula, value = graph.values.get(name), factor = unit ? model.bundle.units[unit].factor : 1;
    const output = { formula, names, factor, place: null, imaginary: null, samples: null, fixed: null, absent: null, hidden: NONE, axes: NONE };
    if (isAbsent(value)) return Object.assign(output, { absent: value });
    if (isSettled(value) || isKey(value)) return Object.assign(output, { fixed: value.key ?? value });
    const [re, im] = isComplex(value) ? [value.re, value.im] : [value], axes = re.axes | (im ? im.axes : 0);
    if (axes & ~samples) {
      output.axes = model.axes.map((a) => a.name).filter((a) => axes & bit(graph, a));
      output.hidden = output.axes.filter((a) => HIDDEN_AXES.includes(axisFrom(model, a)));
    }
    if (output.hidden.length || (show === "hidden" && !model.mentioned.has(name))) return output;
    output.place = want(re);
    if (im) {
      output.imaginary = want(im);
    } else if (axes & samples && show === "result" && !re.boolean) {
      output.samples = want(re, "s");
      ends.push([output.samples, axes === samples && sampledLeaves(re, samples) === 1 ? evenEnds : coverageEnds]);
    }
    return output;
  }

  const holding = model.findings.map(({ when }) => conditionAt(when));
  const plan = {
    states,
    live: holding.map((value, number) => [number, placeOf(value)]).filter(([, place]) => place !== false),
    cautions: placesOf(model.declared.cautions),
    assumptions: placesOf(model.declared.assumptions),
    outputs: new Map(model.formulas.map((f) => [f.name, outputOf(f)])),
    sampled: [...states.keys()].filter((i) => isSampled(model.slots[i], states[i])),
    layouts: new Map(),
    basis: basisOf(model, newLeaves(holding)),
    /** Place of samples -> [low, high] of every result reported with an interval; arrays where the result runs along axes. */
    intervals: (results, drawn) => new Map(ends.map(([place, endsOf]) => {
      const { data, sizes } = results[place], pairs = endsOfRows(data, (row) => endsOf(row, drawn)), rows = sizes.slice(0, -1);
      return [place, rows.length ? [0, 1].map((k) => ({ data: Float64Array.from(pairs, (p) => p[k]), sizes: rows })) : pairs[0]];
    })),
  };
  Object.assign(plan, compiled(graph, wanted));
  wanted.length = 0;      // a plan is kept, its nodes need not be
  return plan;
}

/** For each condition the leaves it rests on and no earlier one does: [text, [op, ...extra]]. The nodes themselves need not be kept. */
function newLeaves(conditions) {
  const seen = new Set();
  return conditions.map((condition) => {
    const queue = isNode(condition) ? [condition] : [], leaves = [];
    for (const { index, op, args, extra } of queue) {
      if (seen.has(index)) continue;
      seen.add(index);
      queue.push(...args);
      if (LEAVES.includes(op)) leaves.push([written([op, ...extra]), [op, ...extra]]);
    }
    return leaves;
  });
}

/** basis(decided): {fixed: [name, record] of the unverified numbers of the bundle, slots} on which the conditions of findings 0..decided rest. */
function basisOf(model, leaves) {
  const bases = new Map();
  return (decided) => {
    if (!bases.has(decided)) {
      const fixed = new Map(), slots = [], all = new Map(leaves.slice(0, decided + 1).flat());
      for (const key of [...all.keys()].sort()) {
        const leaf = all.get(key);
        if (leaf[0] === "slot" || leaf[1] === "curve") slots.push(leaf.at(-1));
        else fixedOrigins(model, leaf).filter(([, record]) => isWeak(model, record)).forEach(([name, record]) => fixed.set(name, record));
      }
      bases.set(decided, { fixed: [...fixed], slots });
    }
    return bases.get(decided);
  };
}

/** Whether samples or an array are made from this slot: an uncertain number, or the column of a list. */
function isSampled(slot, state) {
  return slot.axis ? ["L", "U", "N", "V"].includes(state) : slot.kind === "number" && state === "u";
}

/** A leaf as text; the order of these texts is the order in which an answer lists what a verdict rests on. */
const written = (leaf) => `(${leaf.map((part) => (typeof part === "number" ? part : `'${part}'`)).join(", ")})`;

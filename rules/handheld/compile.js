/**
 * From a specialised graph to closures: one step for each operation, on registers for single numbers and typed arrays for what runs along axes.
 *
 * Every node that depends on samples has two lanes: "a", the plain formula at the best estimates, and "s", an array over the point set.
 */
import { placesIn } from "./graph.js";
import { apply, at, axisAt, constantPlace, give, input, isCorrected, numberOf, place, register } from "./machine.js";
import { axisFrom, axisSize, columnArray, constant } from "./model.js";
import { overAxesSteps } from "./over-axes-steps.js";
import { POINTS } from "./points.js";

const OF_SAMPLES = ["share", "mean", "low_end", "high_end"];

const upTo = (n) => Float64Array.from({ length: n }, (_, i) => i);

function leaf(p, { op, extra: [first, second] }, lane, out) {
  const { model } = p.graph;
  switch (op) {
    case "number": return constantPlace(p, first);
    case "constant": return constantPlace(p, constant(model, first).value);
    case "truth": return constantPlace(p, +first);
    case "nothing": return constantPlace(p, NaN);
    case "slot": return input(p, out(), (request) => request[lane === "a" ? "values" : "sampled"][first]);
    case "size": return input(p, out(), ({ sizes }) => sizes.get(first));
    case "column": return Object.assign(out(), { d: columnArray(model, first, second) });
    case "place": return axisFrom(model, first) === "list" ? input(p, out(), ({ sizes }) => upTo(sizes.get(first)))
      : Object.assign(out(), { d: upTo(axisSize(model, first)) });
    default: return null;
  }
}

/** The place of the coordinates on which an unknown is drawn. */
const coordinates = (p, unknown) => input(p, place([axisAt(p, "samples")]), ({ uniforms }) => uniforms[p.uniforms.indexOf(unknown)]);

/** The place of a node's value in a lane, and the steps that compute it. */
function emit(p, node, lane) {
  const { graph } = p, places = placesIn(graph, lane === "s" ? node.axes : node.axes & ~graph.samples), { op, args, extra, boolean } = node;
  const made = () => (places.length ? place(places, boolean) : register(p, 0, boolean)), found = args.length ? null : leaf(p, node, lane, made);
  if (found) return found;
  const out = made();
  if (overAxesSteps[op]) {
    overAxesSteps[op](p, node, out, lane);
    return out;
  }
  const operands = args.map((a) => at(p, a, lane));
  if (op === "code_is") operands.push(constantPlace(p, extra[0]));
  if (op === "indicator" && !operands[1]) operands.push(constantPlace(p, 1));
  if (op === "uniform") operands.push(lane === "a" ? constantPlace(p, 0.5) : coordinates(p, extra[0]));
  apply(p, op === "code_is" ? "eq" : op, operands, out);
  return out;
}

/** [node, lane] of all that has to be computed, operands first. */
function neededFor(p, wanted) {
  const found = [], queue = [...wanted];
  for (const [node, lane] of queue) {
    const number = numberOf(p, node, lane), { op, args } = node;
    if (found[number]) continue;
    found[number] = [node, number % 2 ? "s" : "a"];
    // A corrected share reads the sides of its comparison, and sees by itself where they have no value.
    const operands = op === "share" && isCorrected(p, args[0]) ? [args[0], ...args[0].args] : args, asked = OF_SAMPLES.includes(op) ? "s" : found[number][1];
    for (const a of operands) queue.push([a, asked]);
  }
  return found.filter(Boolean);
}

/** Say after which step each pooled array may be given back: when nothing still needed reads it. */
function markSpent(steps, results) {
  const last = new Map();
  for (const one of steps) {
    for (const from of one.reads) if (last.has(from)) last.set(from, one);
    if (one.made) last.set(one.made, one);
  }
  last.forEach((one, from) => { if (!results.has(from)) (one.spent ??= []).push(from); });
}

/**
 * The compiled program of a set of [node, lane] wanted by the answer: {exact: whether nothing runs along an axis, uniforms: numbers of the unknowns it
 * rests on, run}. run({values, sampled, uniforms, drawn, sizes}) gives one value for each [node, lane] wanted: a number, a boolean, or
 * {data, sizes}, good until the next run.
 */
export function compiled(graph, wanted) {
  const { model, order } = graph;
  const p = { graph, used: 0, constants: new Map(), found: [], ends: new Map(), steps: [], inputs: [], borrowed: [], version: 0 };
  p.size = order.map((axis) => (axis === "samples" ? POINTS : axisFrom(model, axis) === "list" ? 0 : axisSize(model, axis)));
  const needed = neededFor(p, wanted), lists = order.slice(0, -1).flatMap((axis, k) => (axisFrom(model, axis) === "list" ? [[axis, k]] : []));
  const uniforms = needed.filter(([{ op }, lane]) => op === "uniform" && lane === "s").map(([node]) => node.extra[0]);
  p.uniforms = [...new Set(uniforms)].sort((a, b) => a - b);
  p.S = new Float64Array(needed.length * 2 + 9);
  for (const [node, lane] of needed) p.found[numberOf(p, node, lane)] = emit(p, node, lane);
  const results = wanted.map(([node, lane]) => at(p, node, lane)), truths = wanted.map(([node]) => node.boolean), { S, size, steps, inputs, borrowed } = p;
  const kept = new Set(results);
  markSpent(steps, kept);
  const lent = steps.map(({ made }) => made).filter((made) => kept.has(made)), work = steps.map(({ run }) => run), after = steps.map(({ spent }) => spent);
  p.found = p.constants = p.steps = graph.nodes = graph.values = null;      // a plan is kept: it holds on to nothing but its steps
  return {
    exact: !needed.some(([node]) => node.axes),
    uniforms: p.uniforms,
    run(request) {
      for (const from of lent) if (from.d) give(from.d);
      for (const [axis, k] of lists) {
        const now = request.sizes.get(axis);
        if (size[k] !== now) p.version++;
        size[k] = now;
      }
      p.drawn = request.drawn;
      for (const read of inputs) read(request);
      for (let i = 0; i < work.length; i++) {
        work[i]();
        if (after[i]) for (const from of after[i]) give(from.d);
        while (borrowed.length) give(borrowed.pop());
      }
      return results.map(({ k, d, places }, i) => (k < 0 ? { data: d, sizes: places.map((q) => size[q]) } : truths[i] ? S[k] !== 0 : S[k]));
    },
  };
}

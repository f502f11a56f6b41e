/**
 * From a specialised graph to closures: one step for each operation, on registers for single numbers and typed arrays for what runs along axes.
 *
 * Every node that depends on samples has two lanes: "a", the plain formula at the best estimates, and "s", an array over the point set.
 */
import { KERNELS, SCALARS } from "./elementwise.js";
import { overAxesSteps } from "./over-axes-steps.js";
import { POINTS } from "./points.js";
import { Shapes } from "./shapes.js";
import { sampledLeaves } from "./values.js";

const SIDED = ["lt", "le", "gt", "ge"];      // comparisons whose probability can be corrected by the difference of their sides
const OF_SAMPLES = ["share", "mean", "low_end", "high_end"];

const pools = [new Map(), new Map()];

/** An array of `size` numbers or truth values, from the pool. */
export function take(size, boolean) {
  return pools[+boolean].get(size)?.pop() ?? (boolean ? new Uint8Array(size) : new Float64Array(size));
}

function give(array) {
  const pool = pools[array instanceof Uint8Array ? 1 : 0], kept = pool.get(array.length);
  if (kept) kept.push(array);
  else pool.set(array.length, [array]);
}

/** Where a value stands: `places` of its axes, and the register `k` of a single number or the array `d` of the present run. */
class Place {
  constructor(places, boolean, k) {
    this.places = places;
    this.boolean = boolean;
    this.k = k;
    this.d = null;
  }
}

/** The compiled steps for a set of [node, lane] wanted by the answer. Run with `run(values, sampled, uniforms, drawn, sizes)`. */
export class Program {
  constructor(graph, wanted) {
    this.graph = graph;
    this.model = graph.model;
    this.shapes = new Shapes(graph.order.map((axis) => (axis === "samples" ? POINTS : graph.model.axisFrom(axis) === "list" ? 0 : graph.model.axisSize(axis))));
    this.lists = graph.model.axes.filter((a) => a.from === "list").map((a) => [a.name, graph.order.indexOf(a.name)]);
    const needed = this.needed(wanted);
    this.arrays = needed.some(([node]) => node.axes);
    this.uniforms = [...new Set(needed.filter(([n, lane]) => n.op === "uniform" && lane === "s").map(([n]) => n.extra[0]))].sort((a, b) => a - b);
    this.S = new Float64Array(needed.length * 2 + 16);
    this.used = 0;
    this.constants = new Map();
    this.found = new Map();
    this.steps = [];
    this.reads = [];      // for each step, the places it reads
    this.made = [];       // for each step, the place whose array it takes from the pool
    this.inputs = [];
    for (const [node, lane] of needed) this.found.set(node.index + lane, this.emit(node, lane));
    this.results = wanted.map(([node, lane]) => this.at(node, lane));
    this.spent = this.spentAfter();
    this.lent = [];
  }

  // ---- what is needed ----

  lane(node, lane) {
    return node.axes & this.graph.samples ? lane : "a";
  }

  needed(wanted) {
    const found = new Map(), queue = wanted.map(([n, lane]) => [n, this.lane(n, lane)]);
    while (queue.length) {
      const [node, lane] = queue.pop(), key = node.index + lane;
      if (found.has(key)) continue;
      found.set(key, [node, lane]);
      const inner = OF_SAMPLES.includes(node.op) ? "s" : lane;
      for (const a of this.operands(node)) queue.push([a, this.lane(a, inner)]);
    }
    return [...found.values()].sort(([a, x], [b, y]) => a.index - b.index || (x < y ? -1 : 1));
  }

  /** The nodes this one reads. A corrected share reads the sides of its comparison, and sees by itself where they have no value. */
  operands(node) {
    return node.op === "share" && this.isCorrected(node.args[0]) ? [node.args[0], ...node.args[0].args] : node.args;
  }

  isCorrected(condition) {
    return SIDED.includes(condition.op) && sampledLeaves(condition, this.graph.samples) !== 1;
  }

  at(node, lane) {
    return this.found.get(node.index + this.lane(node, lane));
  }

  // ---- places and steps ----

  register(value) {
    this.S[this.used] = value;
    return new Place([], false, this.used++);
  }

  constant(value) {
    if (!this.constants.has(value)) this.constants.set(value, this.register(value));
    return this.constants.get(value);
  }

  /** A new place for a node's value in a lane. */
  place(node, lane) {
    const places = this.graph.places(lane === "s" ? node.axes : node.axes & ~this.graph.samples);
    return places.length ? new Place(places, node.boolean, -1) : Object.assign(this.register(0), { boolean: node.boolean });
  }

  step(run, reads, made = null) {
    this.steps.push(run);
    this.reads.push(reads);
    this.made.push(made);
  }

  emit(node, lane) {
    const leaf = this.leaf(node, lane);
    if (leaf) return leaf;
    const out = this.place(node, lane), special = overAxesSteps[node.op];
    if (special) special(this, node, lane, out);
    else this.elementwise(node, lane, out);
    return out;
  }

  leaf(node, lane) {
    const [first, second] = node.extra, place = () => this.place(node, lane);
    switch (node.op) {
      case "number": return this.constant(first);
      case "constant": return this.constant(this.model.constant(first).value);
      case "truth": return Object.assign(this.register(+first), { boolean: true });
      case "nothing": return this.constant(NaN);
      case "slot": return this.input(place(), (out, run) => this.put(out, run[lane === "a" ? "values" : "sampled"][first]));
      case "size": return this.input(place(), (out, run) => this.put(out, run.sizes.get(first)));
      case "column": return Object.assign(place(), { d: this.model.columnArray(first, second) });
      case "place": {
        const upTo = (n) => Float64Array.from({ length: n }, (_, i) => i);
        if (this.model.axisFrom(first) === "list") return this.input(place(), (out, run) => this.put(out, upTo(run.sizes.get(first))));
        return Object.assign(place(), { d: upTo(this.model.axisSize(first)) });
      }
      default: return null;
    }
  }

  input(out, read) {
    this.inputs.push([out, read]);
    return out;
  }

  put(out, value) {
    if (out.k < 0) out.d = value;
    else this.S[out.k] = value;
  }

  elementwise(node, lane, out) {
    let { op } = node;
    const operands = node.args.map((a) => this.at(a, lane));
    if (op === "code_is") {
      op = "eq";
      operands.push(this.constant(node.extra[0]));
    } else if (op === "indicator") {
      if (operands.length < 2) operands.push(this.constant(1));
    } else if (op === "uniform") {
      operands.push(lane === "a" ? this.constant(0.5) : this.coordinates(node.extra[0]));
    }
    this.apply(op, operands, out);
  }

  coordinates(unknown) {
    const out = new Place([this.graph.order.length - 1], false, -1), place = this.uniforms.indexOf(unknown);
    return this.input(out, (_, run) => { out.d = run.uniforms[place]; });
  }

  /** A step that applies an operation number by number. */
  apply(op, operands, out) {
    if (!out.places.length) {
      this.step(SCALARS[op](this.S, out.k, ...operands.map((o) => o.k)), operands);
      return;
    }
    const loops = this.loops(KERNELS[op], operands, out.places), starts = operands.map((o) => Math.max(o.k, 0)), { S, shapes } = this;
    this.step(() => {
      out.d = take(shapes.total(out.places), out.boolean);
      loops()(out.d, operands.map((o) => o.d ?? S), starts);
    }, operands, out);
  }

  /** The loops of a kernel for the sizes of the present run. */
  loops(kernel, operands, places) {
    return this.perSizes(() => this.shapes.nest(kernel, places, operands.map((o) => o.places)));
  }

  /** What depends on the sizes alone, made anew when they change. */
  perSizes(make) {
    let version = -1, made;
    return () => {
      if (version !== this.shapes.version) {
        version = this.shapes.version;
        made = make();
      }
      return made;
    };
  }

  /** A place for an array that only the next step reads. */
  temporary(places) {
    return new Place(places, false, -1);
  }

  /** The points of a curve, as the present request gives them. */
  curve(slot) {
    const out = this.temporary([]);
    return this.input(out, (_, run) => { out.d = run.values[slot]; });
  }

  /** For the sizes of the present run: where each element along `to` stands in an array along `from`. */
  offsets(from, to) {
    return this.perSizes(() => this.shapes.offsets(from, to));
  }

  /** The numbers of a place as an array that runs along `places`: its own where it already does. */
  along(place, places) {
    if (place.places.length === places.length && place.places.every((p, i) => p === places[i])) return () => place.d ?? this.S.subarray(place.k, place.k + 1);
    const loops = this.loops(KERNELS.copy, [place], places), start = [Math.max(place.k, 0)];
    return () => {
      const out = new (place.boolean ? Uint8Array : Float64Array)(this.shapes.total(places));
      loops()(out, [place.d ?? this.S], start);
      return out;
    };
  }

  /** [places to give back after step 0, 1, ...]: arrays that nothing still needed reads. */
  spentAfter() {
    const last = new Map();
    this.made.forEach((place, i) => { if (place) last.set(place, i); });
    this.reads.forEach((places, i) => places.forEach((p) => { if (last.has(p)) last.set(p, i); }));
    this.results.forEach((place) => last.delete(place));
    const spent = this.steps.map(() => []);
    last.forEach((i, place) => spent[i].push(place));
    return spent;
  }

  // ---- running ----

  /** One value for each [node, lane] wanted: a number, a boolean, or {data, sizes}, good until the next run. */
  run(values, sampled, uniforms, drawn, sizes) {
    const { S, steps, spent, inputs, shapes } = this, run = { values, sampled, uniforms, sizes };
    for (const array of this.lent) give(array);
    this.lent = [];
    for (const [axis, place] of this.lists) shapes.set(place, sizes.get(axis));
    this.drawn = drawn;
    for (const [out, read] of inputs) read(out, run);
    for (let i = 0; i < steps.length; i++) {
      steps[i]();
      for (const place of spent[i]) give(place.d);
    }
    for (const place of new Set(this.made)) if (place && this.results.includes(place)) this.lent.push(place.d);
    return this.results.map((place) => (place.k < 0 ? { data: place.d, sizes: place.places.map((p) => shapes.size[p]) } : place.boolean ? S[place.k] !== 0 : S[place.k]));
  }
}

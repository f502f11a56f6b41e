/** The steps of operations along axes: op -> (program, node, lane, out). */
import { coverageEnds, evenEnds, share } from "./coverage.js";
import { foldSum } from "./exact-math.js";
import { REDUCTIONS, atExtreme, placeOf, ranked, running, spreadOnto } from "./kernels.js";
import { POINTS } from "./points.js";
import { sampledLeaves } from "./values.js";

const rowsOf = (shapes, places) => shapes.total(places);

/** Places of the axes a node's argument runs along in a lane. */
const axesIn = (program, axes, lane) => program.graph.places(lane === "s" ? axes : axes & ~program.graph.samples);

/** Sets a step that computes one number for each element of `out`. */
function each(program, reads, out, compute) {
  program.step(() => {
    const next = compute();
    if (out.k >= 0) {
      program.S[out.k] = next(0);
      return;
    }
    out.d = new (out.boolean ? Uint8Array : Float64Array)(program.shapes.total(out.places));
    for (let i = 0; i < out.d.length; i++) out.d[i] = next(i);
  }, reads);
}

/** Places of the reduced axes as written, and of those that are kept. */
function split(program, axes, lane, names) {
  const reduced = names.map((a) => program.graph.order.indexOf(a));
  return { reduced, kept: axesIn(program, axes, lane).filter((p) => !reduced.includes(p)) };
}

function reduction(program, node, lane, out) {
  const argument = program.at(node.args[0], lane), axis = program.graph.order.indexOf(node.extra[0]), { shapes } = program;
  const places = [...new Set([...argument.places, axis])].sort((a, b) => a - b), at = places.indexOf(axis), data = program.along(argument, places);
  program.step(() => {
    const made = new (out.boolean ? Uint8Array : Float64Array)(shapes.total(out.places));
    REDUCTIONS[node.op](made, data(), shapes.total(places.slice(0, at)), shapes.size[axis], shapes.total(places.slice(at + 1)));
    if (out.k < 0) out.d = made;
    else program.S[out.k] = made[0];
  }, [argument]);
}

function extreme(program, node, lane, out) {
  const [key, x] = node.args.map((a) => program.at(a, lane)), axis = program.graph.order.indexOf(node.extra[0]), { shapes } = program;
  const places = [...out.places, axis], keys = program.along(key, places), values = program.along(x, places);
  const plain = !out.places.length && key.places.length && x.places.length, sign = node.op === "at_least" ? 1 : -1;
  program.step(() => {
    const made = new Float64Array(shapes.total(out.places));
    atExtreme(made, keys(), values(), made.length, shapes.size[axis], sign, plain);
    if (out.k < 0) out.d = made;
    else program.S[out.k] = made[0];
  }, [key, x]);
}

/** Both ends of an interval are found once, whichever of them is asked for. */
function ends(program, node, out, part) {
  const argument = program.at(node.args[0], "s"), key = `ends ${node.args[0].index}`;
  const even = node.args[0].axes === program.graph.samples && sampledLeaves(node.args[0], program.graph.samples) === 1;
  let found = program.found.get(key);
  if (!found) {
    program.found.set(key, (found = { pairs: null }));
    program.step(() => {
      found.pairs = endsOfRows(argument.d, (row) => (even ? evenEnds(row) : coverageEnds(row, program.drawn)));
    }, [argument]);
  }
  each(program, [], out, () => (i) => found.pairs[i][part]);
}

/** [low, high] of each row of samples. */
export function endsOfRows(data, endsOf) {
  return Array.from({ length: data.length / POINTS }, (_, r) => endsOf(data.subarray(r * POINTS, (r + 1) * POINTS)));
}

export const overAxesSteps = {
  any: reduction,
  all: reduction,
  count: reduction,
  sum: reduction,
  least: reduction,
  greatest: reduction,
  at_least: extreme,
  at_greatest: extreme,
  low_end: (program, node, lane, out) => ends(program, node, out, 0),
  high_end: (program, node, lane, out) => ends(program, node, out, 1),
  mean(program, node, lane, out) {
    const argument = program.at(node.args[0], "s");
    each(program, [argument], out, () => (r) => foldSum(argument.d, r * POINTS, POINTS) / POINTS);
  },
  share(program, node, lane, out) {
    const [condition] = node.args, holds = program.at(condition, "s"), row = (x, r) => x.subarray(r * POINTS, (r + 1) * POINTS);
    if (program.isCorrected(condition)) {
      const sides = condition.args.map((a) => program.at(a, "s")), difference = program.temporary(holds.places);
      program.apply("sub", sides, difference);
      const positive = condition.op === "gt" || condition.op === "ge";
      each(program, [holds, difference], out, () => (r) => share(row(holds.d, r), row(difference.d, r), positive, program.drawn));
      return;
    }
    const known = node.args.length > 1 ? program.at(node.args[1], "s") : program.constant(1), everywhere = program.along(known, holds.places);
    each(program, [holds, known], out, () => {
      const certain = everywhere();
      return (r) => {
        let count = 0;
        for (let i = r * POINTS; i < (r + 1) * POINTS; i++) {
          if (!certain[i]) return NaN;
          count += holds.d[i];
        }
        return count / POINTS;
      };
    });
  },
  lookup(program, node, lane, out) {
    const argument = program.at(node.args[0], lane), look = program.model.lookup(node.extra);
    const curve = node.extra[0] === "curve" ? program.curve(node.extra[1]) : { d: look.data };
    each(program, [argument], out, () => (argument.k < 0 ? (i) => look.read(argument.d[i], curve.d) : () => look.read(program.S[argument.k], curve.d)));
  },
  ranking(program, node, lane, out) {
    const { reduced, kept } = split(program, node.axes, lane, node.extra), places = [...kept, ...reduced], { shapes } = program;
    const [x, weight] = node.args.map((a) => program.at(a, lane)), xs = program.along(x, places), weights = program.along(weight, places);
    out.places = kept;
    program.step(() => { out.ranked = ranked(xs(), weights(), rowsOf(shapes, kept), shapes.total(reduced)); }, [x, weight]);
  },
  quantile(program, node, lane, out) {
    const [ranking, asked] = node.args.map((a) => program.at(a, lane)), { reduced } = split(program, 0, lane, node.extra);
    const rows = program.offsets(ranking.places, out.places), shares = program.along(asked, out.places);
    each(program, [asked], out, () => {
      const { x, sums } = ranking.ranked, n = program.shapes.total(reduced), row = rows(), wanted = shares();
      return (i) => {
        const place = placeOf(sums, row[i], n, wanted[i]), last = x[row[i] * n + n - 1];      // an absent value sorts last
        return place < 0 || last !== last ? NaN : x[row[i] * n + place];
      };
    });
  },
  share_place(program, node, lane, out) {
    const [weight, asked] = node.args.map((a) => program.at(a, lane)), { reduced } = split(program, 0, lane, node.extra);
    const kept = weight.places.filter((p) => !reduced.includes(p)), weights = program.along(weight, [...kept, ...reduced]);
    const rows = program.offsets(kept, out.places), shares = program.along(asked, out.places);
    each(program, [weight, asked], out, () => {
      const n = program.shapes.total(reduced), sums = running(weights(), program.shapes.total(kept), n), row = rows(), wanted = shares();
      return (i) => placeOf(sums, row[i], n, wanted[i]);
    });
  },
  at_place(program, node, lane, out) {
    const [x, place] = node.args.map((a) => program.at(a, lane)), { reduced } = split(program, 0, lane, node.extra);
    const kept = x.places.filter((p) => !reduced.includes(p)), xs = program.along(x, [...kept, ...reduced]);
    const rows = program.offsets(kept, out.places), read = program.along(place, out.places);
    each(program, [x, place], out, () => {
      const n = program.shapes.total(reduced), values = xs(), row = rows(), at = read();
      return (i) => (at[i] < 0 ? NaN : values[row[i] * n + at[i]]);
    });
  },
  spread_onto(program, node, lane, out) {
    const [onto, ...names] = node.extra, target = program.graph.order.indexOf(onto), { shapes } = program;
    const [position, weight] = node.args.map((a) => program.at(a, lane)), { reduced } = split(program, 0, lane, names);
    const kept = out.places.filter((p) => p !== target), places = [...kept, ...reduced];
    const positions = program.along(position, places), weights = program.along(weight, places), from = program.offsets([...kept, target], out.places);
    program.step(() => {
      const made = spreadOnto(positions(), weights(), shapes.total(kept), shapes.total(reduced), shapes.size[target]), place = from();
      out.d = made.map((_, i) => made[place[i]]);
    }, [position, weight]);
  },
};

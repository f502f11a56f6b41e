/** The steps of operations along axes: op -> (program, node, out, lane). */
import { along, apply, at, axisAt, input, isCorrected, perSizes, place, step, take } from "./machine.js";
import { coverageEnds, evenEnds, share } from "./coverage.js";
import { foldSum } from "./exact-math.js";
import { REDUCTIONS, atExtreme, placeOf, ranked, running, spreadOnto } from "./kernels.js";
import { lookupOf } from "./model.js";
import { POINTS } from "./points.js";
import { offsets, total } from "./shapes.js";
import { sampledLeaves } from "./values.js";

/** The samples of row r. */
const row = (data, r) => data.subarray(r * POINTS, (r + 1) * POINTS);

/** [low, high] of each row of samples. */
export const endsOfRows = (data, endsOf) => Array.from({ length: data.length / POINTS }, (_, r) => endsOf(row(data, r)));

/** A step that fills an array for `out`: filler(array). */
function fill(p, reads, out, filler) {
  if (out.k >= 0) {
    const single = new Float64Array(1);
    step(p, reads, () => {
      filler(single);
      p.S[out.k] = single[0];
    });
    return;
  }
  step(p, reads, () => {
    out.d = take(total(p.size, out.places), out.boolean);
    filler(out.d);
  }, out);
}

/** A step that computes one number for each element of `out`; compute() gives the function of its place. */
const each = (p, reads, out, compute) => fill(p, reads, out, (made) => {
  const next = compute();
  for (let i = 0; i < made.length; i++) made[i] = next(i);
});

const placesOf = (p, names) => names.map((axis) => axisAt(p, axis));
const without = (places, reduced) => places.filter((q) => !reduced.includes(q));
const offsetsOf = (p, from, to) => perSizes(p, (size) => offsets(size, from, to));

function reduction(p, { op, args, extra }, out, lane) {
  const argument = at(p, args[0], lane), [axis] = placesOf(p, extra), places = [...new Set([...argument.places, axis])].sort((a, b) => a - b);
  const k = places.indexOf(axis), data = along(p, argument, places), of = (some) => total(p.size, some);
  fill(p, [argument], out, (made) => REDUCTIONS[op](made, data(), of(places.slice(0, k)), p.size[axis], of(places.slice(k + 1))));
}

const extreme = (sign) => (p, { args, extra }, out, lane) => {
  const [key, x] = args.map((a) => at(p, a, lane)), [axis] = placesOf(p, extra), places = [...out.places, axis];
  const keys = along(p, key, places), values = along(p, x, places), plain = !out.places.length && key.places.length && x.places.length;
  fill(p, [key, x], out, (made) => atExtreme(made, keys(), values(), made.length, p.size[axis], sign, plain));
};

/** Both ends of an interval are found once, whichever of them is asked for. */
const end = (part) => (p, { args: [x] }, out) => {
  const argument = at(p, x, "s"), { samples } = p.graph, even = x.axes === samples && sampledLeaves(x, samples) === 1;
  let found = p.ends.get(x.index);
  if (!found) {
    p.ends.set(x.index, (found = {}));
    step(p, [argument], () => { found.pairs = endsOfRows(argument.d, (row) => (even ? evenEnds(row) : coverageEnds(row, p.drawn))); });
  }
  each(p, [], out, () => (i) => found.pairs[i][part]);
};

export const overAxesSteps = {
  any: reduction,
  all: reduction,
  count: reduction,
  sum: reduction,
  least: reduction,
  greatest: reduction,
  at_least: extreme(1),
  at_greatest: extreme(-1),
  low_end: end(0),
  high_end: end(1),
  mean(p, { args: [x] }, out) {
    const argument = at(p, x, "s");
    each(p, [argument], out, () => (r) => foldSum(argument.d, r * POINTS, POINTS) / POINTS);
  },
  share(p, { args: [condition, known] }, out) {
    const holds = at(p, condition, "s"), { op, args } = condition;
    if (isCorrected(p, condition)) {
      const difference = place(holds.places);
      apply(p, "sub", args.map((a) => at(p, a, "s")), difference);
      each(p, [holds, difference], out, () => (r) => share(row(holds.d, r), row(difference.d, r), op[0] === "g", p.drawn));
      return;
    }
    const certain = known && at(p, known, "s"), everywhere = certain ? along(p, certain, holds.places) : () => null;
    each(p, [holds, ...(certain ? [certain] : [])], out, () => {
      const all = everywhere();
      return (r) => (all && row(all, r).includes(0) ? NaN : row(holds.d, r).reduce((count, h) => count + h, 0) / POINTS);
    });
  },
  lookup(p, { args, extra }, out, lane) {
    const argument = at(p, args[0], lane), [read, data] = lookupOf(p.graph.model, extra), xs = along(p, argument, argument.places);
    const points = data ? { d: data } : input(p, place([]), ({ values }) => values[extra[1]]);
    each(p, [argument], out, () => {
      const x = xs();
      return (i) => read(x[i], points.d);
    });
  },
  ranking(p, { args, extra }, out, lane) {
    const reduced = placesOf(p, extra), places = [...out.places, ...reduced], [x, weight] = args.map((a) => at(p, a, lane));
    const xs = along(p, x, places), weights = along(p, weight, places);
    step(p, [x, weight], () => { out.ranked = ranked(xs(), weights(), total(p.size, out.places), total(p.size, reduced)); });
  },
  quantile(p, { args, extra }, out, lane) {
    const [ranking, asked] = args.map((a) => at(p, a, lane)), rows = offsetsOf(p, ranking.places, out.places), shares = along(p, asked, out.places);
    each(p, [asked], out, () => {
      const { x, sums } = ranking.ranked, n = total(p.size, placesOf(p, extra)), from = rows(), wanted = shares();
      return (i) => {
        const found = placeOf(sums, from[i], n, wanted[i]), last = x[from[i] * n + n - 1];      // an absent value sorts last
        return found < 0 || last !== last ? NaN : x[from[i] * n + found];
      };
    });
  },
  share_place(p, { args, extra }, out, lane) {
    const [weight, asked] = args.map((a) => at(p, a, lane)), reduced = placesOf(p, extra), kept = without(weight.places, reduced);
    const weights = along(p, weight, [...kept, ...reduced]), rows = offsetsOf(p, kept, out.places), shares = along(p, asked, out.places);
    each(p, [weight, asked], out, () => {
      const n = total(p.size, reduced), sums = running(weights(), total(p.size, kept), n), from = rows(), wanted = shares();
      return (i) => placeOf(sums, from[i], n, wanted[i]);
    });
  },
  at_place(p, { args, extra }, out, lane) {
    const [x, found] = args.map((a) => at(p, a, lane)), reduced = placesOf(p, extra), kept = without(x.places, reduced);
    const xs = along(p, x, [...kept, ...reduced]), rows = offsetsOf(p, kept, out.places), places = along(p, found, out.places);
    each(p, [x, found], out, () => {
      const n = total(p.size, reduced), values = xs(), from = rows(), read = places();
      return (i) => (read[i] < 0 ? NaN : values[from[i] * n + read[i]]);
    });
  },
  spread_onto(p, { args, extra }, out, lane) {
    const [onto, ...reduced] = placesOf(p, extra), [position, weight] = args.map((a) => at(p, a, lane)), kept = without(out.places, [onto]);
    const places = [...kept, ...reduced], positions = along(p, position, places), weights = along(p, weight, places);
    const rows = offsetsOf(p, [...kept, onto], out.places);
    each(p, [position, weight], out, () => {
      const made = spreadOnto(positions(), weights(), total(p.size, kept), total(p.size, reduced), p.size[onto]), from = rows();
      return (i) => made[from[i]];
    });
  },
};

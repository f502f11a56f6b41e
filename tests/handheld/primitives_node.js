/** node primitives_node.js RUNTIME FOLDER: reads doubles that Python wrote, computes with the runtime, prints where bits differ as JSON. */
import { readFileSync } from "node:fs";
import { dirname, join } from "node:path";
import { pathToFileURL } from "node:url";

const [runtimePath, folder] = process.argv.slice(2), runtimeFolder = dirname(runtimePath);
const module = (name) => import(pathToFileURL(join(runtimeFolder, name)));
const { exp, ln, sin, cos, normalScore, foldSum } = await module("exact-math.js");
const { coverageEnds, evenEnds, share } = await module("coverage.js");
const { PointSet, POINTS } = await module("points.js");

function doubles(name) {
  const bytes = readFileSync(join(folder, name));
  return new Float64Array(bytes.buffer.slice(bytes.byteOffset, bytes.byteOffset + bytes.length));
}

function hex(x) {
  const view = new DataView(new ArrayBuffer(8));
  view.setFloat64(0, x);
  return view.getBigUint64(0).toString(16).padStart(16, "0");
}

const report = {};

/** `same` is Object.is: every NaN is one value, but 0 and -0 are two. */
function compare(name, ours, theirs, asked, same = Object.is) {
  const differing = [];
  let count = 0;
  theirs.forEach((expected, i) => {
    if (same(ours[i], expected)) return;
    if (count++ < 5) differing.push({ at: i, asked: asked?.(i), python: hex(expected), javascript: hex(ours[i]) });
  });
  if (ours.length !== theirs.length) differing.push({ lengths: [ours.length, theirs.length] });
  report[name] = { count: theirs.length, differing: count, examples: differing };
}

for (const [name, one] of Object.entries({ exp, ln, sin, cos, normal_score: normalScore })) {
  const x = doubles(`${name}.x`);
  compare(name, x.map(one), doubles(`${name}.y`), (i) => `${x[i]} = ${hex(x[i])}`);
}

// Sums: lengths, then all terms one after another; each is summed where it lies and again from a copy of its own.
const lengths = doubles("fold_sum.n"), terms = doubles("fold_sum.x"), sums = doubles("fold_sum.y"), apart = [], inPlace = [];
let start = 0;
for (const n of lengths) {
  inPlace.push(foldSum(terms, start, n));
  apart.push(foldSum(terms.slice(start, start + n)));
  start += n;
}
compare("fold_sum", inPlace, sums, (i) => `${lengths[i]} terms`);
compare("fold_sum of a copy", apart, sums, (i) => `${lengths[i]} terms`);

// Samples on the fixed points: a case per line of cases.json, the samples one after another. Ends come from sorting, which has no order for 0 and -0.
const equal = (a, b) => a === b || (a !== a && b !== b);
const { components, cases } = JSON.parse(readFileSync(join(folder, "cases.json")));
const points = new PointSet(components), samples = doubles("samples.x");
const rows = cases.map((_, k) => samples.subarray(k * POINTS, (k + 1) * POINTS));
const caseOf = (i) => JSON.stringify(cases[i >> 1]);
compare("ends", cases.flatMap(({ forms }, k) => coverageEnds(rows[k], points.drawn(forms))), doubles("ends.y"), caseOf, equal);
compare("even ends", cases.flatMap((_, k) => evenEnds(rows[k])), doubles("even.y"), caseOf, equal);
compare("share", cases.flatMap(({ forms }, k) => {
  const holds = (test) => Uint8Array.from(rows[k], (v) => (test(v) ? 1 : 0)), drawn = points.drawn(forms);
  return [share(holds((v) => v > 0), rows[k], true, drawn), share(holds((v) => v < 0), rows[k], false, drawn)];
}), doubles("share.y"), caseOf);
const across = components.map((_, d) => d);
for (const form of "urn") {
  compare(`coordinates ${form}`, across.flatMap((d) => Array.from(points.coordinates(form, d))), doubles(`coordinates.${form}`));
}
console.log(JSON.stringify(report));

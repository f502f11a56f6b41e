/**
 * node start_node.js RUNTIME BUNDLE SEAL KEYS QUESTION: a process that has run nothing yet opens the bundle (digest, seal), proves its cases and
 * asks an uncertain question; then it does it all again, as a process that is warm. Prints the milliseconds of every part as JSON.
 */
import { readFileSync } from "node:fs";
import { pathToFileURL } from "node:url";

const [runtimePath, ...paths] = process.argv.slice(2), [bundle, seal, keys, question] = paths.map((path) => new Uint8Array(readFileSync(path)));
const { check, body } = JSON.parse(new TextDecoder().decode(question));
const begun = performance.now(), { openBundle, prove, oneOfEach } = await import(pathToFileURL(runtimePath)), imported = performance.now() - begun;

async function timed(name, work, times) {
  const start = performance.now(), made = await work();
  times[name] = performance.now() - start;
  return made;
}

async function once() {
  const times = {}, ruleSet = await timed("open", () => openBundle(bundle, { seal, trust: keys }), times);
  const short = await timed("short_proof", () => prove(ruleSet, undefined, oneOfEach(ruleSet)), times);
  const full = await timed("full_proof", () => prove(ruleSet), times);
  if (short.wrong.length || full.wrong.length) throw new Error(JSON.stringify(full.wrong));
  await timed("first_uncertain", () => ruleSet.answer(check, body), times);
  for (let i = 0; i < 15; i++) ruleSet.answer(check, body);
  const start = performance.now();
  for (let i = 0; i < 20; i++) ruleSet.answer(check, body);
  times.uncertain = (performance.now() - start) / 20;
  return { ...times, proved: full.of };
}

const cold = await once();
let warm;
for (let i = 0; i < 5; i++) warm = await once();
console.log(JSON.stringify({ imported, cold, warm }));

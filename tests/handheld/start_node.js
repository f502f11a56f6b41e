/**
 * node start_node.js RUNTIME BUNDLE SEAL KEYS WHAT [QUESTION]: in a process that has run nothing yet, what a start or a question takes; then
 * the same again once the engine is warm. WHAT: "first" opens the bundle (digest, seal) and proves all its cases, "later" opens it and proves one
 * case of each check, as every start but the first does, "ask" asks a question of a bundle that is open. Prints {cold, warm} in milliseconds as JSON.
 */
import { readFileSync } from "node:fs";
import { dirname, join } from "node:path";
import { pathToFileURL } from "node:url";

const WARM_RUNS = 12;
const [runtimePath, bundlePath, sealPath, keysPath, what, questionPath] = process.argv.slice(2);
const [bundle, seal, keys] = [bundlePath, sealPath, keysPath].map((path) => new Uint8Array(readFileSync(path)));
const { openBundle, prove } = await import(pathToFileURL(runtimePath));
const { oneOfEach } = await import(pathToFileURL(join(dirname(runtimePath), "proof.js")));

const opened = () => openBundle(bundle, { seal, trust: keys });
async function started() {
  const ruleSet = await opened(), { of, wrong } = what === "first" ? prove(ruleSet) : prove(ruleSet, undefined, oneOfEach(ruleSet));
  const expected = what === "first" ? ruleSet.data.cases.length : ruleSet.checkNames.length;
  if (of !== expected || wrong.length) throw new Error(`${of} of ${expected} proved, wrong: ${JSON.stringify(wrong)}`);
}

let work = started;
if (what === "ask") {
  const ruleSet = await opened(), { check, body } = JSON.parse(readFileSync(questionPath));
  work = () => ruleSet.answer(check, body);
}
const times = [];
for (let i = 0; i <= WARM_RUNS; i++) {
  const begun = performance.now();
  await work();
  times.push(performance.now() - begun);
}
const warm = times.slice(-WARM_RUNS / 2).sort((a, b) => a - b);
console.log(JSON.stringify({ cold: times[0], warm: warm[warm.length >> 1] }));

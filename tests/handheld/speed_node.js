/**
 * node speed_node.js RUNTIME BUNDLE SETS: answers commands, one JSON per line, with one JSON per line.
 * {"set": name, "repeat": n} runs a set of questions n times -> milliseconds in all.
 */
import { readFileSync } from "node:fs";
import { createInterface } from "node:readline";
import { pathToFileURL } from "node:url";

const [runtimePath, bundlePath, setsPath] = process.argv.slice(2);
const { RuleSet } = await import(pathToFileURL(runtimePath));
const ruleSet = new RuleSet(new Uint8Array(readFileSync(bundlePath)));
const sets = JSON.parse(readFileSync(setsPath));
for await (const line of createInterface({ input: process.stdin })) {
  const { set, repeat } = JSON.parse(line), questions = sets[set], start = performance.now();
  for (let i = 0; i < repeat; i++) for (const { check, body } of questions) ruleSet.answer(check, body, "en");
  console.log(JSON.stringify(performance.now() - start));
}

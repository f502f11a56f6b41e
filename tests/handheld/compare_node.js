/** node compare_node.js RUNTIME BUNDLE QUESTIONS: compares in Node and prints the report as JSON. */
import { createHash } from "node:crypto";
import { createReadStream, readFileSync } from "node:fs";
import { createInterface } from "node:readline";
import { pathToFileURL } from "node:url";
import { Comparison } from "./compare.js";

const [runtimePath, bundlePath, questionsPath] = process.argv.slice(2);
const runtime = await import(pathToFileURL(runtimePath));
const ruleSet = new runtime.RuleSet(new Uint8Array(readFileSync(bundlePath)));
const comparison = new Comparison(runtime, ruleSet, (text) => createHash("sha256").update(text).digest("hex"));
for await (const line of createInterface({ input: createReadStream(questionsPath) })) await comparison.take(line);
console.log(JSON.stringify(comparison.report()));

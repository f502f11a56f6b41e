/**
 * node native.mjs APP BASE QUESTION CHANGED: the guide's native part in a context that has the language and what such an app has: console, a timer, a
 * clock, and a fetch that hands over no streams. Prints what it did as JSON. CHANGED ("True"): the bundle is altered on its way.
 */
import { createRequire } from "node:module";
import { writeFile } from "node:fs/promises";
import { join } from "node:path";
import { createContext, runInContext } from "node:vm";

const { build } = createRequire(new URL("tools/package.json", import.meta.url))("esbuild");
const [app, base, question, changed] = process.argv.slice(2);
const GLOBALS = ["TextDecoder", "TextEncoder", "atob", "btoa", "crypto", "document", "process", "window"];

// The part of the app that calls the guide's: it keeps files in a map.
await writeFile(join(app, "app.js"), `
import { keeperOf } from "./precontact.js";
const kept = new Map();
const files = {
  read: async (name) => kept.get(name),
  write: async (name, bytes) => { kept.set(name, bytes.slice()); },
  remove: async (name) => { kept.delete(name); },
  list: async () => [...kept.keys()],
};
globalThis.asked = async (base, question) => {
  const { state, reason } = await keeperOf(files, base).update();
  if (state !== "installed") return { update: { state, reason } };
  const { ruleSet, proof } = await keeperOf(files, "").start();
  return { update: { state, reason }, proof, answer: ruleSet.answer("loading-error", question, "en") };
};
`);
const options = { bundle: true, write: false, format: "iife", platform: "neutral", mainFields: ["module", "main"], target: "es2022", absWorkingDir: app, logLevel: "error" };
const bundled = async (name) => (await build({ ...options, entryPoints: [join(app, name)] })).outputFiles[0].text;

async function fetched(address, { headers }) {
  const response = await fetch(address, { headers }), content = new Uint8Array(await response.arrayBuffer());
  if (changed === "True" && address.endsWith("/1.0.0.json")) content[content.length >> 1] ^= 1;
  return { ok: response.ok, status: response.status, headers: response.headers, arrayBuffer: async () => content.buffer };
}

const context = createContext({ console, setTimeout, performance: { now: () => performance.now() }, fetch: fetched });
const missing = GLOBALS.filter((name) => runInContext(`typeof ${name} === "undefined"`, context));
runInContext(await bundled("app.js"), context);
const report = await runInContext(`asked(${JSON.stringify(base)}, ${question})`, context);
console.log(JSON.stringify({ missing, ...report }));

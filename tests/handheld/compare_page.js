/** Runs in the browser: fetches the questions piece by piece, compares, and posts the report. It must get by with a strict policy. */
import * as runtime from "/runtime/index.js";
import { Comparison } from "/harness/compare.js";

const violations = [];
document.addEventListener("securitypolicyviolation", ({ violatedDirective, blockedURI, sourceFile }) => {
  violations.push(`${violatedDirective} ${blockedURI} ${sourceFile}`);
});

async function sha256(text) {
  const bytes = new Uint8Array(await crypto.subtle.digest("SHA-256", new TextEncoder().encode(text)));
  return Array.from(bytes, (b) => b.toString(16).padStart(2, "0")).join("");
}

async function report() {
  const ruleSet = new runtime.RuleSet(new Uint8Array(await (await fetch("/bundle")).arrayBuffer()));
  const comparison = new Comparison(runtime, ruleSet, sha256);
  for (let piece = 0; ; piece++) {
    const lines = (await (await fetch(`/questions/${piece}`)).text()).split("\n").filter(Boolean);
    if (!lines.length) return { ...comparison.report(), violations };
    for (const line of lines) await comparison.take(line);
  }
}

const body = JSON.stringify(await report().catch((error) => ({ failed: String(error.stack) })));
await fetch("/report", { method: "POST", body });

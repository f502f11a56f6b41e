/** node compare_chromium.js CHROMIUM RUNTIME BUNDLE QUESTIONS: compares in headless Chromium and prints the report as JSON. */
import { readFile } from "node:fs/promises";
import { dirname } from "node:path";
import { reported } from "./browser.js";

const PIECE = 500;      // questions fetched at once
const [browserPath, runtimePath, bundlePath, questionsPath] = process.argv.slice(2);
const lines = (await readFile(questionsPath, "utf8")).split("\n").filter(Boolean);
console.log(JSON.stringify(await reported(browserPath, dirname(runtimePath), "compare_page.js", {
  "/bundle": () => readFile(bundlePath),
  "/questions/": (_, piece) => lines.slice(piece * PIECE, (+piece + 1) * PIECE).join("\n"),
})));

/** node speed_chromium.js CHROMIUM RUNTIME BUNDLE SETS: medians in headless Chromium, at full speed and slowed down four times, as JSON. */
import { readFile } from "node:fs/promises";
import { dirname } from "node:path";
import { reported } from "./browser.js";

const [browserPath, runtimePath, bundlePath, setsPath] = process.argv.slice(2);
const answers = { "/bundle": () => readFile(bundlePath), "/sets.json": () => readFile(setsPath) };
const measured = async (rate) => (await reported(browserPath, dirname(runtimePath), "speed_page.js", answers, async (page) => {
  await (await page.context().newCDPSession(page)).send("Emulation.setCPUThrottlingRate", { rate });
})).times;
console.log(JSON.stringify({ full: await measured(1), slowed: await measured(4) }));

/**
 * A glance at the field page at an address: node glance.mjs CHROMIUM ADDRESS. What the browser refused or failed to do, whether the page's files are
 * kept, and one answer, as JSON.
 */
import { chromium } from "./tools/node_modules/playwright-core/index.mjs";
import { Typist } from "./keyboard.mjs";
import { QUESTIONS } from "./questions.mjs";

const [browserPath, base] = process.argv.slice(2);
const [{ check, steps }] = QUESTIONS;
const seen = { outside: [], violations: [], errors: [] };
const browser = await chromium.launch({ executablePath: browserPath, args: ["--no-sandbox", "--disable-dev-shm-usage"] });
const context = await browser.newContext({ viewport: { width: 360, height: 740 }, locale: "en-GB" });
context.setDefaultTimeout(60_000);
context.on("request", (request) => request.url().startsWith(base) || seen.outside.push(request.url()));
await context.addInitScript(() => {
  globalThis.violations = [];
  addEventListener("securitypolicyviolation", (event) => globalThis.violations.push(`${event.violatedDirective} ${event.blockedURI}`));
});
const page = await context.newPage();
page.on("pageerror", (error) => seen.errors.push(error.stack));
page.on("console", (message) => message.type() === "error" && seen.errors.push(message.text()));
await page.goto(base);
await page.waitForSelector(".check-card");
await page.waitForFunction(() => document.querySelector("footer").textContent.includes("opens without a network"));
await page.evaluate((to) => (location.hash = to), `#/check/${check}`);
await page.waitForSelector("form");
const typist = new Typist(page);
for (const [pointer, how] of steps) await typist.fill(pointer, how);
await typist.press("Answer");
await page.waitForSelector(".verdict");
seen.heading = await page.textContent("h1");
seen.policy = (await page.request.get(base)).headers()["content-security-policy"];
seen.violations.push(...(await page.evaluate(() => globalThis.violations)));
await browser.close();
process.stdout.write(JSON.stringify(seen));

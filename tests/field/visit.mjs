/**
 * One visit to the field page, at phone size and by keyboard: node visit.mjs CHROMIUM PYTHON FOLDER [PICTURES]
 *
 * First online; then the server's process is killed, the page reloaded, and everything else happens without a network. What was seen is
 * printed as JSON: the tests read it. PICTURES is a folder for screenshots of every view.
 */
import { spawn } from "node:child_process";
import { once } from "node:events";
import fs from "node:fs";
import path from "node:path";
import { chromium } from "./tools/node_modules/playwright-core/index.mjs";
import { Barriers } from "./barriers.mjs";
import { Typist } from "./keyboard.mjs";
import { QUESTIONS } from "./questions.mjs";

const [browserPath, python, folder, pictures] = process.argv.slice(2);
const PHONE = { width: 360, height: 740 },
  PATIENCE = 60_000;
const seen = { outside: [], violations: [], errors: [], answers: {}, exported: {}, focus: {}, barriers: [] };

const server = spawn(python, [path.join(import.meta.dirname, "serve.py"), folder], { stdio: ["ignore", "pipe", "ignore"] });
process.on("exit", () => server.kill("SIGKILL"));
const base = String((await once(server.stdout, "data"))[0]).trim();

const browser = await chromium.launch({ executablePath: browserPath, args: ["--no-sandbox", "--disable-dev-shm-usage"] });
const context = await browser.newContext({ viewport: PHONE, locale: "en-GB", acceptDownloads: true });
context.setDefaultTimeout(PATIENCE);
context.on("request", (request) => {
  if (!/^(blob|data):/.test(request.url()) && !request.url().startsWith(base)) seen.outside.push(request.url());
});
await context.addInitScript(() => {
  globalThis.violations = [];
  addEventListener("securitypolicyviolation", (event) => globalThis.violations.push(`${event.violatedDirective} ${event.blockedURI}`));
});
const page = await context.newPage(),
  typist = new Typist(page),
  barriers = new Barriers(page, seen.barriers, pictures);
page.on("pageerror", (error) => seen.errors.push(error.stack));

const home = () => page.waitForSelector(".check-card");
const footer = () => page.textContent("footer");
const kept = () => page.waitForFunction(() => document.querySelector("footer").textContent.includes("opens without a network"));
const notices = () => page.textContent("#notices");

async function open(hash, selector) {
  await page.evaluate((to) => (location.hash = to), hash);
  await page.waitForSelector(selector);
}

/** The browser, put in front of the page again: a new document, with no network if there is none. */
async function reload() {
  seen.violations.push(...(await page.evaluate(() => globalThis.violations)));
  await open("#/", ".check-card");
  await page.reload();
  await home();
}

async function rewritten(name, change) {
  const file = path.join(folder, "field", name);
  fs.writeFileSync(file, change(fs.readFileSync(file, "utf8")));
}

// On a device that has nothing yet, a bundle that was changed on the way is refused in words; then all is well again.
const bundle = fs.readFileSync(path.join(folder, "field/rule-set/1.0.0.json"));
await rewritten("rule-set/1.0.0.json", (text) => text.replace("Loading error", "Loading terro"));
const bare = await browser.newContext({ viewport: PHONE, locale: "es-ES" }),
  refusing = await bare.newPage();
await refusing.goto(base);
await refusing.waitForSelector("main button");
seen.refused = await refusing.textContent("main");
fs.writeFileSync(path.join(folder, "field/rule-set/1.0.0.json"), bundle);
const later = new Date(Date.now() + 60_000); // a plain server tells two states apart by the second
fs.utimesSync(path.join(folder, "field/rule-set/1.0.0.json"), later, later);
await refusing.click("main button");
await refusing.waitForSelector(".check-card");
await bare.close();

// Online.
await page.goto(base);
seen.opening = await page.textContent("h1");
await home();
await kept();
seen.footer = await footer();
seen.developmentNotice = await notices();

await rewritten("rule-set/latest.json", (text) =>
  JSON.stringify({
    ...JSON.parse(text),
    deprecated: "2031-02-03",
    sunset: "2032-02-03",
    because: { en: "A better one is out.", es: "Hay uno mejor." },
  }),
);
await open("#/rule-set", "text=Look for a newer one");
await typist.press("Look for a newer one");
await page.waitForFunction(() => document.getElementById("notices").textContent.includes("deprecated"));
seen.retirementNotice = await notices();
seen.focusAfterUpdate = (await typist.focused()).id;
seen.updateText = await page.textContent("main .update");

await rewritten("texts-en.js", (text) =>
  text.replace("Before the probe touches: which question?", "Before the probe touches anything: which question?"),
);
await reload();
await page.waitForFunction(() => document.getElementById("notices").textContent.includes("newer version of this page"));
seen.headingBeforeRenewal = await page.textContent("h1");
await typist.press("Open it");
await page.waitForFunction(() => document.querySelector("h1")?.textContent.includes("touches anything"));
await home();

// The server's process is killed: from here on nothing answers at this address.
server.kill("SIGKILL");
await once(server, "exit");
seen.serverAnswers = await fetch(base).then(
  () => true,
  () => false,
);
await reload();
await kept();
seen.offlineFooter = await footer();

for (const { check, steps } of QUESTIONS) {
  await open("#/", ".check-card");
  await typist.reach((at) => at.href === `#/check/${check}`, check);
  await page.keyboard.press("Enter");
  await page.waitForSelector("form");
  await typist.reach((at) => at.tag === "H1" || at.tag === "INPUT", "the form");
  for (const [pointer, how] of steps) await typist.fill(pointer, how);
  await typist.reach((at) => at.id === "point-name", "the name");
  await page.keyboard.type(`Panel of ${check}`);
  await barriers.look(`filled-${check}`);
  await typist.press("Answer");
  await page.waitForSelector(".verdict").catch(async () => {
    throw new Error(`${check}: ${await page.textContent(".summary")}`);
  });
  await page.waitForFunction(() => document.activeElement?.tagName === "H1");
  seen.focus[check] = await page.evaluate(() => document.activeElement.textContent);
  await barriers.look(`answer-${check}`);
  const download = page.waitForEvent("download");
  await typist.press("Save as a file");
  seen.exported[check] = JSON.parse(fs.readFileSync(await (await download).path(), "utf8"));
}

// What is wrong is said at its field and in a summary that leads there.
await open("#/check/loading-error", "form");
await typist.press("Empty the form");
await typist.fill("/circuit", { option: "thevenin" });
await typist.fill("/source/voltage_volt", "1,000");
await typist.fill("/source/resistance_ohm", "-5");
await typist.press("Answer");
await page.waitForSelector(".summary a");
seen.summary = await page.evaluate(() => ({
  focused: document.activeElement.className,
  rows: [...document.querySelectorAll(".summary a")].map((link) => link.textContent),
}));
await barriers.look("faults");
await page.keyboard.press("Tab");
await page.keyboard.press("Enter");
seen.led = await page.evaluate(() => {
  const at = document.activeElement;
  return {
    id: at.id,
    invalid: at.getAttribute("aria-invalid"),
    described: at
      .getAttribute("aria-describedby")
      .split(" ")
      .map((id) => document.getElementById(id)?.textContent)
      .join(" "),
  };
});
await reload();
await open("#/check/loading-error", "form");
seen.draftAfterReload = await page.inputValue('[id="at/source/voltage_volt"]');

// Every view in every light and both languages.
const point = await page.evaluate(async () => (await (await import("./points.js")).all()).find(({ check }) => check === "loading-error").id);
for (const language of ["en", "es"]) {
  for (const light of ["light", "dark", "sun"]) {
    await page.evaluate(
      ([chosen, as]) => {
        localStorage.setItem("precontact-language", chosen);
        localStorage.setItem("precontact-light", as);
      },
      [language, light],
    );
    await reload();
    const named = (name) => `${name}-${light}-${language}`;
    seen[`lang-${language}`] = await page.getAttribute("html", "lang");
    await barriers.look(named("checks"));
    await open("#/check/loading-error", "form");
    await page.click("button.primary");
    await page.waitForSelector(".summary a");
    await barriers.look(named("faults"));
    seen[`rows-${language}`] = await page.evaluate(() => [...document.querySelectorAll(".summary a")].map((link) => link.textContent));
    await open(`#/answer/${point}`, ".verdict");
    await barriers.openAll();
    await barriers.look(named("answer"));
    await open("#/recent", ".point");
    await page.evaluate(() => (document.querySelector(".sure").hidden = false));
    await barriers.look(named("recent"));
    await open("#/rule-set", ".basis");
    await barriers.look(named("rule-set"));
  }
}

// Large digits for gloves: the prefix is picked beside the number.
await page.evaluate(() => {
  localStorage.clear();
  localStorage.setItem("precontact-keypad", "digits");
});
await reload();
await open("#/check/loading-error", "form");
await typist.press("Empty the form");
await typist.fill("/circuit", { option: "thevenin" });
await typist.fill("/source/resistance_ohm", "4.7");
await typist.pick("/source/resistance_ohm", "prefix", "k");
seen.digits = await page.evaluate(() => ({
  keypad: document.getElementById("at/source/resistance_ohm").inputMode,
  read: document.getElementById("at/source/resistance_ohm:read").textContent,
}));
await barriers.look("large-digits");
await page.evaluate(() => localStorage.clear());
await reload();

// Recent test points: reopened, deleted one by one and all.
const points = () => page.evaluate(async () => (await (await import("./points.js")).all()).map(({ name }) => name));
seen.pointsKept = await points();
await open("#/recent", ".point");
await typist.reach((at) => at.label?.startsWith("Change the question: Panel of loop-shift"), "the point of loop-shift");
await page.keyboard.press("Enter");
await page.waitForSelector("form");
seen.reopened = await page.inputValue('[id="at/instrument/burden_resistance_ohm"]');
await open("#/recent", ".point");
await typist.reach((at) => at.label?.startsWith("Delete: Panel of loop-shift"), "deleting the point of loop-shift");
await page.keyboard.press("Enter");
await page.waitForFunction(() => document.getElementById("status").textContent === "Deleted.");
seen.pointsAfterOne = await points();
await typist.press("Delete all");
await typist.press("Yes, delete all");
await page.waitForFunction(() => document.getElementById("status").textContent === "All deleted.");
seen.pointsAfterAll = await points();

seen.violations.push(...(await page.evaluate(() => globalThis.violations)));
await browser.close();
process.stdout.write(JSON.stringify(seen));

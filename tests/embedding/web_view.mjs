/** node web_view.mjs BROWSER FOLDER QUESTIONS: what the page of an app's assets says to a native side that asks it these questions, as JSON. */
import { createServer } from "node:http";
import { readFile } from "node:fs/promises";
import { createRequire } from "node:module";
import { extname, join, normalize } from "node:path";

const { chromium } = createRequire(new URL("tools/package.json", import.meta.url))("playwright-core");
const [browserPath, folder, questions] = process.argv.slice(2);
const TYPES = { ".html": "text/html", ".js": "text/javascript", ".json": "application/json" };

// What loads assets into a web view: nothing but files of the folder.
const loader = createServer(async ({ url }, response) => {
  const path = normalize(decodeURIComponent(new URL(url, "http://assets").pathname));
  try {
    const content = await readFile(join(folder, path));
    response.writeHead(200, { "Content-Type": TYPES[extname(path)] ?? "application/octet-stream" }).end(content);
  } catch {
    response.writeHead(404).end();
  }
});
await new Promise((ready) => loader.listen(0, "127.0.0.1", ready));
const origin = `http://localhost:${loader.address().port}`, browser = await chromium.launch({ executablePath: browserPath, args: ["--no-sandbox", "--disable-dev-shm-usage"] });
try {
  const page = await browser.newPage(), heard = [];
  let more = () => {};
  const faults = [];
  page.on("pageerror", (error) => faults.push(error.message));
  page.on("console", (message) => { if (message.type() === "error" && !message.text().includes("favicon")) faults.push(message.text()); });
  page.on("request", (request) => { if (!request.url().startsWith(origin)) faults.push(`left the app: ${request.url()}`); });
  await page.exposeFunction("toNative", (text) => {
    heard.push(JSON.parse(text));
    more();
  });
  await page.addInitScript(() => { window.precontact = { postMessage: (text) => window.toNative(text) }; });
  const next = async (count) => {
    while (heard.length < count) await new Promise((resolve) => { more = resolve; });
  };
  await page.goto(`${origin}/index.html`);
  await next(1);
  for (const [k, question] of JSON.parse(questions).entries()) {
    await page.evaluate((text) => window.postMessage(text), JSON.stringify(question));
    await next(k + 2);
  }
  if (faults.some((fault) => !fault.includes("404"))) throw new Error(faults.join("\n"));
  console.log(JSON.stringify(heard));
} finally {
  await browser.close();
  loader.close();
}

/** What the browser scripts share: a static server with a strict content security policy, and a headless Chromium. */
import { createServer } from "node:http";
import { readFile } from "node:fs/promises";
import { dirname, extname, join, normalize } from "node:path";
import { fileURLToPath } from "node:url";
import { createRequire } from "node:module";

const HARNESS = dirname(fileURLToPath(import.meta.url));
const { chromium } = createRequire(join(HARNESS, "tools", "package.json"))("playwright-core");
const TYPES = { ".js": "text/javascript", ".json": "application/json", ".html": "text/html" };
/** No inline script, no eval, no text that becomes code, nothing from elsewhere. */
const POLICY = "default-src 'none'; script-src 'self'; connect-src 'self'; base-uri 'none'; form-action 'none'; require-trusted-types-for 'script'";
/** Only a page that is isolated from others may read the time finely. */
const ISOLATED = { "Cross-Origin-Opener-Policy": "same-origin", "Cross-Origin-Embedder-Policy": "require-corp" };

/** Serve /runtime/ and /harness/ from folders, and what `answers` has: {path: (request body, rest of the path) => text or bytes}. */
async function served(runtimeFolder, answers) {
  const folders = { runtime: runtimeFolder, harness: HARNESS };
  const server = createServer(async (request, response) => {
    const { pathname } = new URL(request.url, "http://localhost"), [, first, ...rest] = pathname.split("/");
    try {
      let body = "";
      for await (const part of request) body += part;
      const made = answers[pathname] ?? answers[`/${first}/`];
      const content = made ? await made(body, rest.join("/")) : await readFile(join(folders[first], normalize(rest.join("/"))));
      const type = TYPES[extname(pathname)] ?? "application/octet-stream";
      response.writeHead(200, { "Content-Type": type, "Content-Security-Policy": POLICY, "Cache-Control": "no-store", ...ISOLATED });
      response.end(content);
    } catch (error) {
      response.writeHead(404).end(String(error));
    }
  });
  await new Promise((ready) => server.listen(0, "127.0.0.1", ready));
  const close = () => new Promise((done) => {
    server.close(done);
    server.closeAllConnections();
  });
  return { origin: `http://localhost:${server.address().port}`, close };
}

/** Open a page that runs one module of this folder; resolves to what the module posts to /report. `prepare(page)` comes before. */
export async function reported(browserPath, runtimeFolder, module, answers = {}, prepare = async () => {}) {
  let arrived, failed;
  const report = new Promise((resolve, reject) => { arrived = resolve; failed = reject; });
  const site = await served(runtimeFolder, {
    "/index.html": () => `<!doctype html><title>comparison</title><script type="module" src="/harness/${module}"></script>`,
    "/report": (body) => { arrived(JSON.parse(body)); return ""; },
    ...answers,
  });
  const browser = await chromium.launch({ executablePath: browserPath, args: ["--no-sandbox", "--disable-dev-shm-usage"] });
  try {
    const page = await browser.newPage();
    page.on("pageerror", (error) => failed(error));
    page.on("requestfailed", (request) => failed(new Error(`${request.url()} ${request.failure().errorText}`)));
    page.on("response", (response) => {
      if (!response.ok() && !response.url().endsWith("/favicon.ico")) failed(new Error(`${response.status()} ${response.url()}`));
    });
    page.on("crash", () => failed(new Error("the page crashed")));
    await prepare(page);
    await page.goto(`${site.origin}/index.html`);
    return { ...await report, browser: browser.version() };
  } finally {
    await browser.close();
    await site.close();
  }
}

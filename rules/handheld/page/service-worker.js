/**
 * Keeps the page and its runtime on the device, so that both open with no network. One cache holds one state of all files; its name is the digest of
 * what it holds, and one small record says which cache is served. A newer state is gathered whole before that record changes, so that modules of two
 * states are never mixed. Rule sets are not kept here: the runtime's Keeper verifies and keeps those.
 */
const ROOTS = [
  "./",
  "style.css",
  "shell.js",
  "bench.js",
  "manifest.webmanifest",
  "icons/icon.svg",
  "icons/icon-192.png",
  "icons/icon-512.png",
  "icons/icon-maskable-512.png",
];
const PREFIX = "precontact-page-",
  POINTER = "precontact-pointer",
  HOME = registration.scope;
const IMPORTED = /\b(?:from|import)\s*\(?\s*["'](\.[^"']+\.js)["']/g;

/** Fetch every file: the roots, and what modules import, found by reading them. */
async function gathered() {
  const files = new Map(),
    open = ROOTS.map((root) => new URL(root, HOME).href);
  while (open.length) {
    const batch = open.splice(0).filter((address) => !files.has(address));
    await Promise.all(
      batch.map(async (address) => {
        if (files.has(address)) return;
        files.set(address, null);
        const response = await fetch(address, { cache: "no-cache", credentials: "same-origin" });
        if (!response.ok || response.redirected) throw new Error(`${address} answered ${response.status}`);
        const bytes = await response.arrayBuffer();
        files.set(address, { bytes, headers: kept(response.headers) });
        if (address.endsWith(".js"))
          for (const [, path] of new TextDecoder().decode(bytes).matchAll(IMPORTED)) open.push(new URL(path, address).href);
      }),
    );
  }
  return files;
}

/** The headers that a kept file needs: how to read it, and what it may do. */
function kept(headers) {
  return [...headers].filter(([name]) => ["content-type", "content-security-policy", "x-content-type-options", "referrer-policy"].includes(name));
}

async function digestOf(files) {
  const parts = [];
  for (const [address, { bytes }] of [...files].sort(([a], [b]) => (a < b ? -1 : 1))) {
    parts.push(`${address} ${hex(await crypto.subtle.digest("SHA-256", bytes))}`);
  }
  return hex(await crypto.subtle.digest("SHA-256", new TextEncoder().encode(parts.join("\n"))));
}

const hex = (buffer) => [...new Uint8Array(buffer)].map((byte) => byte.toString(16).padStart(2, "0")).join("");

async function current() {
  const record = await (await caches.open(POINTER)).match(HOME);
  return record ? record.text() : null;
}

/** Gather the files and serve them from now on; whether they differ from those served before. */
async function renew() {
  const files = await gathered(),
    name = PREFIX + (await digestOf(files)),
    before = await current();
  if (name === before) return false;
  const cache = await caches.open(name);
  for (const [address, { bytes, headers }] of files) await cache.put(address, new Response(bytes, { headers }));
  await (await caches.open(POINTER)).put(HOME, new Response(name));
  for (const other of await caches.keys()) {
    // The state before stays for pages that are still open with it.
    if (other.startsWith(PREFIX) && other !== name && other !== before) await caches.delete(other);
  }
  return before !== null;
}

let renewing = Promise.resolve();
const renewInTurn = () => (renewing = renewing.catch(() => {}).then(renew));

/** Tell the open pages that they show an older state than the one that the next visit gets. */
async function tell(changed) {
  if (changed) for (const client of await clients.matchAll({ includeUncontrolled: true })) client.postMessage({ page: "renewed" });
}

addEventListener("install", (event) =>
  event.waitUntil(
    renewInTurn()
      .then(tell)
      .then(() => skipWaiting()),
  ),
);
addEventListener("activate", (event) => event.waitUntil(clients.claim()));

// The page asks once when it opens: is there a newer state of its files? Without a network there is none.
addEventListener("message", (event) => event.waitUntil(renewInTurn().then(tell, () => {})));

addEventListener("fetch", (event) => {
  const { request } = event,
    address = new URL(request.url);
  if (request.method !== "GET" || !address.href.startsWith(HOME) || address.href.startsWith(`${HOME}rule-set/`)) return;
  event.respondWith(served(request, address));
});

async function served(request, address) {
  const name = await current(),
    sought = request.mode === "navigate" ? HOME : address.origin + address.pathname;
  const found = name && (await (await caches.open(name)).match(sought));
  return found || fetch(request);
}

/** node keeper_chromium.js CHROMIUM RUNTIME: what a Keeper does in headless Chromium, whose storage is made too small for a while, as JSON. */
import { dirname } from "node:path";
import { reported } from "./browser.js";
import { Server, bundle, madeKey } from "./publisher.js";

const [browserPath, runtimePath] = process.argv.slice(2);
// The newer bundle alone asks for more than there is: how much the older one takes on the disk depends on when the browser packs it together.
const older = bundle("1.0.0"), newer = bundle("1.1.0", (data) => { data.title.en += " ".repeat(older.length * 2); });
const server = new Server([madeKey()]);
server.publish(older);
let page;

const LITTLE_BYTES = older.length * 2;

async function room(quotaSize) {
  const session = await page.context().newCDPSession(page);
  await session.send("Storage.overrideQuotaForOrigin", { origin: new URL(page.url()).origin, quotaSize });
}

const steps = {
  changed() {
    server.publish(newer);
    server.files.set("1.1.0.json", newer.map((byte, k) => (k === 5000 ? byte ^ 1 : byte)));
  },
  "cut off": () => server.files.set("1.1.0.json", newer.slice(0, 9999)),
  whole: () => server.publish(newer),
  "little room": () => room(LITTLE_BYTES),
  room: () => room(1e9),
};
const answers = {
  "/rule-set/": (body, name) => server.files.get(name),
  "/step": async (name) => {
    await steps[name]();
    return "";
  },
};
console.log(JSON.stringify(await reported(browserPath, dirname(runtimePath), "keeper_page.js", answers, async (opened) => {
  page = opened;
  page.removeAllListeners("requestfailed");        // the protocol calls a body that a page read piece by piece "aborted"
})));

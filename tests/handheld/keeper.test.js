/** Installing, updating and starting on a device, with a publisher that is honest, mistaken or an impostor. */
import assert from "node:assert/strict";
import { mkdtemp, readFile, rm, writeFile } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { test } from "node:test";

import { FileStore } from "../../rules/handheld/file-store.js";
import { Keeper, RUNTIME } from "../../rules/handheld/keeper.js";
import { MemoryStore } from "../../rules/handheld/stores.js";
import { BundleRefused } from "../../rules/handheld/trust.js";
import { INDUCED, LOADING, Server, bundle, bytesOf, digestOf, keyList, madeKey, otherwise, released } from "./publisher.js";
import { Watched, flip, withRoomFor } from "./failing_stores.js";

const key = madeKey(), stranger = madeKey();
const keeperOf = (store, server, more = {}) => new Keeper({ store, base: server.address, fetch: server.fetch, ...more });

/** A device on which 1.0.0 is installed, and its publisher. */
async function installed({ keys = [key], options, store = new MemoryStore(), ...more } = {}) {
  const server = new Server(keys, options);
  server.publish(bundle());
  const keeper = keeperOf(store, server, more), first = await keeper.update();
  assert.equal(first.state, "installed", JSON.stringify(first.reason));
  return { server, store, keeper, first };
}

/** The update is refused with this code and these words, and 1.0.0 still answers: now, and after a new start. */
async function refusedAndStillAnswering({ server, store, keeper }, code, ...words) {
  const said = await keeper.update();
  assert.deepEqual([said.state, said.reason?.code], ["refused", code], JSON.stringify(said.reason));
  for (const word of words) assert.ok(said.reason.detail.includes(word), said.reason.detail);
  assert.equal(said.version, "1.0.0");
  const { ruleSet, reason } = await keeperOf(store, server).start();
  assert.deepEqual([ruleSet.version, reason], ["1.0.0", null]);
  assert.ok(ruleSet.answer(LOADING, ruleSet.data.cases[0].input).verdict);
  assert.equal((await store.names()).filter((name) => name.startsWith("bundle.")).length, 1, "a leftover was not swept");
}

const refusedStart = (keeper, code) => assert.rejects(() => keeper.start(), (error) => error instanceof BundleRefused && error.code === code);

test("the runtime's version is that of its package", async () => {
  assert.equal(RUNTIME, JSON.parse(await readFile(new URL("../../rules/handheld/package.json", import.meta.url))).version);
});

test("nothing is there before the first installation; then it starts without a network", async () => {
  const store = new MemoryStore(), server = new Server([key]), digest = server.publish(bundle());
  await refusedStart(keeperOf(store, server), "nothing-installed");
  assert.equal(server.asked.length, 0);
  const said = await keeperOf(store, server).update();
  assert.deepEqual([said.state, said.version, said.digest, said.proof], ["installed", "1.0.0", digest, { agree: 3, of: 3, wrong: [] }]);
  const sizes = ["latest.json", "keys.json", "keys.seal.json", "1.0.0.seal.json", "1.0.0.json"].map((name) => server.files.get(name).length);
  assert.equal(said.bytes, sizes.reduce((a, b) => a + b));
  assert.ok(said.milliseconds > 0 && said.ruleSet.digest === digest && !said.trust.development && !("reason" in said));
  server.asked.length = 0;
  const started = await keeperOf(store, server, { fetch: () => assert.fail("the network was asked") }).start();
  assert.deepEqual([started.ruleSet.digest, started.proof, started.reason, started.notice], [digest, { agree: 3, of: 3, wrong: [] }, null, null]);
  assert.deepEqual(started.bytes, bundle().length);
  assert.ok(started.milliseconds > 0);
});

test("what is installed is not fetched again; a newer one is, and the old one is kept beside it", async () => {
  const { server, store, keeper } = await installed();
  for (const again of [keeper, keeperOf(store, server)]) {
    const said = await again.update();
    assert.deepEqual([said.state, said.version, said.ruleSet.version], ["current", "1.0.0", "1.0.0"]);
    assert.ok(said.bytes < 2000);
  }
  assert.equal(server.count("1.0.0.json"), 1);
  const old = server.latest.digest, digest = server.publish(bundle("1.1.0"));
  assert.deepEqual([(await keeper.update()).state, (await keeper.start()).ruleSet.version], ["updated", "1.1.0"]);
  assert.deepEqual(server.asked.find(({ name }) => name === "1.1.0.json").headers, { "If-None-Match": `"${old}"` });
  const bundles = (await store.names()).filter((name) => name.startsWith("bundle."));
  assert.deepEqual(bundles.sort(), [old, digest].map((one) => one.replace("sha-256:", "bundle.")).sort());
  server.publish(bundle("1.2.0"));
  assert.equal((await keeper.update()).state, "updated");
  const names = await store.names();
  assert.ok(!names.includes(old.replace("sha-256:", "bundle.")) && names.includes(digest.replace("sha-256:", "bundle.")));
});

test("a server that says Not Modified for what it announces as new leaves all as it is", async () => {
  const { server, keeper } = await installed();
  server.announce({ ...server.latest, version: "1.1.0", digest: digestOf(bytesOf("not there yet")) });
  assert.equal((await keeper.update()).state, "current");
});

test("the release as it is: installed, proved and started", async () => {
  const server = new Server([key]), store = new MemoryStore();
  server.publish(released());
  const said = await keeperOf(store, server).update();
  assert.deepEqual([said.state, said.proof], ["installed", { agree: 366, of: 366, wrong: [] }]);
  assert.equal((await keeperOf(store, server).start()).proof.agree, 366);
});

const changed = (bytes) => bytes.map((byte, k) => (k === 5000 ? byte ^ 1 : byte));
const spoilt = {
  "changed on the way": [(server) => server.files.set("1.1.0.json", changed(server.files.get("1.1.0.json"))), "wrong-digest"],
  "changed, with a digest to match": [(server) => {
    const bytes = changed(server.files.get("1.1.0.json"));
    server.files.set("1.1.0.json", bytes);
    server.announce({ ...server.latest, digest: digestOf(bytes) });
  }, "bytes-changed"],
  "cut off": [(server) => server.files.set("1.1.0.json", server.files.get("1.1.0.json").slice(0, 9999)), "truncated", "9999 of "],
  "longer than announced": [(server) => server.files.set("1.1.0.json", bytesOf(`${Buffer.from(server.files.get("1.1.0.json"))} `)), "too-long"],
  "sealed by a stranger": [(server) => server.publish(bundle("1.1.0"), { by: [stranger] }), "unknown-key", stranger.kid],
  "without a seal": [(server) => server.files.delete("1.1.0.seal.json"), "unsigned", "1.1.0.seal.json"],
  "with the seal of another bundle": [(server) => server.files.set("1.1.0.seal.json", server.files.get("1.0.0.seal.json")), "bytes-changed"],
  "with a seal that is none": [(server) => server.files.set("1.1.0.seal.json", bytesOf("<html>")), "malformed-seal", "not JSON"],
  "in another language": [(server) => server.publish(bundle("1.1.0", (data) => (data.language = 2))), "unknown-language", "language 2"],
  "that is no rule set": [(server) => server.publish(bytesOf("[1"), { version: "1.1.0" }), "unreadable"],
  "of another version than announced": [(server) => server.publish(bundle("0.9.0"), { version: "1.1.0" }), "wrong-version", "0.9.0"],
  "that disagrees in one check": [(server) => server.publish(bundle("1.1.0", otherwise(INDUCED))), "disagrees", "2 of 3", INDUCED],
  "of an older version": [(server) => server.publish(bundle("0.9.0")), "not-newer", "0.9.0", "1.0.0"],
  "of the same version, with other bytes": [(server) => server.publish(bundle("1.0.0", (data) => (data.title.en = "Other"))), "not-newer"],
  "announced by a page": [(server) => server.files.set("latest.json", bytesOf("<html>")), "unreadable", "version of latest.json is absent"],
  "announced from elsewhere": [(server) => server.announce({ ...server.latest, bundle: "https://elsewhere.example/x.json" }), "unreadable", "else"],
  "announced without a size": [(server) => server.announce({ ...server.latest, bytes: 0 }), "unreadable", "bytes of latest.json is 0"],
  "announced without a version": [(server) => server.announce({ ...server.latest, version: "1.1" }), "unreadable", 'version of latest.json is "1.1"'],
  "with a key list that is none": [(server) => server.files.set("keys.json", bytesOf("{}")), "malformed-keys"],
  "with a key list of a stranger": [(server) => server.publishKeys(keyList([stranger], { serial: 2 }), [stranger]), "unknown-key"],
};
for (const [name, [spoil, ...refusal]] of Object.entries(spoilt)) {
  test(`a newer bundle ${name} is refused, and the old one answers`, async () => {
    const device = await installed();
    device.server.publish(bundle("1.1.0"));
    await spoil(device.server);
    await refusedAndStillAnswering(device, ...refusal);
  });
}

test("a download that breaks off, with and without streams", async () => {
  for (const streams of [true, false]) {
    const device = await installed(), whole = bundle("1.1.0");
    device.server.publish(whole);
    const body = () => new ReadableStream({ start: (to) => to.enqueue(whole.slice(0, 777)), pull: (to) => to.error(new TypeError("reset")) });
    const bare = { ok: true, status: 200, arrayBuffer: async () => whole.slice(0, 777).buffer };
    device.server.alter = (name) => name === "1.1.0.json" && (streams ? new Response(body()) : bare);
    await refusedAndStillAnswering(device, "truncated", `777 of ${whole.length} bytes`);
  }
});

test("without network, or with a server that fails, it says so and answers on", async () => {
  const { server, keeper } = await installed();
  const ways = [() => { throw new TypeError("no route"); }, () => new Response("", { status: 503 }),
    () => new Response(new ReadableStream({ pull: (to) => to.error(new TypeError("reset")) }))];
  for (const way of ways) {
    server.alter = way;
    const said = await keeper.update();
    assert.deepEqual([said.state, said.reason.code, said.version], ["unreachable", "unreachable", "1.0.0"]);
  }
  server.alter = (name) => new Promise((resolve, reject) => setTimeout(() => reject(new DOMException(`${name} took too long`, "TimeoutError")), 5));
  assert.match((await keeper.update({ signal: AbortSignal.timeout(1) })).reason.detail, /took too long/);
  server.alter = undefined;
  assert.equal((await keeper.update()).state, "current");
});

test("a full device keeps what it has", async () => {
  const device = await installed({ store: withRoomFor(bundle().length + 5000) });
  device.server.publish(bundle("1.1.0"));
  await refusedAndStillAnswering(device, "storage-full", "no room", "free some storage");
  const empty = keeperOf(withRoomFor(100), device.server), said = await empty.update();
  assert.deepEqual([said.state, said.reason.code, said.version], ["refused", "storage-full", null]);
});

test("a store that fails, lies or cannot be read is reported, and the old one answers", async () => {
  const device = await installed();
  device.server.publish(bundle("1.1.0"));
  const fails = new Watched(device.store, ({ name }) => { if (name === "put") throw new Error("disk is read-only"); });
  await refusedAndStillAnswering({ ...device, keeper: keeperOf(fails, device.server) }, "storage-failed", "disk is read-only");
  const lies = new Watched(device.store);
  lies.put = async (name, bytes) => device.store.put(name, name.startsWith("bundle.") ? bytes.slice(1) : bytes);
  await refusedAndStillAnswering({ ...device, keeper: keeperOf(lies, device.server) }, "storage-failed", "give back");
  const unreadable = new Watched(device.store, () => { throw new Error("denied"); });
  await refusedStart(keeperOf(unreadable, device.server), "storage-failed");
  assert.equal((await keeperOf(unreadable, device.server).update()).reason.code, "storage-failed");
  assert.equal((await keeperOf(device.store, device.server).update()).state, "updated");
});

test("an older version is taken when the caller says so", async () => {
  const { server, store, keeper } = await installed();
  server.publish(bundle("0.9.0"));
  assert.equal((await keeper.update({ allowOlder: true })).version, "0.9.0");
  assert.equal((await keeperOf(store, server).start()).ruleSet.version, "0.9.0");
});

test("on a first installation a check that disagrees is blocked, and nothing is installed where all disagree", async () => {
  const server = new Server([key]), store = new MemoryStore();
  server.publish(bundle("1.0.0", (data) => [LOADING, INDUCED].forEach((check) => otherwise(check)(data))));
  const none = await keeperOf(store, server).update();
  assert.deepEqual([none.state, none.reason.code], ["refused", "disagrees"]);
  assert.deepEqual(await store.names(), []);
  server.publish(bundle("1.0.0", otherwise(INDUCED)));
  assert.equal((await keeperOf(store, server).update()).state, "installed");
  const { ruleSet, proof } = await keeperOf(store, server).start();
  assert.deepEqual([[...ruleSet.blocked.keys()], proof.agree, proof.of], [[INDUCED], 2, 3]);
  const another = new MemoryStore();      // only a later case of a check disagrees: no start forgets it
  server.publish(bundle("1.0.0", (data) => (data.cases[1].answer.verdict = "never-heard-of")));
  await keeperOf(another, server).update();
  for (let again = 0; again < 2; again++) assert.deepEqual([...(await keeperOf(another, server).start()).ruleSet.blocked.keys()], [LOADING]);
});

test("all is proved once for each engine; later starts prove one of each check, and all again where that disagrees", async () => {
  const { server, store } = await installed({ engine: "engine 1" });
  const cases = async (engine) => {
    const { RuleSet } = await import("../../rules/handheld/rule-set.js"), real = RuleSet.prototype.answer;
    let count = 0;
    RuleSet.prototype.answer = function (...given) {
      count += 1;
      return real.apply(this, given);
    };
    try {
      const { proof } = await keeperOf(store, server, { engine }).start();
      assert.deepEqual(proof, { agree: 3, of: 3, wrong: [] });
    } finally {
      RuleSet.prototype.answer = real;
    }
    return count;
  };
  const counts = [];
  for (const engine of ["engine 1", "engine 2", "engine 2", "engine 1"]) counts.push(await cases(engine));
  assert.deepEqual(counts, [2, 3, 2, 3]);       // one engine is remembered
  await flip(store, server.latest.digest.replace("sha-256:", "proof."), 99);
  assert.deepEqual([await cases("engine 1"), await cases("engine 1")], [3, 2]);
});

test("what is said of a rule set's retirement is kept for the time without network", async () => {
  const { server, store, keeper } = await installed(), because = { en: "A newer edition is out.", es: "Hay una edición nueva." };
  server.announce({ ...server.latest, deprecated: "2027-01-31", sunset: "2028-01-31", because });
  assert.deepEqual((await keeper.update()).notice, { deprecated: "2027-01-31", sunset: "2028-01-31", because });
  assert.deepEqual((await keeperOf(store, server).start()).notice, { deprecated: "2027-01-31", sunset: "2028-01-31", because });
  server.announce({ ...server.latest, deprecated: "soon", sunset: null, because: "<b>" });
  assert.equal((await keeper.update()).notice, null);
});

test("files on a disk: installed, damaged, healed; temporary files are swept", async () => {
  const folder = await mkdtemp(join(tmpdir(), "keeper-")), store = new FileStore(join(folder, "kept"));
  try {
    const { server } = await installed({ store });
    await writeFile(join(folder, "kept", "bundle.ffff.new"), "left behind");
    server.publish(bundle("1.1.0"));
    assert.equal((await keeperOf(store, server).update()).state, "updated");
    assert.ok((await store.names()).every((name) => !name.endsWith(".new")));
    await assert.rejects(() => store.put("../x", new Uint8Array(1)), /no name of an entry/);
    assert.equal((await keeperOf(new FileStore(join(folder, "kept")), server).start()).ruleSet.version, "1.1.0");
  } finally {
    await rm(folder, { recursive: true });
  }
});

test("updates that are asked for at once run one after the other", async () => {
  const { server, store, keeper } = await installed();
  server.publish(bundle("1.1.0"));
  const states = await Promise.all([keeper, keeperOf(store, server), keeper].map((one) => one.update()));
  assert.deepEqual(states.map(({ state }) => state), ["updated", "current", "current"]);
  assert.equal(server.count("1.1.0.json"), 1);
});

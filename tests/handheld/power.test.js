/** The power fails at every single operation of a store, and every entry is damaged: either the old or the new rule set answers, whole. */
import assert from "node:assert/strict";
import { test } from "node:test";

import { Keeper } from "../../rules/handheld/keeper.js";
import { MemoryStore } from "../../rules/handheld/stores.js";
import { INDUCED, LOADING, Server, bundle, bytesOf, keyList, madeKey, seal } from "./publisher.js";
import { Watched, failingAt, flip } from "./failing_stores.js";

const key = madeKey(), second = madeKey();
const [OLD, NEW, NEWEST] = ["1.0.0", "1.1.0", "1.2.0"].map((version) => bundle(version, (data) => {
  delete data.checks[INDUCED];      // one check is enough here, and starts sooner
  data.cases.pop();
}));
const WAYS = ["before", "middle", "after"];

async function copyOf(store) {
  const copy = new MemoryStore();
  for (const name of await store.names()) await copy.put(name, await store.get(name));
  return copy;
}

const keeperOf = (store, server) => new Keeper({ store, base: server.address, fetch: server.fetch });

/** A store on which these bundles were installed one after the other, and the publisher, who offers `next`. */
async function prepared(bundles, next) {
  const server = new Server([key]), store = new MemoryStore();
  for (const bytes of bundles) {
    server.publish(bytes);
    await keeperOf(store, server).update();
  }
  server.publish(next);
  return { server, store };
}

/** How many operations `work` needs on a copy of the store. */
async function operations(store, work) {
  const watched = new Watched(await copyOf(store));
  await work(watched);
  return watched.operations;
}

/** Start on what the failure left; the version that answers, after its bytes and one of its answers were looked at. */
async function answering(store, server, known) {
  const { ruleSet, proof } = await keeperOf(store, server).start(), [one] = ruleSet.data.cases;
  assert.deepEqual(Buffer.from(ruleSet.bytes), Buffer.from(known[ruleSet.version]), "a mixture");
  assert.deepEqual(proof.wrong, []);
  assert.equal(ruleSet.answer(LOADING, one.input).verdict, one.answer.verdict);
  return ruleSet.version;
}

for (const [title, bundles, next, allowed] of [
  ["an update", [OLD], NEW, ["1.0.0", "1.1.0"]],
  ["a second update", [OLD, NEW], NEWEST, ["1.1.0", "1.2.0"]],
]) {
  test(`the power fails in ${title}, at every operation and in three ways`, async () => {
    const { server, store } = await prepared(bundles, next), known = { "1.0.0": OLD, "1.1.0": NEW, "1.2.0": NEWEST };
    const count = await operations(store, (watched) => keeperOf(watched, server).update()), seen = new Map(allowed.map((version) => [version, 0]));
    assert.ok(count >= 10, `only ${count} operations`);
    for (let at = 0; at < count; at++) {
      for (const way of WAYS) {
        const left = await copyOf(store);
        const { state, version } = await keeperOf(failingAt(left, at, way), server).update();
        const after = await answering(left, server, known);
        assert.ok(seen.has(after), `${after} answers after a failure ${way} operation ${at}`);
        if (state === "updated") assert.equal(after, version, `${version} was reported, ${after} answers: ${way} operation ${at}`);
        seen.set(after, seen.get(after) + 1);
        // with the power back, the update is made and nothing is left behind
        await keeperOf(left, server).update();
        assert.equal(await answering(left, server, known), allowed[1]);
        assert.equal((await left.names()).filter((name) => name.startsWith("bundle.")).length, 2);
      }
    }
    for (const [version, times] of seen) assert.ok(times >= 3, `${version} was left ${times} times`);
  });
}

test("the power fails twice in a row, at every pair of operations", async () => {
  const { server, store } = await prepared([OLD], NEW), known = { "1.0.0": OLD, "1.1.0": NEW };
  const count = await operations(store, (watched) => keeperOf(watched, server).update());
  for (let first = 2; first < count; first++) {
    const once = await copyOf(store);
    await keeperOf(failingAt(once, first, "middle"), server).update();
    for (let next = 2; next < count; next += 2) {
      const twice = await copyOf(once);
      await keeperOf(failingAt(twice, next, "middle"), server).update();
      assert.ok(await answering(twice, server, known));
    }
  }
});

test("the power fails in a first installation: nothing or all is installed", async () => {
  const server = new Server([key]), empty = new MemoryStore();
  server.publish(OLD);
  const count = await operations(empty, (watched) => keeperOf(watched, server).update());
  for (let at = 0; at < count; at++) {
    for (const way of WAYS) {
      const left = new MemoryStore();
      await keeperOf(failingAt(left, at, way), server).update();
      const version = await answering(left, server, { "1.0.0": OLD }).catch(({ code }) => code);
      assert.ok(["1.0.0", "nothing-installed", "damaged"].includes(version), version);
      assert.equal((await keeperOf(left, server).update()).version, "1.0.0");
      assert.equal(await answering(left, server, { "1.0.0": OLD }), "1.0.0");
    }
  }
});

test("the power fails while a newer key list and its seals are taken", async () => {
  const { server, store } = await prepared([OLD], OLD), list = keyList([key, second], { serial: 2 });
  server.publishKeys(list, [key]);
  server.files.set(server.latest.seal, bytesOf(seal(OLD, [second])));
  const count = await operations(store, (watched) => keeperOf(watched, server).update());
  for (let at = 0; at < count; at++) {
    for (const way of WAYS) {
      const left = await copyOf(store);
      await keeperOf(failingAt(left, at, way), server).update();
      assert.equal(await answering(left, server, { "1.0.0": OLD }), "1.0.0");
    }
  }
});

test("the power fails at a start: the next one answers", async () => {
  const { server, store } = await prepared([OLD, NEW], NEW);
  await store.remove(server.latest.digest.replace("sha-256:", "proof."));
  const count = await operations(store, (watched) => keeperOf(watched, server).start());
  for (let at = 0; at < count; at++) {
    for (const way of WAYS) {
      const left = await copyOf(store);
      await keeperOf(failingAt(left, at, way), server).start().catch(() => {});
      assert.equal(await answering(left, server, { "1.1.0": NEW }), "1.1.0");
    }
  }
});

test("one flipped bit in any entry is noticed, and whole bytes answer; an update heals it", async () => {
  const { server, store } = await prepared([OLD, NEW], NEW), known = { "1.0.0": OLD, "1.1.0": NEW };
  const current = server.latest.digest.replace("sha-256:", "bundle.");
  for (const name of await store.names()) {
    const bits = (await store.get(name)).length * 8;
    for (let k = 0; k < 12; k++) {
      const left = await copyOf(store);
      await flip(left, name, Math.floor((bits - 1) * (k / 11)));
      const { ruleSet, reason } = await keeperOf(left, server).start();
      assert.deepEqual(Buffer.from(ruleSet.bytes), Buffer.from(known[ruleSet.version]));
      assert.deepEqual([ruleSet.version, reason?.code], name === current ? ["1.0.0", "wrong-digest"] : ["1.1.0", undefined], name);
      const { state, version } = await keeperOf(left, server).update();
      assert.deepEqual([state, version], [name === current ? "updated" : "current", "1.1.0"]);
      assert.equal((await keeperOf(left, server).start()).reason, null);
      if (!name.startsWith("state-")) continue;
      await flip(left, name === "state-a" ? "state-b" : "state-a", 999);      // the copy was healed, so the other one may go
      assert.equal(await answering(left, server, known), "1.1.0");
    }
  }
});

test("an entry that is gone, or both copies of the state damaged: said, and healed by an update", async () => {
  const { server, store } = await prepared([OLD, NEW], NEW);
  const left = await copyOf(store);
  await left.remove(server.latest.digest.replace("sha-256:", "bundle."));
  const { ruleSet, reason } = await keeperOf(left, server).start();
  assert.deepEqual([ruleSet.version, reason.code], ["1.0.0", "damaged"]);
  for (const copy of ["state-a", "state-b"]) await flip(store, copy, 999);
  await assert.rejects(() => keeperOf(store, server).start(), { code: "damaged" });
  assert.equal((await keeperOf(store, server).update()).state, "installed");
  assert.equal((await keeperOf(store, server).start()).ruleSet.version, "1.1.0");
});

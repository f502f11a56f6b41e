/** Keys on the device: rotated, revoked, pinned, and of a development service. */
import assert from "node:assert/strict";
import { test } from "node:test";

import { Keeper } from "../../rules/handheld/keeper.js";
import { MemoryStore } from "../../rules/handheld/stores.js";
import { BundleRefused } from "../../rules/handheld/trust.js";
import { Server, bundle, bytesOf, keyList, madeKey, seal } from "./publisher.js";

const first = madeKey(), second = madeKey(), thief = madeKey();

/** A device with 1.0.0 sealed by `first`. */
async function device(more = {}, options = {}) {
  const server = new Server([first], options), store = new MemoryStore();
  server.publish(bundle());
  const keeper = () => new Keeper({ store, base: server.address, fetch: server.fetch, ...more });
  const said = await keeper().update();
  assert.equal(said.state, "installed", JSON.stringify(said.reason));
  return { server, store, keeper };
}

/** Rotate the keys of the server: its list, sealed by these, and the seals of its latest bundle. */
function rotate(server, list, by) {
  server.publishKeys(list, by);
  server.files.set(server.latest.seal, bytesOf(seal(server.files.get(server.latest.bundle), by)));
}

const state = async (keeper) => {
  const { state: said, version, reason } = await keeper.update();
  return [said, version, reason?.code];
};

async function starts(keeper, version) {
  assert.equal((await keeper.start()).ruleSet.version, version);
}

const refusedStart = (keeper, code) => assert.rejects(() => keeper.start(), (error) => error instanceof BundleRefused && error.code === code);

test("keys are rotated: a second one, then the first one retired; what is installed is vouched for anew", async () => {
  const { server, keeper } = await device();
  rotate(server, keyList([first, second], { serial: 2 }), [first, second]);
  assert.deepEqual(await state(keeper()), ["current", "1.0.0", undefined]);
  rotate(server, keyList([second], { serial: 3 }), [second]);
  assert.deepEqual(await state(keeper()), ["current", "1.0.0", undefined]);
  await starts(keeper(), "1.0.0");
  server.publish(bundle("1.1.0"), { by: [second] });
  assert.deepEqual(await state(keeper()), ["updated", "1.1.0", undefined]);
  server.publish(bundle("1.2.0"), { by: [first] });
  assert.deepEqual(await state(keeper()), ["refused", "1.1.0", "unknown-key"]);
});

test("a list that skipped the step with both keys is not taken", async () => {
  const { server, keeper } = await device();
  rotate(server, keyList([second], { serial: 3 }), [second]);
  assert.deepEqual(await state(keeper()), ["refused", "1.0.0", "unknown-key"]);
  await starts(keeper(), "1.0.0");
});

test("a key is revoked: a bundle that another key sealed too answers on; a seal by the revoked one alone is refused", async () => {
  const { server, keeper } = await device();
  rotate(server, keyList([first, second], { serial: 2 }), [first, second]);
  await keeper().update();
  server.publishKeys(keyList([second], { serial: 3, revoked: [first] }), [second]);
  server.files.set(server.latest.seal, bytesOf(seal(bundle(), [first])));
  assert.deepEqual(await state(keeper()), ["refused", "1.0.0", "revoked-key"]);
  await starts(keeper(), "1.0.0");
});

test("a revoked bundle falls, a version below it may follow, and the revocation is for ever", async () => {
  const { server, keeper } = await device();
  rotate(server, keyList([first, second], { serial: 2 }), [first, second]);
  await keeper().update();
  server.publish(bundle("1.9.0"), { by: [first] });         // by the thief of the first key
  assert.deepEqual(await state(keeper()), ["updated", "1.9.0", undefined]);
  server.publishKeys(keyList([second], { serial: 3, revoked: [first] }), [second]);
  const kept = keeper();
  await kept.start();
  assert.deepEqual(await state(kept), ["refused", "1.0.0", "revoked-key"]);     // the one before it, which the second key sealed too
  const { ruleSet, reason } = await keeper().start();
  assert.deepEqual([ruleSet.version, reason.code], ["1.0.0", "revoked-key"]);
  assert.match(reason.detail, /a laptop was stolen/);
  server.publish(bundle("1.1.0"), { by: [second] });
  assert.deepEqual(await state(keeper()), ["updated", "1.1.0", undefined]);
  rotate(server, keyList([first, second], { serial: 4 }), [second]);        // a list that forgets
  assert.deepEqual(await state(keeper()), ["current", "1.1.0", undefined]);
  server.publish(bundle("1.2.0"), { by: [first] });
  assert.deepEqual(await state(keeper()), ["refused", "1.1.0", "revoked-key"]);
});

test("where the publisher takes back a bundle of a stolen key, the version below it is installed again", async () => {
  const { server, keeper } = await device();
  rotate(server, keyList([first, second], { serial: 2 }), [first, second]);
  await keeper().update();
  const honest = server.latest;
  server.publish(bundle("1.9.0"), { by: [first] });
  await keeper().update();
  server.announce(honest);
  assert.deepEqual(await state(keeper()), ["refused", "1.9.0", "not-newer"]);      // nothing was revoked: an old seal played again
  server.publishKeys(keyList([second], { serial: 3, revoked: [first] }), [second]);
  assert.deepEqual(await state(keeper()), ["updated", "1.0.0", undefined]);
  const { ruleSet, reason } = await keeper().start();
  assert.deepEqual([ruleSet.version, reason], ["1.0.0", null]);
});

test("a bundle whose only key is revoked, with none before it, does not answer; a new one is installed", async () => {
  const { server, keeper } = await device();
  server.publishKeys(keyList([first, second], { serial: 2 }), [first]);
  await keeper().update();
  server.publishKeys(keyList([second], { serial: 3, revoked: [first] }), [second]);
  assert.deepEqual(await state(keeper()), ["refused", null, "revoked-key"]);
  await refusedStart(keeper(), "revoked-key");
  server.publish(bundle("0.9.0"), { by: [second] });
  assert.deepEqual(await state(keeper()), ["installed", "0.9.0", undefined]);
  await starts(keeper(), "0.9.0");
});

test("an older key list, played again, changes nothing", async () => {
  const { server, keeper } = await device();
  rotate(server, keyList([first, second], { serial: 2, revoked: [thief] }), [first, second]);
  await keeper().update();
  server.publishKeys(keyList([first, thief]), [first]);
  server.publish(bundle("1.1.0"), { by: [thief] });
  assert.deepEqual(await state(keeper()), ["refused", "1.0.0", "revoked-key"]);
});

test("pins: only what they vouch for is installed; a newer app's pins and a newer list are both heeded", async () => {
  const pins = keyList([first]), server = new Server([thief]), store = new MemoryStore();
  const keeper = (more) => new Keeper({ store, base: server.address, fetch: server.fetch, pins, ...more });
  server.publish(bundle());
  assert.deepEqual(await state(keeper()), ["refused", null, "unknown-key"]);
  rotate(server, pins, [first]);
  assert.deepEqual(await state(keeper()), ["installed", "1.0.0", undefined]);
  rotate(server, keyList([first, second], { serial: 2 }), [first, second]);
  assert.deepEqual(await state(keeper()), ["current", "1.0.0", undefined]);
  await starts(keeper(), "1.0.0");
  assert.equal((await keeper().start()).trust.serial, 2);
  assert.equal((await keeper({ pins: keyList([second], { serial: 5 }) }).start()).trust.serial, 5);
  const { trust } = await keeper({ pins: keyList([thief], { serial: 1, revoked: [first] }) }).start();      // an older list, but a revocation
  assert.deepEqual([trust.serial, [...trust.revoked.keys()]], [2, [first.kid]]);
});

test("what a device trusted on first sight does not bind an app that pins keys later", async () => {
  const { server, store } = await device({}, {});
  const pinned = new Keeper({ store, base: server.address, fetch: server.fetch, pins: bytesOf(keyList([second])) });
  await refusedStart(pinned, "unknown-key");
});

test("a development service makes a key at every start: the device follows, and says so; from a real key there is no way back", async () => {
  const { server, keeper } = await device({}, { development: true });
  assert.equal((await keeper().start()).trust.development, true);
  rotate(server, keyList([second], { development: true }), [second]);
  assert.deepEqual(await state(keeper()), ["current", "1.0.0", undefined]);
  await starts(keeper(), "1.0.0");
  rotate(server, keyList([first]), [first]);
  assert.deepEqual(await state(keeper()), ["current", "1.0.0", undefined]);
  assert.equal((await keeper().start()).trust.development, false);
  rotate(server, keyList([thief], { serial: 9, development: true }), [thief]);
  assert.deepEqual(await state(keeper()), ["refused", "1.0.0", "unknown-key"]);
});

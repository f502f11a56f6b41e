/** Runs in the browser: a Keeper on its IndexedDB, with its own fetch and its own Ed25519. */
import { IndexedDbStore, Keeper } from "/runtime/index.js";

const store = new IndexedDbStore(), keeper = () => new Keeper({ store, base: "/rule-set/" });
const step = async (name) => (await fetch("/step", { method: "POST", body: name })).text();
const brief = ({ state, version, ruleSet, proof, reason }) => ({ state, version: version ?? ruleSet?.version, proof, code: reason?.code ?? null });
const updated = async () => brief(await keeper().update());
const started = () => keeper().start().then(brief, ({ code }) => ({ code }));

await step("little room");      // before the first write: the browser remembers how much there is
const seen = { nothing: await started(), installed: await updated(), started: await started(), current: await updated() };
await step("changed");
seen.changed = [await updated(), await started()];
await step("cut off");
seen.cutOff = [await updated(), await started()];
await step("whole");
seen.full = [await updated(), await started()];
await step("room");
seen.updated = [await updated(), await started()];
const { digest } = await (await fetch("/rule-set/latest.json")).json(), name = digest.replace("sha-256:", "bundle."), bytes = await store.get(name);
bytes[9999] ^= 4;
await store.put(name, bytes);
seen.damaged = [await started(), await updated(), await started()];
await store.remove(name);
seen.gone = [await started(), await updated()];
seen.names = (await store.names()).map((one) => one.split(".")[0]).sort();
seen.many = (await Promise.all([updated(), updated()])).map(({ state }) => state);
await fetch("/report", { method: "POST", body: JSON.stringify(seen) });

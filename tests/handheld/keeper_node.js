/** node keeper_node.js STORE FOLDER ...: update a device from each of these rule-set/ folders in turn, then start it; what it says, as JSON. */
import { readFile } from "node:fs/promises";
import { FileStore } from "../../rules/handheld/file-store.js";
import { Keeper } from "../../rules/handheld/index.js";

const [kept, ...folders] = process.argv.slice(2), store = new FileStore(kept);
const fetch = (address) => readFile(address).then((bytes) => new Response(bytes), () => new Response("", { status: 404 }));
const brief = ({ state, version, ruleSet, proof, trust, reason }) => ({ state, version: version ?? ruleSet?.version, proof, serial: trust?.serial,
  development: trust?.development, code: reason?.code, detail: reason?.detail });
const said = [];
for (const base of folders) said.push(brief(await new Keeper({ store, base, fetch }).update()));
said.push(brief(await new Keeper({ store, base: "nowhere" }).start()));
console.log(JSON.stringify(said));

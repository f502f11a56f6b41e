/** The page's texts: the same keys and places in every language, none missing and none left over, and never a word that work is safe. */
import assert from "node:assert/strict";
import fs from "node:fs";
import test from "node:test";
import en from "../../rules/handheld/page/texts-en.js";
import es from "../../rules/handheld/page/texts-es.js";

const FOLDER = new URL("../../rules/handheld/page/", import.meta.url);
const SOURCES = fs
  .readdirSync(FOLDER)
  .filter((name) => name.endsWith(".js") && !name.startsWith("texts-"))
  .map((name) => fs.readFileSync(new URL(name, FOLDER), "utf8"))
  .join("\n");
// Keys that are put together from a beginning and a word of the rule set, the runtime or the page.
const BEGINNINGS = [...SOURCES.matchAll(/`([a-z]+-)\$\{/g)].map(([, beginning]) => beginning);

const places = (text) => [...new Set([...text.matchAll(/\{(\w+)\}/g)].map(([, name]) => name))].sort();

test("both languages have the same keys", () => assert.deepEqual(Object.keys(es).sort(), Object.keys(en).sort()));

test("both languages fill in the same places", () => {
  for (const key of Object.keys(en)) assert.deepEqual(places(es[key]), places(en[key]), key);
});

test("every text that the page asks for is there", () => {
  const asked = [...SOURCES.matchAll(/\bsay\(\s*"([^"]+)"/g)].map(([, key]) => key);
  assert.ok(asked.length > 80);
  assert.deepEqual(
    asked.filter((key) => !(key in en)),
    [],
  );
});

test("no text is left over", () => {
  const unused = Object.keys(en).filter((key) => !SOURCES.includes(`"${key}"`) && !BEGINNINGS.some((beginning) => key.startsWith(beginning)));
  assert.deepEqual(unused, []);
});

test("every reason for which the runtime refuses a rule set has words, in both languages", () => {
  const sources = ["trust", "keeper", "receiver", "proof", "stores"]
    .map((name) => fs.readFileSync(new URL(`../${name}.js`, FOLDER), "utf8"))
    .join("\n");
  const codes = new Set([...sources.matchAll(/(?:BundleRefused|refused)\("([a-z-]+)"/g)].map(([, code]) => code));
  assert.ok(codes.size > 12);
  assert.deepEqual(
    [...codes].filter((code) => !(`refused-${code}` in en)),
    [],
  );
});

test("no text says that something is safe, dead or free of voltage", () => {
  const forbidden = /\b(safe|dead|de-energi[sz]ed|seguro|segura|muerto|desenergizado)\b/i;
  for (const texts of [en, es]) for (const [key, text] of Object.entries(texts)) assert.doesNotMatch(text, forbidden, key);
});

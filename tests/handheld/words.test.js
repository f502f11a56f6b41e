/** What is read, quoted and written: against Python's files in the folder WORDS (test_words.py makes them and runs this), and some alone. */
import assert from "node:assert/strict";
import { createHash } from "node:crypto";
import { readFileSync } from "node:fs";
import { join } from "node:path";
import { test } from "node:test";
import { RuleSet, InputProblems } from "../../rules/handheld/index.js";
import { canonicalText, digest } from "../../rules/handheld/canonical.js";
import { declaredInputs } from "../../rules/handheld/declaration.js";
import { compileIntake } from "../../rules/handheld/intake.js";
import { filled, namesIn, numberText, template } from "../../rules/handheld/phrase.js";
import { shown } from "../../rules/handheld/problems.js";
import { reader } from "../../rules/handheld/readers.js";
import { sha256 } from "../../rules/handheld/sha256.js";

const folder = process.env.WORDS;
if (!folder) throw new Error("WORDS names no folder; run test_words.py, which makes the files that this compares with");
const lines = (name) => readFileSync(join(folder, name), "utf8").trimEnd().split("\n").map((line) => JSON.parse(line));
const bundle = JSON.parse(readFileSync(join(folder, "bundle.json"), "utf8"));

function frozen(value) {
  if (value !== null && typeof value === "object") Object.values(Object.freeze(value)).forEach(frozen);
  return value;
}

function read(intake, body) {
  try {
    const { states, values, sizes, assumed, origins, titles, branch } = intake(body), plain = Object.fromEntries;
    return { states, values, sizes: plain(sizes), assumed, origins: plain(origins), titles: plain(titles), branch, digest: digest(body) };
  } catch (error) {
    if (error instanceof InputProblems) return { problems: error.problems };
    throw error;
  }
}

test("bodies spoiled in every way are read as Python reads them, and refused with its words", () => {
  const intakes = new Map(Object.keys(bundle.checks).map((check) => [check, compileIntake(bundle, check)]));
  for (const { check, body, made } of lines("intakes.jsonl")) {
    const given = JSON.stringify(body).slice(0, 3000);
    assert.deepEqual(read(intakes.get(check), frozen(body)), made, `${check} ${given}`);
  }
});

test("every field reads any value of its kind as Python does", () => {
  const declared = new Map(Object.keys(bundle.checks).map((check) => [check, declaredInputs(bundle, check).slots]));
  for (const { check, slot, branch, given, made } of lines("fields.jsonl")) {
    const { field, ...rest } = declared.get(check)[slot], problems = [];
    const value = reader(field, { field, ...rest })(given, { problems, branch }, "/x");
    assert.deepEqual({ value, problems }, made, `${check} ${rest.path} ${JSON.stringify(given)}`);
  }
});

test("the same characters are refused in a text", () => {
  const { longest, refused } = lines("characters.jsonl")[0], fails = (text) => {
    const problems = [];
    reader({ kind: "text", longest })(text, { problems }, "");
    return problems.length;
  };
  const found = [];
  for (let point = 0; point < 0x110000; point++) if (fails(String.fromCodePoint(point))) found.push(point);
  assert.deepEqual(found, refused);
  for (const letter of ["a", "é", "𝒜"]) assert.deepEqual([fails(letter.repeat(longest)), fails(letter.repeat(longest + 1))], [0, 1]);
});

test("quantities have Python's characters", () => {
  for (const [value, unit, language, text] of lines("quantities.jsonl")) {
    assert.equal(numberText(typeof value === "string" ? NaN : value, unit, bundle.units, language), text, `${value} ${unit}`);
  }
});

test("ties go up in an engine that would turn them to the even digit too", () => {
  const own = Number.prototype.toExponential, even = { 10005: "1.000e+4", 0.25: "2.500e-1", 1000.5: "1.000e+3" };
  try {
    Number.prototype.toExponential = function toExponential(digits) {
      return digits === 3 && Object.hasOwn(even, this) ? even[this] : own.call(this, digits);
    };
    assert.deepEqual([10005, 0.25, 1000.5].map((x) => numberText(x, "ratio", bundle.units, "en")), ["10010", "0.25", "1001"]);
  } finally {
    Number.prototype.toExponential = own;
  }
});

test("any value is quoted as Python quotes it", () => {
  for (const { value, shown: quoted, canonical } of lines("quoted.jsonl")) {
    assert.equal(shown(value), quoted);
    if (canonical !== null) assert.equal(canonicalText(value), canonical);
  }
});

test("sentences are filled as Python fills them", () => {
  for (const { text, language, names, said, sentence } of lines("sentences.jsonl")) {
    let turn = 0;
    const next = () => said[turn++];
    assert.deepEqual(namesIn(text), names);
    assert.equal(filled(template(text), next, next, language), sentence);
    assert.equal(turn, said.length);
  }
});

test("SHA-256 is that of Node's own library for every length around a block, and for much", () => {
  const bytes = Uint8Array.from({ length: 1_700_001 }, (_, i) => (i * 7919) >> 3);
  for (const length of [...Array(200).keys(), 16_383, 65_536, bytes.length]) {
    const part = bytes.subarray(1, 1 + length);       // at an odd place of its buffer
    assert.deepEqual(Buffer.from(sha256(part)).toString("hex"), createHash("sha256").update(part).digest("hex"), `${length} bytes`);
  }
});

test("what is not JSON is refused with words, not with a fault of the program", () => {
  const intake = compileIntake(bundle, "loop-shift"), refused = (body) => read(intake, body).problems.map((p) => `${p.code} ${p.pointer}`);
  assert.deepEqual(refused(undefined), ["wrong-type "]);
  const strange = [() => 1, Symbol("s"), 1n, new Date(NaN), NaN, -Infinity, [undefined], { a: undefined }, new Map(), Object.create({ value: 1 })];
  for (const value of strange) {
    assert.ok(refused(value).length, typeof value);
    const found = refused({ loop: value, limit_percent: value, setpoints: [value], instrument: value, extra: value });
    assert.ok(found.includes("unknown-field /extra") && found.includes("wrong-type /loop"), typeof value);
  }
});

test("names of an object's own machinery are unknown fields, and leave no trace", () => {
  const intake = compileIntake(bundle, "loop-shift");
  const body = JSON.parse('{"__proto__": {"loop": "current"}, "constructor": 1, "supply": {"__proto__": {"polluted": 1}}}');
  const unknown = read(intake, body).problems.filter((p) => p.code === "unknown-field").map((p) => p.pointer);
  assert.deepEqual(unknown, ["/supply/__proto__", "/__proto__", "/constructor"]);
  assert.equal({}.polluted, undefined);
});

test("a member that is undefined or inherited is not there", () => {
  const ruleSet = new RuleSet(new Uint8Array(readFileSync(join(folder, "bundle.json"))));
  for (const check of ruleSet.checkNames) {
    const { input } = ruleSet.data.cases.find((c) => c.check === check);
    const nothing = Object.fromEntries(bundle.checks[check].inputs.map(({ key }) => [key, undefined]));
    assert.deepEqual(ruleSet.answer(check, { ...nothing, ...input, unknown: undefined }), ruleSet.answer(check, input));
    const intake = compileIntake(bundle, check), heir = Object.create(input);
    assert.deepEqual(read(intake, heir), read(intake, {}));
  }
});

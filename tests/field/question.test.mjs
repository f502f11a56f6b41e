/** From drafts to questions: what belongs to another branch stays out, what cannot be read is a fault, what is lacking is named. */
import assert from "node:assert/strict";
import fs from "node:fs";
import test from "node:test";
import { asTyped, lackingFields, placed, question } from "../../rules/handheld/page/question.js";

const bundle = JSON.parse(fs.readFileSync(new URL("../../rules/precontact_rules/released/1.0.0.json", import.meta.url), "utf8"));
const check = bundle.checks["loading-error"];
const number = (text, spread = "", other = "") => ({ text, prefix: "", spread, other });
const read = (draft, of = check) => question(bundle, of, draft, "en");

test("a field of another branch is not part of the question, but stays in the draft", () => {
  const draft = { circuit: "thevenin", source: { resistance_ohm: number("1k") }, upper: { resistance_ohm: number("2k") }, measured: "upper" };
  assert.deepEqual(read(draft).body, { circuit: "thevenin", source: { resistance_ohm: 1000 } });
  assert.deepEqual(read({ ...draft, circuit: "divider" }).body, { circuit: "divider", measured: "upper", upper: { resistance_ohm: 2000 } });
});

test("a choice that does not go with the branch is not part of the question", () => {
  const trip = bundle.checks["device-trip"];
  assert.deepEqual(read({ protection: "relay-path", connection: "line-to-earth" }, trip).body, { protection: "relay-path" });
});

test("each form of uncertainty", () => {
  const of = (...given) => read({ circuit: "thevenin", source: { resistance_ohm: number(...given) } }).body.source.resistance_ohm;
  assert.deepEqual(of("470k", "half_width_percent", "10 %"), { value: 470000, half_width_percent: 10 });
  assert.deepEqual(of("470k", "half_width", "5k"), { value: 470000, half_width: 5000 });
  assert.deepEqual(of("470k", "standard_uncertainty", "3k"), { value: 470000, standard_uncertainty: 3000 });
  assert.deepEqual(of("420k", "between", "520k"), { between: [420000, 520000] });
});

test("half an uncertainty is a fault, and the field is left out", () => {
  for (const [given, fault, where] of [
    [number("470k", "half_width", ""), "spread-not-given", "other"],
    [number("", "half_width", "5k"), "value-not-given", ""],
    [number("470k", "between", ""), "between-half-given", "other"],
  ]) {
    const { body, faults } = read({ circuit: "thevenin", source: { resistance_ohm: given } });
    assert.deepEqual(body, { circuit: "thevenin" });
    assert.deepEqual(faults, [{ pointer: "/source/resistance_ohm", where, fault }]);
  }
});

test("a picked prefix counts as typed; two prefixes are a fault", () => {
  const of = (text, prefix) => read({ circuit: "thevenin", source: { resistance_ohm: { ...number(text), prefix } } });
  assert.equal(of("4.7", "k").body.source.resistance_ohm, 4700);
  assert.equal(of("4k7", "M").faults[0].fault, "typed-not-a-number");
});

test("a reference: an id, an id with other values, or a description", () => {
  const of = (instrument) => read({ circuit: "thevenin", instrument }).body.instrument;
  assert.equal(of({ pick: "multimeter-dc-volts", own: {} }), "multimeter-dc-volts");
  assert.deepEqual(of({ pick: "multimeter-dc-volts", own: { input_resistance_ohm: number("11M") } }), {
    id: "multimeter-dc-volts",
    input_resistance_ohm: 11e6,
  });
  assert.deepEqual(of({ pick: "*", own: { function: "voltage", earthed: "no" } }), { function: "voltage", earthed: false });
  assert.equal(of({ pick: "", own: {} }), undefined);
});

test("a curve: pairs, and a pair with one number is a fault", () => {
  const trip = bundle.checks["device-trip"];
  const of = (frequency_no_trip) => read({ protection: "residual-current", device: { pick: "*", own: { frequency_no_trip } } }, trip);
  assert.deepEqual(
    of([
      ["50", "15m"],
      ["1k", "0,1"],
      ["", ""],
    ]).body.device.frequency_no_trip,
    [
      [50, 0.015],
      [1000, 0.1],
    ],
  );
  assert.deepEqual(of([["50", ""]]).faults, [{ pointer: "/device/frequency_no_trip/0/1", fault: "pair-half-given" }]);
});

test("every item of a list is asked, an empty one too", () => {
  const draft = { circuit: "series-string", elements: [{ resistance_ohm: number("1k") }, {}] };
  const { body } = read(draft);
  assert.deepEqual(body.elements, [{ resistance_ohm: 1000 }, {}]);
  assert.deepEqual(lackingFields(bundle, check, body, "series-string"), ["/supply", "/elements/1/resistance_ohm", "/instrument"]);
});

test("what is lacking is what the declaration requires, in its order", () => {
  assert.deepEqual(lackingFields(bundle, check, { circuit: "thevenin" }, "thevenin"), ["/source/resistance_ohm", "/instrument"]);
  assert.deepEqual(lackingFields(bundle, check, { circuit: "thevenin", source: { resistance_ohm: 1 }, instrument: {} }, "thevenin"), [
    "/instrument/function",
  ]);
});

test("a pointer finds its field, and says what is left of it", () => {
  const at = placed(bundle, check, "/elements/1/resistance_ohm/value");
  assert.equal(at.field.name, "resistance");
  assert.equal(at.pointer, "/elements/1/resistance_ohm");
  assert.deepEqual(at.rest, ["value"]);
  assert.deepEqual(
    at.trail.map((step) => step.number ?? step.field.name),
    ["elements", 2, "resistance"],
  );
});

test("what was asked is listed as typed, without what does not apply", () => {
  const rows = asTyped(bundle, check, { circuit: "thevenin", source: { resistance_ohm: number("4k7") }, upper: { resistance_ohm: number("1") } });
  assert.deepEqual(
    rows.map(({ pointer }) => pointer),
    ["/circuit", "/source/resistance_ohm"],
  );
});

/** The proof on the device: worked cases, compared exactly. */
import assert from "node:assert/strict";
import { test } from "node:test";

import { difference, oneOfEach, prove } from "../../rules/handheld/proof.js";
import { CheckBlocked, RuleSet } from "../../rules/handheld/rule-set.js";
import { INDUCED, LOADING, bundle, otherwise, released } from "./publisher.js";

test("numbers are compared to the last bit, and values by kind", () => {
  const recorded = { verdict: "acceptable", findings: ["a", "b"], results: { x_volt: { value: 0.30000000000000004 }, y: null, z: { n: [1, 2] } } };
  assert.equal(difference(structuredClone(recorded), recorded), "");
  const cases = [
    [(d) => (d.results.x_volt.value = 0.3), "/results/x_volt/value is 0.3; 0.30000000000000004 is recorded"],
    [(d) => (d.results.x_volt.value = "0.30000000000000004"), "/results/x_volt/value is \"0.3"],
    [(d) => (d.results.x_volt.value = NaN), "/results/x_volt/value"],
    [(d) => (d.results.y = 0), "/results/y is 0; null"],
    [(d) => (d.results.y = {}), "/results/y is {}; null"],
    [(d) => delete d.results.y, "/results/y is absent; null is recorded"],
    [(d) => (d.results.w = null), "/results/w is null; absent is recorded"],
    [(d) => (d.results.z.n = { 0: 1, 1: 2 }), "/results/z/n"],
    [(d) => (d.results.z.n = Float64Array.of(1, 2)), "/results/z/n"],
    [(d) => d.results.z.n.push(3), "/results/z/n/2 is 3; absent"],
    [(d) => d.results.z.n.pop(), "/results/z/n/1 is absent; 2"],
    [(d) => d.findings.reverse(), "/findings/0 is \"b\"; \"a\""],
    [(d) => (d.verdict = true), "/verdict is true"],
  ];
  for (const [change, words] of cases) {
    const found = structuredClone(recorded);
    change(found);
    assert.ok(difference(found, recorded)?.startsWith(words), `${difference(found, recorded)} does not start with ${words}`);
  }
});

test("the released rule set: every worked case agrees here", () => {
  const ruleSet = new RuleSet(released()), { cases } = ruleSet.data;
  assert.deepEqual(prove(ruleSet), { agree: cases.length, of: cases.length, wrong: [] });
  assert.equal(cases.length, 366);
  assert.equal(ruleSet.blocked.size, 0);
  assert.deepEqual(oneOfEach(ruleSet).map(({ check }) => check).sort(), ruleSet.checkNames);
});

test("a check that disagrees is blocked, with the case and the difference; the others answer", () => {
  const ruleSet = new RuleSet(bundle("1.0.0", otherwise(LOADING))), [first] = ruleSet.data.cases;
  const wrong = [{ id: first.id, check: LOADING }];
  assert.deepEqual(prove(ruleSet), { agree: 2, of: 3, wrong });
  assert.throws(() => ruleSet.answer(LOADING, first.input), CheckBlocked);
  for (const words of [first.id, "/verdict is", "\"never-heard-of\" is recorded"]) assert.ok(ruleSet.blocked.get(LOADING).includes(words));
  assert.ok(ruleSet.answer(INDUCED, ruleSet.data.cases[2].input).verdict);
  // proved again, all or in part: the same count, and no block is lifted
  assert.deepEqual(prove(ruleSet), { agree: 2, of: 3, wrong });
  assert.deepEqual(prove(ruleSet, [LOADING], [ruleSet.data.cases[1]]), { agree: 1, of: 1, wrong: [] });
  assert.deepEqual(prove(ruleSet, [INDUCED]), { agree: 1, of: 1, wrong: [] });
  assert.deepEqual([...ruleSet.blocked.keys()], [LOADING]);
});

test("a case that cannot be answered at all blocks its check", () => {
  const ruleSet = new RuleSet(bundle()), [first, second] = ruleSet.data.cases, real = ruleSet.answer.bind(ruleSet);
  ruleSet.answer = (check, body) => {
    if (body === first.input) throw new Error("no such thing");
    return real(check, body);
  };
  assert.deepEqual(prove(ruleSet).wrong, [{ id: first.id, check: LOADING }]);
  assert.ok(ruleSet.blocked.get(LOADING).endsWith("on this device: no such thing"));
  assert.notEqual(second.id, first.id);
});

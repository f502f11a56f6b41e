/** Seals and key lists, against signatures that node:crypto made. */
import assert from "node:assert/strict";
import { readFileSync } from "node:fs";
import { test } from "node:test";

import { BundleRefused, check, firstKeys, openBundle, readKeys, succeedingKeys } from "../../rules/handheld/trust.js";
import { bundle, bytesOf, digestOf, keyList, madeKey, seal, signature } from "./publisher.js";

const RULE_SET = "precontact-rule-set", KEYS = "precontact-keys";
const payload = bytesOf({ some: "thing" }), key = madeKey(), other = madeKey(), trust = readKeys(keyList([key]));

/** The work is refused with this code, and these words are in the detail. */
async function refused(work, code, ...words) {
  await assert.rejects(async () => work(), (error) => {
    assert.ok(error instanceof BundleRefused, error.stack);
    assert.equal(error.code, code, error.detail);
    for (const word of words) assert.ok(error.detail.includes(word), `${JSON.stringify(word)} is not in: ${error.detail}`);
    return true;
  });
}

test("a good seal names its key, as bytes, text or object", async () => {
  const good = seal(payload, [key]);
  for (const given of [good, JSON.stringify(good), bytesOf(good)]) assert.equal(await check(trust, payload, given), key.kid);
});

test("every changed bit of payload and signature is noticed", async () => {
  const good = seal(payload, [key]), raw = Buffer.from(good.signatures[0].signature, "base64url");
  for (let bit = 0; bit < payload.length * 8; bit++) {
    const changed = payload.slice();
    changed[bit >> 3] ^= 1 << (bit & 7);
    await refused(() => check(trust, changed, good), "bytes-changed", key.kid);
  }
  for (let bit = 0; bit < 512; bit++) {
    const changed = Buffer.from(raw);
    changed[bit >> 3] ^= 1 << (bit & 7);
    const signatures = [{ ...good.signatures[0], signature: changed.toString("base64url") }];
    await refused(() => check(trust, payload, { signatures }), "bytes-changed");
  }
});

test("headers that are not the agreed one are refused", async () => {
  const cases = [
    [{ typ: KEYS }, "wrong-type", 'typ is "precontact-keys"', "precontact-rule-set is right"],
    [{ typ: undefined }, "wrong-type", "absent"],
    [{ alg: "EdDSA" }, "wrong-algorithm", 'alg is "EdDSA"', "Ed25519 is right"],
    [{ alg: "none" }, "wrong-algorithm"],
    [{ b64: true }, "malformed-seal", '[true,["b64"]]'],
    [{ b64: undefined }, "malformed-seal", '[null,["b64"]]'],
    [{ crit: ["b64", "exp"] }, "malformed-seal", '[false,["b64","exp"]]'],
    [{ crit: undefined }, "malformed-seal", '[false,null]'],
    [{ kid: undefined }, "malformed-seal", "kid is absent"],
    [{ kid: other.kid }, "unknown-key", other.kid, `a trusted key (${key.kid}) is right`],
  ];
  for (const [changed, ...refusal] of cases) await refused(() => check(trust, payload, seal(payload, [key], RULE_SET, changed)), ...refusal);
});

test("a seal of another shape is refused", async () => {
  const [good] = seal(payload, [key]).signatures, spare = { A: "B", Q: "R", g: "h", w: "x" };
  const changedEnd = good.signature.slice(0, -1) + spare[good.signature.at(-1)];     // the same 64 bytes, written with spare bits set
  assert.deepEqual(Buffer.from(changedEnd, "base64url"), Buffer.from(good.signature, "base64url"));
  const cases = [
    [undefined, "unsigned", "no seal"],
    ["", "unsigned", "no seal"],
    ["null", "malformed-seal", "1 to 16 signatures"],
    [bytesOf("{\"signatures\": [\ufffd"), "malformed-seal", "not JSON"],
    [new Uint8Array([0xff, 0xfe]), "malformed-seal", "not JSON"],
    [" ".repeat(20001), "malformed-seal", "20000 bytes"],
    [{}, "malformed-seal", "1 to 16 signatures"],
    [{ signatures: [] }, "malformed-seal", "1 to 16 signatures"],
    [{ signatures: Array(17).fill(good) }, "malformed-seal", "1 to 16 signatures"],
    [{ signatures: [good], payload: "" }, "malformed-seal", "without a payload"],
    [good, "malformed-seal", "1 to 16 signatures"],
    [{ signatures: [null] }, "malformed-seal", "signatures[0]"],
    [{ signatures: [{ ...good, header: { kid: key.kid } }] }, "malformed-seal", "an object of protected and signature is right"],
    [{ signatures: [{ ...good, signature: changedEnd }] }, "malformed-seal", "base64url of 64 bytes"],
    [{ signatures: [{ ...good, signature: `${good.signature}==` }] }, "malformed-seal", "base64url of 64 bytes"],
    [{ signatures: [{ ...good, signature: good.signature.slice(0, -2) }] }, "malformed-seal", "base64url of 64 bytes"],
    [{ signatures: [{ ...good, protected: `${good.protected}=` }] }, "malformed-seal", "protected is", "base64url is right"],
    [{ signatures: [{ ...good, protected: "AAAA" }] }, "malformed-seal", "not JSON"],
    [{ signatures: [signature(payload, key, [])] }, "malformed-seal", "protected is []", "an object is right"],
  ];
  for (const [given, ...refusal] of cases) await refused(() => check(trust, payload, given), ...refusal);
});

test("two keys are valid at once, a retired one is unknown, a revoked one is refused", async () => {
  const both = readKeys(keyList([key, other])), sealed = seal(payload, [key, other]);
  assert.equal(await check(both, payload, sealed), key.kid);
  assert.equal(await check(both, payload, seal(payload, [other])), other.kid);
  assert.equal(await check(readKeys(keyList([other])), payload, sealed), other.kid);
  await refused(() => check(trust, payload, seal(payload, [other])), "unknown-key", other.kid);
  const without = readKeys(keyList([key, other], { revoked: [key] }));
  await refused(() => check(without, payload, seal(payload, [key])), "revoked-key", key.kid, "a laptop was stolen");
  assert.equal(await check(without, payload, sealed), other.kid);
});

test("of several refusals the one that tells most is given", async () => {
  const stranger = madeKey(), changed = { ...seal(payload, [key]).signatures[0], signature: "A".repeat(86) };
  await refused(() => check(trust, payload, { signatures: [null, ...seal(payload, [stranger]).signatures, changed] }), "bytes-changed");
  const revoking = readKeys(keyList([other], { revoked: [key] }));
  await refused(() => check(revoking, payload, seal(payload, [stranger, key])), "revoked-key");
});

test("a newer key list needs the seal of a trusted key and a higher serial; what was revoked stays so", async () => {
  const sealed = (list, keys) => [bytesOf(list), seal(bytesOf(list), keys, KEYS)];
  const second = await succeedingKeys(trust, ...sealed(keyList([key, other], { serial: 2 }), [key, other]));
  assert.equal(await check(second, payload, seal(payload, [other])), other.kid);
  const third = await succeedingKeys(second, ...sealed(keyList([other], { serial: 3, revoked: [key] }), [other]));
  await refused(() => check(third, payload, seal(payload, [key])), "revoked-key");
  const fourth = await succeedingKeys(third, ...sealed(keyList([other, key], { serial: 4 }), [other]));     // forgets the revocation
  await refused(() => check(fourth, payload, seal(payload, [key])), "revoked-key");
  await refused(() => succeedingKeys(third, ...sealed(keyList([key], { serial: 4 }), [key])), "revoked-key");
  await refused(() => succeedingKeys(trust, ...sealed(keyList([other], { serial: 2 }), [other])), "unknown-key");
  await refused(() => succeedingKeys(second, ...sealed(keyList([key]), [key])), "not-newer", "serial 1", "one above 2");
  await refused(() => succeedingKeys(second, ...sealed(keyList([key], { serial: 2 }), [key])), "not-newer");
  const list = bytesOf(keyList([key, other], { serial: 5 }));
  await refused(() => succeedingKeys(trust, list, seal(list, [key], RULE_SET)), "wrong-type");       // a rule set's seal is none for keys
});

test("a first installation takes a list that one of its own keys sealed", async () => {
  const list = bytesOf(keyList([key]));
  assert.equal((await firstKeys(list, seal(list, [key], KEYS))).serial, 1);
  await refused(() => firstKeys(list, seal(list, [other], KEYS)), "unknown-key");
});

test("a malformed key list is refused with place, value and what is right", async () => {
  const good = keyList([key]), jwk = (changed) => ({ ...good, keys: [{ ...key.jwk, ...changed }] });
  const cases = [
    ["{", "not JSON"], ["[]", "the key list is []", "an object"],
    [{ ...good, serial: 0 }, "serial is 0", "a whole number from 1"], [{ ...good, serial: 1.5 }, "serial is 1.5"],
    [{ ...good, keys: {} }, "keys is {}", "a list"], [{ ...good, revoked: undefined }, "revoked is absent"],
    [{ ...good, development: 0 }, "development is 0", "true or false"],
    [{ ...good, revoked: [{ kid: key.kid }] }, "revoked[0]"], [{ ...good, keys: ["x"] }, 'keys[0] is "x"'],
    [jwk({ d: "AAAA" }), "keys[0] is \"private\"", "a public JWK"], [jwk({ crv: "X25519" }), "OKP,X25519,Ed25519,sig"],
    [jwk({ kty: "RSA" }), '"RSA,Ed25519,Ed25519,sig"', "OKP,Ed25519,Ed25519,sig is right"],
    [jwk({ alg: "EdDSA" }), "OKP,Ed25519,EdDSA,sig"], [jwk({ use: "enc" }), "Ed25519,enc"],
    [jwk({ x: "AAAA" }), "keys[0].x", "base64url of 32 bytes"],
    [jwk({ x: key.jwk.x.slice(0, -1) + "B" }), "keys[0].x"], [jwk({ kid: other.kid }), other.kid, key.kid, "thumbprint"],
  ];
  for (const [list, ...words] of cases) await refused(() => readKeys(list), "malformed-keys", ...words);
  assert.ok(readKeys(jwk({ kid: undefined, alg: undefined, use: undefined })).keys.has(key.kid));
});

test("an engine without Ed25519 may bring its own, and is told so", async () => {
  const seen = [], own = readKeys(keyList([key]), (...given) => seen.push(given) > 0), none = { value: {}, configurable: true };
  assert.equal(await check(own, payload, seal(payload, [key])), key.kid);
  const [[publicKey, mark, message]] = seen;
  assert.deepEqual(Buffer.from(publicKey), Buffer.from(key.jwk.x, "base64url"));
  assert.equal(mark.length, 64);
  assert.deepEqual(Buffer.from(message.subarray(-payload.length)), Buffer.from(payload));
  for (const answer of [false, undefined, 1]) {
    await refused(() => check(readKeys(keyList([key]), async () => answer), payload, seal(payload, [key])), "bytes-changed");
  }
  const crypto = Object.getOwnPropertyDescriptor(globalThis, "crypto");
  Object.defineProperty(globalThis, "crypto", none);
  try {
    await refused(() => check(trust, payload, seal(payload, [key])), "cannot-verify", "https", "option verify");
    const bytes = bundle();
    assert.equal((await openBundle(bytes, { seal: seal(bytes, [key]), trust: keyList([key]), verify: () => true })).digest, digestOf(bytes));
  } finally {
    Object.defineProperty(globalThis, "crypto", crypto);
  }
});

test("a seal that the service's library made verifies, and one of its neighbours does not", async () => {
  const { about, keys, payload: text, seal: made, neighbours } = JSON.parse(readFileSync(new URL("seal-vector.json", import.meta.url)));
  assert.match(about, /tests only/);
  assert.equal(await check(readKeys(keys), bytesOf(text), made), keys.keys[0].kid);
  assert.ok(neighbours.length);
  for (const { payload: changed } of neighbours) await refused(() => check(readKeys(keys), bytesOf(changed), made), "bytes-changed");
});

test("a bundle is opened once its digest and its seal are good", async () => {
  const bytes = bundle(), sealed = seal(bytes, [key]), ruleSet = await openBundle(bytes, { seal: sealed, trust, digest: digestOf(bytes) });
  assert.deepEqual([ruleSet.version, ruleSet.digest], ["1.0.0", digestOf(bytes)]);
  const changed = bytes.slice();
  changed[99] ^= 1;
  await refused(() => openBundle(changed, { seal: sealed, trust, digest: digestOf(bytes) }), "wrong-digest", digestOf(bytes), digestOf(changed));
  await refused(() => openBundle(changed, { seal: sealed, trust }), "bytes-changed");
  await refused(() => openBundle(bytes.subarray(0, 5000), { seal: sealed, trust }), "bytes-changed");
  await refused(() => openBundle(bytes, { trust }), "unsigned");
  const junk = bytesOf("never parsed unless sealed {"), unknown = bundle("1.0.0", (data) => (data.language = 2));
  await refused(() => openBundle(junk, { seal: seal(junk, [other]), trust }), "unknown-key");
  await refused(() => openBundle(junk, { seal: seal(junk, [key]), trust }), "unreadable", "is no rule set");
  await refused(() => openBundle(unknown, { seal: seal(unknown, [key]), trust }), "unknown-language", "language 2", "newer app");
});

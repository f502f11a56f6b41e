/**
 * Who vouches for the bytes of a rule set.
 *
 * A seal is a detached JWS (RFC 7515, 7797, 9864) with one Ed25519 signature for each valid key of the publisher; one good signature by a key that is
 * trusted here is enough. Nothing of a bundle is parsed before its digest and its seal have been found good.
 */
import { isObject } from "./problems.js";
import { RuleSet, UnknownLanguage } from "./rule-set.js";
import { sha256 } from "./sha256.js";

const CURVE = "Ed25519", MOST_SIGNATURES = 16, MOST_SEAL_BYTES = 20000;
const RULE_SET = "precontact-rule-set", KEYS = "precontact-keys";       // what is sealed, so that one can never be passed off as the other
const MALFORMED = "malformed-seal";
// Where several signatures are no good, the reason that tells most is given.
const TELLING = ["cannot-verify", "bytes-changed", "revoked-key", "wrong-type", "wrong-algorithm", "unknown-key", MALFORMED];

/** Bytes that are not used here: `code` for a program, `detail` in words. */
export class BundleRefused extends Error {
  /** @param {string} code @param {string} detail */
  constructor(code, detail) {
    super(`${code}: ${detail}`);
    this.code = code;
    this.detail = detail;
  }
}

const refused = (code, detail) => new BundleRefused(code, detail);
const isText = (value) => typeof value === "string" && value.trim();
export const shown = (value) => JSON.stringify(value)?.slice(0, 60) ?? "absent";

function must(code, good, place, value, right) {
  if (!good) throw refused(code, `${place} is ${shown(value)}; ${right} is right`);
}

const utf8 = (text) => new TextEncoder().encode(text);

/** "sha-256:" and the SHA-256 of these bytes in hexadecimal digits. @param {Uint8Array} bytes @returns {Promise<string>} */
export async function digestOf(bytes) {
  const subtle = globalThis.crypto?.subtle;     // many times faster where there is one
  const hash = subtle ? new Uint8Array(await subtle.digest("SHA-256", bytes)) : sha256(bytes);
  return `sha-256:${Array.from(hash, (byte) => byte.toString(16).padStart(2, "0")).join("")}`;
}

/** Base64url without padding. */
const encoded = (bytes) => btoa(String.fromCharCode(...bytes)).replace(/[+/=]/g, (c) => ({ "+": "-", "/": "_" })[c] ?? "");

/** The bytes of base64url text; none for text that no encoder writes: other characters, padding, spare bits that are set. */
function decoded(text) {
  try {
    const bytes = Uint8Array.from(atob(text.replace(/-/g, "+").replace(/_/g, "/")), (c) => c.charCodeAt());
    return encoded(bytes) === text ? bytes : [];
  } catch {
    return [];
  }
}

/** The JSON data in bytes or text; data that is parsed already is handed back. */
function parsed(given, code, what) {
  if (isObject(given) && !ArrayBuffer.isView(given)) return given;
  try {
    return JSON.parse(typeof given === "string" ? given : new TextDecoder("utf-8", { fatal: true }).decode(given));
  } catch (error) {
    throw refused(code, `${what} is not JSON: ${error.message}`);
  }
}

async function webCrypto(publicKey, signature, message) {
  try {
    const { subtle } = crypto, key = await subtle.importKey("raw", publicKey, CURVE, false, ["verify"]);
    return await subtle.verify(CURVE, key, signature, message);
  } catch (error) {
    throw refused("cannot-verify", `no Ed25519 here (${error.message}): a page needs https and a recent browser, another engine the option verify`);
  }
}

/**
 * Read a key list, unchecked by any seal: for one that is compiled in.
 * @param {Uint8Array | string | object} list
 * @param {(publicKey: Uint8Array, signature: Uint8Array, message: Uint8Array) => boolean | Promise<boolean>} [verify] for an engine without Ed25519
 * @returns {Trust} {list, serial, development, keys: kid -> 32 bytes, revoked: kid -> because, verify}: not changed by anybody
 * @throws {BundleRefused}
 */
export function readKeys(list, verify = webCrypto) {
  const code = "malformed-keys", data = parsed(list, code, "the key list"), need = (...given) => must(code, ...given);
  need(isObject(data), "the key list", data, "an object");
  const { serial, development, keys, revoked } = data;
  need(Number.isSafeInteger(serial) && serial > 0, "serial", serial, "a whole number from 1");
  need(typeof development === "boolean", "development", development, "true or false");
  need(Array.isArray(keys), "keys", keys, "a list");
  need(Array.isArray(revoked), "revoked", revoked, "a list");
  return {
    list: data, serial, development, verify,
    revoked: new Map(revoked.map((row, k) => {
      need(isText(row?.kid) && isText(row.because), `revoked[${k}]`, row, "an object of texts kid and because");
      return [row.kid, row.because];
    })),
    keys: new Map(keys.map((jwk, k) => {
      const place = `keys[${k}]`;
      need(isObject(jwk) && !("d" in jwk), place, isObject(jwk) ? "private" : jwk, "a public JWK");
      const { kty, crv, x, alg = CURVE, use = "sig" } = jwk, found = [kty, crv, alg, use].join();
      need(found === `OKP,${CURVE},${CURVE},sig`, `${place}: kty, crv, alg, use`, found, `OKP,${CURVE},${CURVE},sig`);
      const bytes = decoded(x), kid = encoded(sha256(utf8(`{"crv":"${CURVE}","kty":"OKP","x":"${x}"}`)));     // RFC 7638
      need(bytes.length === 32, `${place}.x`, x, "base64url of 32 bytes");
      need((jwk.kid ?? kid) === kid, `${place}.kid`, jwk.kid, `the thumbprint ${kid}`);
      return [kid, bytes];
    })),
  };
}

/** The trust of a first installation: a list that one of its own keys has sealed. @throws {BundleRefused} */
export async function firstKeys(list, seal, verify) {
  const trust = readKeys(list, verify);
  await check(trust, list, seal, KEYS);
  return trust;
}

/** The same keys, with these revoked too: a revoked key stays so for ever. @param {Trust} trust @param {Iterable<[string, string]>} revoked */
export const remembering = (trust, revoked) => ({ ...trust, revoked: new Map([...trust.revoked, ...revoked]) });

/**
 * The trust that takes the place of this one, from a newer key list sealed by a key of this one.
 * @param {Trust} trust @param {Uint8Array} list @param {Uint8Array | string | object} seal @returns {Promise<Trust>} @throws {BundleRefused}
 */
export async function succeedingKeys(trust, list, seal) {
  const newer = readKeys(list, trust.verify);
  await check(trust, list, seal, KEYS);
  if (newer.serial <= trust.serial) throw refused("not-newer", `the key list has serial ${newer.serial}; one above ${trust.serial} is right`);
  return remembering(newer, trust.revoked);
}

/**
 * Find who vouches for these bytes.
 * @param {Trust} trust @param {Uint8Array} payload @param {Uint8Array | string | object} seal @param {string} [typ] what the bytes are
 * @returns {Promise<string>} the kid of the key @throws {BundleRefused}
 */
export async function check(trust, payload, seal, typ = RULE_SET) {
  if (!seal) throw refused("unsigned", "there is no seal: nobody vouches for these bytes");
  if (seal.length > MOST_SEAL_BYTES) throw refused(MALFORMED, `the seal is longer than ${MOST_SEAL_BYTES} bytes`);
  const data = parsed(seal, MALFORMED, "the seal"), signatures = data?.signatures;
  if (!Array.isArray(signatures) || !signatures.length || signatures.length > MOST_SIGNATURES || "payload" in data) {
    throw refused(MALFORMED, `the seal is not an object of 1 to ${MOST_SIGNATURES} signatures without a payload`);
  }
  const refusals = [];
  for (const [k, signature] of signatures.entries()) {
    try {
      return await checkOne(trust, payload, signature, typ, `signatures[${k}]`);
    } catch (error) {
      refusals.push(error);
    }
  }
  throw refusals.sort((a, b) => TELLING.indexOf(a.code) - TELLING.indexOf(b.code))[0];
}

async function checkOne({ keys, revoked, verify }, payload, given, typ, place) {
  const need = (good, what, value, right, code = MALFORMED) => must(code, good, place + what, value, right);
  need(isObject(given) && Object.keys(given).sort().join() === "protected,signature", "", given, "an object of protected and signature");
  const written = decoded(given.protected), signature = decoded(given.signature);
  need(written.length, ".protected", given.protected, "base64url");
  need(signature.length === 64, ".signature", given.signature, "base64url of 64 bytes");
  const header = parsed(written, MALFORMED, `${place}.protected`);
  need(isObject(header), ".protected", header, "an object");
  const { alg, b64, crit, kid } = header;
  need(alg === CURVE, ".alg", alg, CURVE, "wrong-algorithm");
  need(b64 === false && shown(crit) === '["b64"]', ": b64, crit", [b64, crit], 'false,["b64"]');
  need(header.typ === typ, ".typ", header.typ, typ, "wrong-type");
  need(isText(kid), ".kid", kid, "the name of a key");
  if (revoked.has(kid)) throw refused("revoked-key", `the key ${kid} is revoked: ${revoked.get(kid)}`);
  need(keys.has(kid), ".kid", kid, `a trusted key (${[...keys.keys()].filter((name) => !revoked.has(name)).join(", ") || "none"})`, "unknown-key");
  const head = utf8(`${given.protected}.`), message = new Uint8Array(head.length + payload.length);
  message.set(head);
  message.set(payload, head.length);
  if ((await verify(keys.get(kid), signature, message)) !== true) {
    throw refused("bytes-changed", `the signature of the key ${kid} is not over these bytes: they or the seal were changed`);
  }
  return kid;
}

/**
 * The rule set in a bundle, once its digest and its seal have been found good.
 * @param {Uint8Array} bytes
 * @param {object} options
 * @param {Uint8Array | string | object} options.seal
 * @param {Trust | Uint8Array | string | object} options.trust who may vouch: what readKeys gave, or a key list that was compiled in
 * @param {string} [options.digest] what the digest must be, where it was announced
 * @param {Function} [options.verify] Ed25519 for an engine without it, as for readKeys
 * @returns {Promise<RuleSet>} @throws {BundleRefused}
 */
export async function openBundle(bytes, { seal, trust, digest, verify }) {
  const found = await digestOf(bytes);
  if ((digest ?? found) !== found) throw refused("wrong-digest", `the ${bytes.length} bytes have the digest ${found}; ${digest} is right`);
  await check(trust.verify ? trust : readKeys(trust, verify), bytes, seal);
  try {
    return new RuleSet(bytes, found);
  } catch (error) {
    if (error instanceof UnknownLanguage) throw refused("unknown-language", `${error.message}: a newer app is needed`);
    throw refused("unreadable", `the bundle is sealed, but is no rule set: ${error.message}`);
  }
}

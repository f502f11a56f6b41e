/**
 * Who vouches for the bytes of a rule set.
 *
 * A seal is a detached JWS (RFC 7515, 7797, 9864) with one Ed25519 signature for each valid key of the publisher; one good signature by a key that is
 * trusted here is enough. Nothing of a bundle is parsed before its digest and its seal have been found good.
 */
import { RuleSet, UnknownLanguage } from "./rule-set.js";
import { sha256 } from "./sha256.js";

export const RULE_SET = "precontact-rule-set", KEYS = "precontact-keys";    // what is sealed, so that one can never be passed off as the other
const CURVE = "Ed25519", ALPHABET = "ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz0123456789-_";
const MOST_SIGNATURES = 16, MOST_SEAL_BYTES = 20000;
// Where several signatures are no good, the reason that tells most is given.
const TELLING = ["cannot-verify", "bytes-changed", "revoked-key", "wrong-type", "wrong-algorithm", "unknown-key", "malformed-seal"];

/** Bytes that are not used here: `code` for a program, `detail` in words. */
export class BundleRefused extends Error {
  /** @param {string} code @param {string} detail */
  constructor(code, detail) {
    super(`${code}: ${detail}`);
    this.name = "BundleRefused";
    this.code = code;
    this.detail = detail;
  }
}

const isObject = (value) => value !== null && typeof value === "object" && !Array.isArray(value);
const isWord = (value) => typeof value === "string" && value.trim() !== "";
const shown = (value) => (value === undefined ? "absent" : JSON.stringify(value).slice(0, 60));

/** "sha-256:" and the SHA-256 of these bytes in hexadecimal digits. @param {Uint8Array} bytes @returns {Promise<string>} */
export async function digestOf(bytes) {
  const { subtle } = globalThis.crypto ?? {};     // many times faster where there is one
  const hash = subtle ? new Uint8Array(await subtle.digest("SHA-256", bytes)) : sha256(bytes);
  return `sha-256:${Array.from(hash, (byte) => byte.toString(16).padStart(2, "0")).join("")}`;
}

/** Base64url without padding. */
function encoded(bytes) {
  let text = "", held = 0, bits = 0;
  for (const byte of bytes) {
    held = (held << 8) | byte;
    for (bits += 8; bits >= 6; ) text += ALPHABET[(held >> (bits -= 6)) & 63];
    held &= 63;
  }
  return bits ? text + ALPHABET[(held << (6 - bits)) & 63] : text;
}

/** The bytes of base64url text, or null for text that no encoder writes: other characters, padding, spare bits that are set. */
function decoded(text) {
  if (typeof text !== "string" || !/^[\w-]+$/.test(text)) return null;
  const bytes = [];
  let held = 0, bits = 0;
  for (const character of text) {
    held = ((held << 6) | ALPHABET.indexOf(character)) & 0x3fff;
    if ((bits += 6) >= 8) bytes.push((held >> (bits -= 8)) & 255);
  }
  const whole = Uint8Array.from(bytes);
  return encoded(whole) === text ? whole : null;
}

/** The JSON data in bytes or text; data that is parsed already is handed back. */
function parsed(given, refuse, what) {
  if (isObject(given) && !ArrayBuffer.isView(given)) return given;
  try {
    return JSON.parse(typeof given === "string" ? given : new TextDecoder("utf-8", { fatal: true }).decode(given));
  } catch (error) {
    throw refuse(`${what} is not JSON: ${error.message}`);
  }
}

const malformed = (detail) => new BundleRefused("malformed-seal", detail);
const badKeys = (detail) => new BundleRefused("malformed-keys", detail);

async function webCrypto(publicKey, signature, message) {
  try {
    const { subtle } = globalThis.crypto, key = await subtle.importKey("raw", publicKey, CURVE, false, ["verify"]);
    return await subtle.verify(CURVE, key, signature, message);
  } catch (error) {
    throw new BundleRefused("cannot-verify", `this engine cannot verify an Ed25519 signature (${error.message}); ` +
      "a page needs https or localhost and a browser of 2025 or later, another engine the option verify");
  }
}

/** The 32 bytes of a public JWK whose kid, where it has one, is its RFC 7638 thumbprint. */
function publicKey(jwk, place) {
  if (!isObject(jwk)) throw badKeys(`${place} is ${shown(jwk)}; a public JWK is right`);
  if ("d" in jwk) throw badKeys(`${place} holds a private key; a list that is given away holds public ones`);
  const { kty, crv, alg = CURVE, use = "sig" } = jwk;
  for (const [name, found, right] of [["kty", kty, "OKP"], ["crv", crv, CURVE], ["alg", alg, CURVE], ["use", use, "sig"]]) {
    if (found !== right) throw badKeys(`${place}.${name} is ${shown(found)}; "${right}" is right`);
  }
  const bytes = decoded(jwk.x);
  if (bytes?.length !== 32) throw badKeys(`${place}.x is ${shown(jwk.x)}; the public key in 43 base64url characters is right`);
  const kid = encoded(sha256(new TextEncoder().encode(`{"crv":"${CURVE}","kty":"OKP","x":"${jwk.x}"}`)));
  if ((jwk.kid ?? kid) !== kid) throw badKeys(`${place}.kid is ${shown(jwk.kid)}; ${kid}, the thumbprint of the key, is right`);
  return [kid, bytes];
}

/** The keys that may vouch, and those that never again may. Immutable. */
export class Trust {
  /** Made by `read`, `first` and `succeeding`. */
  constructor(list, keys, revoked, verify) {
    this.list = list;               // the document
    this.serial = list.serial;
    this.development = list.development;    // an ephemeral key: say so loudly
    this.keys = keys;               // kid -> 32 bytes
    this.revoked = revoked;         // kid -> because
    this.verify = verify;
  }

  /**
   * The trust that a key list gives, unchecked by any seal: for a list that is compiled in.
   * @param {Uint8Array | string | object} list
   * @param {(publicKey: Uint8Array, signature: Uint8Array, message: Uint8Array) => boolean | Promise<boolean>} [verify] for an engine without Ed25519
   * @throws {BundleRefused}
   */
  static read(list, verify = webCrypto) {
    const what = "the key list", data = parsed(list, badKeys, what);
    if (!isObject(data)) throw badKeys(`${what} is ${shown(data)}; an object with serial, keys, revoked and development is right`);
    const { serial, keys: jwks, revoked: gone, development } = data;
    if (!Number.isSafeInteger(serial) || serial < 1) throw badKeys(`${what}.serial is ${shown(serial)}; a whole number from 1 upwards is right`);
    for (const [name, rows] of [["keys", jwks], ["revoked", gone]]) {
      if (!Array.isArray(rows)) throw badKeys(`${what}.${name} is ${shown(rows)}; a list is right`);
    }
    if (typeof development !== "boolean") throw badKeys(`${what}.development is ${shown(development)}; true or false is right`);
    const keys = new Map(jwks.map((jwk, k) => publicKey(jwk, `${what}.keys[${k}]`)));
    const revoked = new Map(gone.map((row, k) => {
      if (!isWord(row?.kid) || !isWord(row.because)) throw badKeys(`${what}.revoked[${k}] is ${shown(row)}; texts kid and because are right`);
      return [row.kid, row.because];
    }));
    return new Trust(data, keys, revoked, verify);
  }

  /** The trust of a first installation: a list that one of its own keys has sealed. @throws {BundleRefused} */
  static async first(list, seal, verify) {
    const trust = Trust.read(list, verify);
    await trust.check(list, seal, KEYS);
    return trust;
  }

  /** The same keys, with these revoked too: a revoked key stays so for ever. @param {Iterable<[string, string]>} revoked */
  remembering(revoked) {
    return new Trust(this.list, this.keys, new Map([...this.revoked, ...revoked]), this.verify);
  }

  /**
   * The trust that takes the place of this one, from a newer key list sealed by a key of this one.
   * @param {Uint8Array} list @param {Uint8Array | string | object} seal @returns {Promise<Trust>} @throws {BundleRefused}
   */
  async succeeding(list, seal) {
    const newer = Trust.read(list, this.verify);
    await this.check(list, seal, KEYS);
    if (newer.serial <= this.serial) throw new BundleRefused("not-newer", `its serial is ${newer.serial}; one above ${this.serial} is right`);
    return newer.remembering(this.revoked);
  }

  /**
   * Find who vouches for these bytes.
   * @param {Uint8Array} payload @param {Uint8Array | string | object} seal @param {string} [typ] what the bytes are
   * @returns {Promise<string>} the kid of the key @throws {BundleRefused}
   */
  async check(payload, seal, typ = RULE_SET) {
    if (seal === undefined || seal === null) throw new BundleRefused("unsigned", "there is no seal; bytes that nobody vouches for are not used");
    if (seal.length > MOST_SEAL_BYTES) throw malformed(`the seal is ${seal.length} bytes long; at most ${MOST_SEAL_BYTES} are read`);
    const data = parsed(seal, malformed, "the seal"), { signatures } = data ?? {};
    if (!Array.isArray(signatures) || !signatures.length || signatures.length > MOST_SIGNATURES) {
      throw malformed(`the seal has no list of 1 to ${MOST_SIGNATURES} signatures`);
    }
    if ("payload" in data) throw malformed("the seal carries a payload of its own; a detached one has none");
    const refusals = [];
    for (const [k, signature] of signatures.entries()) {
      try {
        return await this.#checked(payload, signature, typ, `signatures[${k}]`);
      } catch (error) {
        if (!(error instanceof BundleRefused)) throw error;
        refusals.push(error);
      }
    }
    throw refusals.sort((a, b) => TELLING.indexOf(a.code) - TELLING.indexOf(b.code))[0];
  }

  async #checked(payload, given, typ, place) {
    if (!isObject(given) || Object.keys(given).sort().join() !== "protected,signature") {
      throw malformed(`${place} is not an object of protected and signature alone`);
    }
    const written = decoded(given.protected), signature = decoded(given.signature);
    if (!written) throw malformed(`${place}.protected is not base64url`);
    if (signature?.length !== 64) throw malformed(`${place}.signature is not 64 bytes of base64url`);
    const header = parsed(written, malformed, `${place}.protected`);
    if (!isObject(header)) throw malformed(`${place}.protected does not hold an object`);
    const { alg, b64, crit, kid } = header;
    if (alg !== CURVE) throw new BundleRefused("wrong-algorithm", `${place} is made with ${shown(alg)}; "${CURVE}" is right`);
    if (b64 !== false || JSON.stringify(crit) !== '["b64"]') {
      throw malformed(`${place} has b64 ${shown(b64)} and crit ${shown(crit)}; false and ["b64"], the bytes as they are, are right`);
    }
    if (header.typ !== typ) throw new BundleRefused("wrong-type", `${place} seals a ${shown(header.typ)}; "${typ}" is right`);
    if (!isWord(kid)) throw malformed(`${place} names no key`);
    if (this.revoked.has(kid)) throw new BundleRefused("revoked-key", `the key ${kid} is revoked: ${this.revoked.get(kid)}`);
    const key = this.keys.get(kid);
    if (!key) {
      const trusted = [...this.keys.keys()].filter((name) => !this.revoked.has(name)).join(", ") || "none";
      throw new BundleRefused("unknown-key", `the key ${kid.slice(0, 60)} is not trusted; trusted: ${trusted}`);
    }
    const head = new TextEncoder().encode(`${given.protected}.`), message = new Uint8Array(head.length + payload.length);
    message.set(head);
    message.set(payload, head.length);
    if ((await this.verify(key, signature, message)) !== true) {
      throw new BundleRefused("bytes-changed", `the signature of the key ${kid} is not over these bytes: they or the seal were changed`);
    }
    return kid;
  }
}

/**
 * The rule set in a bundle, once its digest and its seal have been found good.
 * @param {Uint8Array} bytes
 * @param {object} options
 * @param {Uint8Array | string | object} options.seal
 * @param {Trust | Uint8Array | string | object} options.trust who may vouch: a Trust, or a key list that was compiled in
 * @param {string} [options.digest] what the digest must be, where it was announced
 * @param {Function} [options.verify] Ed25519 where WebCrypto has none, as for Trust.read
 * @returns {Promise<RuleSet>} @throws {BundleRefused}
 */
export async function openBundle(bytes, { seal, trust, digest, verify }) {
  const found = await digestOf(bytes);
  if (digest !== undefined && digest !== found) {
    throw new BundleRefused("wrong-digest", `the digest of the ${bytes.length} bytes is ${found}; ${digest} is right: they were changed`);
  }
  await (trust instanceof Trust ? trust : Trust.read(trust, verify)).check(bytes, seal);
  try {
    return new RuleSet(bytes, found);
  } catch (error) {
    if (error instanceof UnknownLanguage) throw new BundleRefused("unknown-language", `${error.message}; a newer app is needed`);
    throw new BundleRefused("unreadable", `the bundle is sealed, but is no rule set: ${error.message}`);
  }
}

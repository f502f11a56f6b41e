/** A publisher as the tests need one: keys and seals made with node:crypto alone, small bundles, and a server that answers `fetch`. */
import { createHash, generateKeyPairSync, sign } from "node:crypto";
import { readFileSync } from "node:fs";

const RELEASED = readFileSync(new URL("../../rules/precontact_rules/released/1.0.0.json", import.meta.url));
export const LOADING = "loading-error", INDUCED = "induced-voltage";

export const released = () => new Uint8Array(RELEASED);
export const digestOf = (bytes) => `sha-256:${createHash("sha256").update(bytes).digest("hex")}`;
export const bytesOf = (data) => new Uint8Array(Buffer.from(typeof data === "string" ? data : JSON.stringify(data)));
const base64url = (data) => Buffer.from(data).toString("base64url");

/** A new key: {kid, jwk, sign(message)}. */
export function madeKey() {
  const { publicKey, privateKey } = generateKeyPairSync("ed25519"), { kty, crv, x } = publicKey.export({ format: "jwk" });
  const kid = createHash("sha256").update(JSON.stringify({ crv, kty, x })).digest("base64url");
  return { kid, jwk: { kty, crv, x, kid, alg: "Ed25519", use: "sig" }, sign: (message) => sign(null, message, privateKey) };
}

/** The JWS header of a seal, with members changed. */
export const header = (key, typ, changed = {}) => ({ alg: "Ed25519", b64: false, crit: ["b64"], kid: key.kid, typ, ...changed });

/** One signature over these bytes under exactly this header. */
export function signature(payload, key, head) {
  const part = base64url(JSON.stringify(head));
  return { protected: part, signature: base64url(key.sign(Buffer.concat([Buffer.from(`${part}.`), payload]))) };
}

/** The seal of these bytes by these keys, as an object. */
export function seal(payload, keys, typ = "precontact-rule-set", changed = {}) {
  return { signatures: keys.map((key) => signature(payload, key, header(key, typ, changed))) };
}

/** A key list document. */
export function keyList(keys, { serial = 1, revoked = [], development = false } = {}) {
  return { serial, keys: keys.map(({ jwk }) => jwk), revoked: revoked.map((key) => ({ kid: key.kid, because: "a laptop was stolen" })), development };
}

/** A bundle of this version with two checks and three of their worked cases, further changed by a function. */
export function bundle(version = "1.0.0", change = () => {}) {
  const data = JSON.parse(RELEASED), { cases } = data;
  const some = [...cases.filter(({ check }) => check === LOADING).slice(0, 2), cases.find(({ check }) => check === INDUCED)];
  Object.assign(data, { version, cases: some, checks: { [LOADING]: data.checks[LOADING], [INDUCED]: data.checks[INDUCED] } });
  change(data);
  return bytesOf(data);
}

/** A change for `bundle`: the recorded answer of this check's first case is another one. */
export const otherwise = (check) => (data) => {
  data.cases.find((one) => one.check === check).answer.verdict = "never-heard-of";
};

/** The files of a rule-set/ folder, and what was asked of them. */
export class Server {
  files = new Map();
  asked = [];
  address = "https://publisher.example/field/rule-set/";

  constructor(keys, options) {
    this.keys = keys;
    this.publishKeys(keyList(keys, options));
  }

  /** The key list, sealed by these keys. */
  publishKeys(list, by = this.keys) {
    const bytes = bytesOf(list);
    this.files.set("keys.json", bytes);
    this.files.set("keys.seal.json", bytesOf(seal(bytes, by, "precontact-keys")));
  }

  /** A bundle, sealed by these keys, as the latest one. */
  publish(bytes, { by = this.keys, version = JSON.parse(Buffer.from(bytes)).version, ...more } = {}) {
    this.files.set(`${version}.json`, bytes);
    this.files.set(`${version}.seal.json`, bytesOf(seal(bytes, by)));
    this.announce({ version, digest: digestOf(bytes), bytes: bytes.length, bundle: `${version}.json`, seal: `${version}.seal.json`,
      deprecated: null, sunset: null, because: null, ...more });
    return digestOf(bytes);
  }

  announce(latest) {
    this.latest = latest;
    this.files.set("latest.json", bytesOf(latest));
  }

  /** How often a file was asked for. */
  count(name) {
    return this.asked.filter((one) => one.name === name).length;
  }

  /** What a browser's fetch would give; `alter` may be set to give something else for a name. */
  fetch = async (address, { headers = {} } = {}) => {
    const name = address.slice(this.address.length), altered = await this.alter?.(name), bytes = this.files.get(name);
    this.asked.push({ name, headers });
    if (altered) return altered;
    if (!bytes) return new Response("", { status: 404 });
    const tag = `"${digestOf(bytes)}"`;
    return headers["If-None-Match"] === tag ? new Response(null, { status: 304 }) : new Response(bytes.slice(), { headers: { ETag: tag } });
  };
}

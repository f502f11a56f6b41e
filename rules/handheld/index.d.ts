/** Precontact on the device: a released rule set answers without network, with the service's numbers and the service's documents. */

export type Language = "en" | "es";
export type Verdict = "acceptable" | "conditional" | "unacceptable" | "undetermined";
export type Value = number | string | boolean | null | { re: number; im: number };

/** One number of an answer, in the unit that its name ends with; `low` and `high` hold 95 % of what the uncertain inputs allow. */
export interface Result {
  id?: string;
  title?: string;
  value: Value;
  low?: number | null;
  high?: number | null;
  /** why there is no value */
  reason?: string;
}

/** What the service answers too, member for member. To be read, not changed. */
export interface Answer {
  check: string;
  rule_set: { version: string; digest: string };
  input_digest: string;
  verdict: Verdict;
  /** the first one decided */
  findings: { code: string; verdict: Verdict | "note"; sentence: string }[];
  results: Record<string, Result | Result[]>;
  working: Record<string, unknown>[];
  assumptions: { because: string; input?: string; value?: Value; unit?: string | null }[];
  cautions: { id: string; word: "danger" | "warning" | "caution" | "notice"; text: string }[];
  /** numbers without a citable source on which the verdict rests */
  unverified: { name: string; source: string; standing: string }[];
}

/** One fault of a request body: a JSON pointer to it, a code, and words. */
export interface Problem {
  pointer: string;
  code: string;
  detail: string;
}

/** A request body that cannot be answered, with every fault that was found. */
export class InputProblems extends Error {
  constructor(problems: Problem[]);
  problems: Problem[];
}

/** The rule set has no check of this name. */
export class UnknownCheck extends Error {}

/** The check gave another answer than its rule set records for a worked case: it must not be used on this device. */
export class CheckBlocked extends Error {}

/** The bundle was written for another version of the rule language. */
export class UnknownLanguage extends Error {}

/** The version of the rule language that this engine speaks. */
export const LANGUAGE: number;

/** A rule set that answers. The bytes are not verified here: see openBundle. */
export class RuleSet {
  /** @throws {UnknownLanguage} */
  constructor(bytes: Uint8Array, digest?: string);
  readonly bytes: Uint8Array;
  readonly digest: string;
  readonly version: string;
  /** the parsed bundle */
  readonly data: Record<string, any>;
  readonly checkNames: string[];
  /** checks that disagreed with a worked case here, and why */
  readonly blocked: Map<string, string>;
  /** Give back the memory of what was compiled for earlier questions; the next ones take a little longer. */
  forget(): void;
  /** @throws {InputProblems} @throws {UnknownCheck} @throws {CheckBlocked} */
  answer(check: string, body: object, language?: Language): Answer;
}

/** A number in SI with its unit, to four significant digits; `units` is those of a bundle. */
export function numberText(value: number | null, unit: string, units: Record<string, any>, language: Language): string;

/** RFC 8785 text of JSON data. */
export function canonicalText(data: unknown): string;

/** The digest of JSON data: "sha-256:" and 64 hexadecimal digits of its canonical bytes. */
export function digest(data: unknown): string;

export type RefusalCode =
  | "unsigned" | "malformed-seal" | "malformed-keys" | "wrong-type" | "wrong-algorithm" | "unknown-key" | "revoked-key" | "bytes-changed"
  | "cannot-verify" | "not-newer" | "wrong-version" | "wrong-digest" | "truncated" | "too-long" | "unreadable" | "unknown-language" | "disagrees"
  | "nothing-installed" | "damaged" | "storage-full" | "storage-failed" | "unreachable";

export interface Refusal {
  code: RefusalCode;
  detail: string;
}

/** Bytes that are not used: a code for a program, and words for a person. */
export class BundleRefused extends Error implements Refusal {
  constructor(code: RefusalCode, detail: string);
  code: RefusalCode;
  detail: string;
}

/** Ed25519 (RFC 8032) for an engine whose WebCrypto has none: 32, 64 and any number of bytes. */
export type Verify = (publicKey: Uint8Array, signature: Uint8Array, message: Uint8Array) => boolean | Promise<boolean>;

/** The key list document: which public keys may vouch, and which never again may. */
export interface KeyList {
  /** a whole number that only rises */
  serial: number;
  keys: { kty: string; crv: string; x: string; kid?: string; alg?: string; use?: string }[];
  revoked: { kid: string; because: string }[];
  /** an ephemeral key: say so loudly */
  development: boolean;
}

/** A detached JWS with one Ed25519 signature for each valid key of the publisher. */
export interface Seal {
  signatures: { protected: string; signature: string }[];
}

/** Who is trusted here. Not to be changed. */
export interface Trust {
  readonly list: KeyList;
  readonly serial: number;
  readonly development: boolean;
  readonly keys: ReadonlyMap<string, Uint8Array>;
  readonly revoked: ReadonlyMap<string, string>;
  readonly verify: Verify;
}

/** Read a key list, unchecked by any seal: for one that is compiled in. @throws {BundleRefused} */
export function readKeys(list: Uint8Array | string | KeyList, verify?: Verify): Trust;

/** The rule set in a bundle, once its digest and its seal have been found good. Rejects with BundleRefused. */
export function openBundle(
  bytes: Uint8Array,
  options: { seal: Uint8Array | string | Seal; trust: Trust | Uint8Array | string | KeyList; digest?: string; verify?: Verify },
): Promise<RuleSet>;

/** How many of how many worked cases agree exactly, and which do not. */
export interface Proof {
  agree: number;
  of: number;
  wrong: { id: string; check: string }[];
}

/** Answer the worked cases of these checks (all by default) and block each check that disagrees. */
export function prove(ruleSet: RuleSet, checks?: string[], cases?: object[]): Proof;

/** What is said of a rule set's retirement; dates are ISO dates. Not sealed: show it as text. */
export interface Notice {
  deprecated: string | null;
  sunset: string | null;
  because: { en: string; es: string } | null;
}

/** Where a Keeper keeps its bytes. A put is whole or not at all, and may reject for want of room with a QuotaExceededError or ENOSPC. */
export interface Store {
  get(name: string): Promise<Uint8Array | undefined>;
  put(name: string, bytes: Uint8Array): Promise<unknown>;
  remove(name: string): Promise<unknown>;
  names(): Promise<string[]>;
}

/** Kept in memory. */
export class MemoryStore implements Store {
  get(name: string): Promise<Uint8Array | undefined>;
  put(name: string, bytes: Uint8Array): Promise<void>;
  remove(name: string): Promise<void>;
  names(): Promise<string[]>;
}

/** Kept in a browser's IndexedDB, in a database of this name that belongs to the store alone. */
export class IndexedDbStore implements Store {
  constructor(name?: string);
  get(name: string): Promise<Uint8Array | undefined>;
  put(name: string, bytes: Uint8Array): Promise<void>;
  remove(name: string): Promise<void>;
  names(): Promise<string[]>;
}

export interface Answering {
  ruleSet: RuleSet;
  proof: Proof;
  trust: Trust;
  notice: Notice | null;
}

export interface Started extends Answering {
  /** of the bundle */
  bytes: number;
  milliseconds: number;
  /** why the bundle before the last one answers, or null */
  reason: Refusal | null;
}

/** What an update did; the members of Answering are there where a rule set answers after it. */
export interface Updated extends Partial<Answering> {
  state: "installed" | "updated" | "current" | "refused" | "unreachable";
  /** of what answers after it */
  version: string | null;
  digest: string | null;
  /** received */
  bytes: number;
  milliseconds: number;
  /** why it was refused or unreachable */
  reason?: Refusal;
}

/** Keeps and updates the rule set of one device. */
export class Keeper {
  constructor(options: {
    store: Store;
    /** address of the folder rule-set/ of a service or of a static export */
    base: string;
    fetch?: (address: string, options: { headers?: Record<string, string>; cache?: "no-cache"; signal?: AbortSignal }) => Promise<Response>;
    /** the key list that is compiled in; without one the first list found is trusted */
    pins?: Uint8Array | string | KeyList;
    verify?: Verify;
    /** name and version of the JavaScript engine, where it cannot be found out: a proof holds for one */
    engine?: string;
  });

  /** Open what is installed, without network. Rejects with BundleRefused where nothing usable is installed. */
  start(): Promise<Started>;

  /** Ask for the latest rule set and install it if it is another one. Never rejects for what network, server or storage do. */
  update(options?: { signal?: AbortSignal; allowOlder?: boolean }): Promise<Updated>;
}

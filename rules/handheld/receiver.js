/** What a Keeper receives: small documents and bundles of a rule-set/ folder, each read to a limit, and the bytes counted. */
import { BundleRefused } from "./trust.js";

const MOST_DOCUMENT_BYTES = 1 << 16, MOST_BUNDLE_BYTES = 1 << 26;

const unreadable = (name, detail) => new BundleRefused("unreadable", `${name} ${detail}; is this the address of a rule-set/ folder?`);

/** Reads from one folder. */
export class Receiver {
  #base;
  #fetch;
  #signal;

  constructor(base, fetch, signal) {
    this.#base = base.endsWith("/") ? base : `${base}/`;
    this.#fetch = fetch;
    this.#signal = signal;
    this.bytes = 0;
  }

  /** The same, with a count of its own. */
  counting(signal) {
    return new Receiver(this.#base, this.#fetch, signal);
  }

  /** What latest.json says. It is not sealed: the bundle must bear it out. */
  async latest() {
    const name = "latest.json", bytes = await this.bytesOf(name);
    let data;
    try {
      data = JSON.parse(new TextDecoder().decode(bytes));
    } catch (error) {
      throw unreadable(name, `is not JSON: ${error.message}`);
    }
    const right = { version: /^\d+\.\d+\.\d+$/, digest: /^sha-256:[0-9a-f]{64}$/, bundle: /^\w[\w.-]*$/, seal: /^\w[\w.-]*$/ };
    for (const [member, pattern] of Object.entries(right)) {
      const value = data?.[member];
      if (typeof value !== "string" || !pattern.test(value)) throw unreadable(name, `has ${member} ${JSON.stringify(value)?.slice(0, 80)}`);
    }
    if (!(Number.isSafeInteger(data.bytes) && data.bytes > 0 && data.bytes <= MOST_BUNDLE_BYTES)) {
      throw unreadable(name, `has bytes ${JSON.stringify(data.bytes)}; a whole number from 1 to ${MOST_BUNDLE_BYTES} is right`);
    }
    return { ...data, notice: noticeOf(data) };
  }

  /** A small file, whole. */
  async bytesOf(name) {
    return this.#body(name, await this.#answer(name));
  }

  /** The text of a seal. */
  async seal(name) {
    const response = await this.#answer(name, {}, [404]);
    if (response.status === 404) throw new BundleRefused("unsigned", `there is no seal ${name}; bytes that nobody vouches for are not used`);
    return new TextDecoder().decode(await this.#body(name, response));
  }

  /** The bundle that was announced, or null where the server says that it is the one of this digest. */
  async bundle({ bundle, bytes, digest }, held) {
    const response = await this.#answer(bundle, held ? { "If-None-Match": `"${held}"` } : {}, [304]);
    if (response.status === 304) return null;
    const found = await this.#body(bundle, response, bytes);
    if (found.length < bytes) throw new BundleRefused("truncated", `${found.length} of ${bytes} bytes of ${bundle} (${digest}) arrived; try again`);
    return found;
  }

  async #answer(name, headers = {}, others = []) {
    const fetch = this.#fetch;      // a browser's own is not to be called as a method
    let response;
    try {
      response = await fetch(this.#base + name, { headers, cache: "no-cache", signal: this.#signal });
    } catch (error) {
      throw new BundleRefused("unreachable", `${name} could not be asked for: ${error.message}`);
    }
    const { ok, status } = response;
    if (!ok && !others.includes(status)) throw new BundleRefused("unreachable", `the server answered ${status} for ${name}`);
    return response;
  }

  /** The bytes of an answer, no more than `most`. One that breaks off is handed back as far as it came where the caller knows its length. */
  async #body(name, response, most) {
    const limit = most ?? MOST_DOCUMENT_BYTES, parts = [], reader = response.body?.getReader?.();
    let length = 0;
    const take = (part) => {
      parts.push(part);
      length += part.length;
      this.bytes += part.length;
      if (length > limit) throw new BundleRefused("too-long", `${name} is longer than ${limit} bytes`);
    };
    try {
      if (!reader) take(new Uint8Array(await response.arrayBuffer()));        // engines that hand over no stream
      else for (let next; !(next = await reader.read()).done; ) take(next.value);
    } catch (error) {
      reader?.cancel().catch(() => {});
      if (error instanceof BundleRefused) throw error;
      if (most === undefined) throw new BundleRefused("unreachable", `${name} broke off after ${length} bytes: ${error.message}`);
    }
    const whole = new Uint8Array(length);
    let at = 0;
    for (const part of parts) {
      whole.set(part, at);
      at += part.length;
    }
    return whole;
  }
}

/** What latest.json says of the retirement of its rule set, or null. */
function noticeOf({ deprecated, sunset, because }) {
  const date = (value) => (typeof value === "string" && /^\d{4}-\d\d-\d\d$/.test(value) ? value : null);
  const { en, es } = because ?? {}, texts = typeof en === "string" && typeof es === "string" ? { en, es } : null;
  return date(deprecated) || date(sunset) ? { deprecated: date(deprecated), sunset: date(sunset), because: texts } : null;
}

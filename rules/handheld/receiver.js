/** What a Keeper receives: small documents and bundles of a rule-set/ folder, each read to a limit, and the bytes counted. */
import { BundleRefused, shown } from "./trust.js";

const MOST_DOCUMENT_BYTES = 1 << 16, DATE = /^\d{4}-\d\d-\d\d$/, FILE = /^[\w-][\w.-]*\.json$/;
const ANNOUNCED = { version: /^\d+\.\d+\.\d+$/, digest: /^sha-256:[0-9a-f]{64}$/, bytes: /^[1-9]\d{0,7}$/, bundle: FILE, seal: FILE };

/** Functions that read from one folder, and what they count together. */
export function receiver(base, fetch, signal) {
  const counted = { bytes: 0 };

  async function answered(name, headers, also) {
    let response;
    try {
      response = await fetch(`${base}/${name}`, { headers, cache: "no-cache", signal });
    } catch (error) {
      throw new BundleRefused("unreachable", `${name} could not be fetched: ${error.message}`);
    }
    const { ok, status } = response;
    if (!ok && status !== also) throw new BundleRefused("unreachable", `the server answered ${status} for ${name}`);
    return response;
  }

  /** The bytes of an answer, no more than `most`; a bundle that breaks off is handed back as far as it came. */
  async function bytesOf(response, name, most) {
    const reader = response.body?.getReader(), whole = new Uint8Array(most);
    let length = 0;
    const take = (part) => {
      counted.bytes += part.length;
      if (length + part.length > most) throw new BundleRefused("too-long", `${name} is longer than ${most} bytes`);
      whole.set(part, length);
      length += part.length;
    };
    try {
      if (!reader) take(new Uint8Array(await response.arrayBuffer()));        // engines that hand over no stream
      else for (let next; !(next = await reader.read()).done; ) take(next.value);
    } catch (error) {
      reader?.cancel().catch(() => {});
      if (error.detail) throw error;
      if (most === MOST_DOCUMENT_BYTES) throw new BundleRefused("unreachable", `${name} broke off: ${error.message}`);
    }
    return whole.slice(0, length);
  }

  /** A small file. */
  const document = async (name) => bytesOf(await answered(name), name, MOST_DOCUMENT_BYTES);

  return {
    counted,
    document,

    /** What latest.json says. It is not sealed: the bundle must bear it out. */
    async latest() {
      let data;
      try {
        data = JSON.parse(new TextDecoder().decode(await document("latest.json")));
      } catch (error) {
        if (error.detail) throw error;
      }
      const wrong = Object.keys(ANNOUNCED).find((member) => !ANNOUNCED[member].test(data?.[member]));
      if (wrong) throw new BundleRefused("unreadable", `${wrong} of latest.json is ${shown(data?.[wrong])}; is this a rule-set/ folder?`);
      const { deprecated, sunset, because } = data, date = (text) => (DATE.test(text) ? text : null);
      const notice = { deprecated: date(deprecated), sunset: date(sunset), because: because?.en && because.es ? because : null };
      return { ...data, notice: notice.deprecated || notice.sunset ? notice : null };
    },

    /** The text of a seal. */
    async seal(name) {
      const response = await answered(name, {}, 404);
      if (response.status === 404) throw new BundleRefused("unsigned", `there is no ${name}: nobody vouches for these bytes`);
      return new TextDecoder().decode(await bytesOf(response, name, MOST_DOCUMENT_BYTES));
    },

    /** The bundle that was announced, or null where the server says that it is the one of this digest. */
    async bundle({ bundle, bytes }, held) {
      const response = await answered(bundle, held && { "If-None-Match": `"${held}"` }, 304);
      if (response.status === 304) return null;
      const found = await bytesOf(response, bundle, bytes);
      if (found.length < bytes) throw new BundleRefused("truncated", `${found.length} of ${bytes} bytes of ${bundle} arrived; try again`);
      return found;
    },
  };
}

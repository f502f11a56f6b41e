/** Canonical JSON (RFC 8785) and the digest of a request. */
import { sha256 } from "./sha256.js";

const encoder = new TextEncoder();
const HEX = Array.from({ length: 256 }, (_, b) => b.toString(16).padStart(2, "0"));

/** RFC 8785 text of JSON data. A member that is undefined is not there. @param {unknown} data @returns {string} */
export function canonicalText(data) {
  if (Array.isArray(data)) return `[${data.map(canonicalText)}]`;
  if (data === null || typeof data !== "object") return JSON.stringify(data ?? null);
  return `{${Object.keys(data).sort().filter((k) => data[k] !== undefined).map((k) => `${JSON.stringify(k)}:${canonicalText(data[k])}`)}}`;
}

/** "sha-256:" and 64 hexadecimal digits of some bytes. @param {Uint8Array} bytes */
export const digestOf = (bytes) => sha256(bytes).reduce((text, b) => text + HEX[b], "sha-256:");

/** The digest of JSON data: that of its canonical bytes. @param {unknown} data */
export const digest = (data) => digestOf(encoder.encode(canonicalText(data)));

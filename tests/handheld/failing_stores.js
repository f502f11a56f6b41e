/** Stores that fail as devices do. */
import { MemoryStore } from "../../rules/handheld/stores.js";

/** A store over the entries of another one, on which every operation may be counted and spoilt. */
export class Watched {
  operations = 0;

  constructor(under = new MemoryStore(), before = () => {}) {
    this.under = under;
    this.before = before;
  }

  async #run(name, ...given) {
    await this.before({ name, given, number: this.operations++, under: this.under });
    return this.under[name](...given);
  }

  get = (name) => this.#run("get", name);
  put = (name, bytes) => this.#run("put", name, bytes);
  remove = (name) => this.#run("remove", name);
  names = () => this.#run("names");
}

/** The power fails at operation number `at`: before it is done, after it is done, or in the middle of a write; nothing works after it. */
export function failingAt(under, at, way) {
  return new Watched(under, async ({ name, given, number }) => {
    if (number < at) return;
    if (number === at && way === "after") await under[name](...given);
    if (number === at && way === "middle" && name === "put") await under.put(given[0], given[1].slice(0, given[1].length >> 1));
    throw new Error("the power failed");
  });
}

/** There is room for so many bytes. */
export function withRoomFor(most, under = new MemoryStore()) {
  return new Watched(under, async ({ name, given: [entry, bytes] }) => {
    if (name !== "put") return;
    let used = bytes.length;
    for (const other of await under.names()) if (other !== entry) used += (await under.get(other)).length;
    if (used > most) throw new DOMException("The quota has been exceeded.", "QuotaExceededError");
  });
}

/** Flip one bit of an entry. */
export async function flip(store, name, bit) {
  const bytes = await store.get(name);
  bytes[bit >> 3] ^= 1 << (bit & 7);
  await store.put(name, bytes);
}

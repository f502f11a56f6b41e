/** Where a Keeper keeps its bytes: names to bytes, each put whole or not at all. A store for Node is in file-store.js. */

/** Kept in memory: for tests, and where nothing may stay on the device. */
export class MemoryStore {
  #entries = new Map();

  async get(name) {
    return this.#entries.get(name)?.slice();
  }

  async put(name, bytes) {
    this.#entries.set(name, bytes.slice());
  }

  async remove(name) {
    this.#entries.delete(name);
  }

  async names() {
    return [...this.#entries.keys()];
  }
}

/** Kept in a browser's IndexedDB; a put is done when its transaction has reached the disk. */
export class IndexedDbStore {
  #name;

  /** @param {string} [name] of the database, which belongs to this store alone */
  constructor(name = "precontact-rule-sets") {
    this.#name = name;
  }

  get(name) {
    return this.#run("readonly", (entries) => entries.get(name));
  }

  put(name, bytes) {
    return this.#run("readwrite", (entries) => entries.put(bytes, name));
  }

  remove(name) {
    return this.#run("readwrite", (entries) => entries.delete(name));
  }

  names() {
    return this.#run("readonly", (entries) => entries.getAllKeys());
  }

  /** Opened for each piece of work, so that no page stands in the way of another one that clears the site's data. */
  async #run(mode, work) {
    const database = await new Promise((resolve, reject) => {
      const opening = indexedDB.open(this.#name, 1);
      opening.onupgradeneeded = () => opening.result.createObjectStore("entries");
      opening.onsuccess = () => resolve(opening.result);
      opening.onerror = () => reject(opening.error);
    });
    try {
      return await new Promise((resolve, reject) => {
        const transaction = database.transaction("entries", mode, { durability: "strict" }), request = work(transaction.objectStore("entries"));
        transaction.oncomplete = () => resolve(request.result);
        transaction.onabort = () => reject(transaction.error ?? request.error);
      });
    } finally {
      database.close();
    }
  }
}

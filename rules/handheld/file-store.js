/** Where a Keeper keeps its bytes under Node: one file for each name, replaced whole or not at all. No other module imports this one. */
import { mkdir, open, readFile, readdir, rename, rm } from "node:fs/promises";
import { join } from "node:path";

/** Kept in a folder that belongs to this store, and to one process at a time. */
export class FileStore {
  #folder;

  /** @param {string} folder made where it is not there */
  constructor(folder) {
    this.#folder = folder;
  }

  async get(name) {
    try {
      return new Uint8Array(await readFile(this.#path(name)));
    } catch (error) {
      if (error.code === "ENOENT") return undefined;
      throw error;
    }
  }

  async put(name, bytes) {
    const path = this.#path(name), beside = `${path}.new`;
    await mkdir(this.#folder, { recursive: true });
    await this.#synced(beside, "w", (file) => file.writeFile(bytes));
    await rename(beside, path);
    await this.#synced(this.#folder, "r", () => {});        // the new name too reaches the disk
  }

  async remove(name) {
    await rm(this.#path(name), { force: true });
  }

  async names() {
    try {
      return await readdir(this.#folder);
    } catch (error) {
      if (error.code === "ENOENT") return [];
      throw error;
    }
  }

  async #synced(path, flags, work) {
    const file = await open(path, flags);
    try {
      await work(file);
      await file.sync();
    } finally {
      await file.close();
    }
  }

  #path(name) {
    if (!/^\w[\w.-]*$/.test(name)) throw new Error(`${JSON.stringify(name)} is no name of an entry; letters, digits, dots and hyphens are right`);
    return join(this.#folder, name);
  }
}

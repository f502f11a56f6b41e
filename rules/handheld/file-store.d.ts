import type { Store } from "./index.js";

/** Kept in a folder that belongs to this store, and to one process at a time; for Node. */
export class FileStore implements Store {
  constructor(folder: string);
  get(name: string): Promise<Uint8Array | undefined>;
  put(name: string, bytes: Uint8Array): Promise<void>;
  remove(name: string): Promise<void>;
  names(): Promise<string[]>;
}

/** Recent test points: kept in this browser's own database on this device, and nowhere else. */

const NAME = "precontact-points",
  STORE = "points",
  MOST = 100;

/** @typedef {{id?: number, at: string, name: string, check: string, draft: object, question: object, answer: object, verdict: string}} Point */

function opened() {
  return new Promise((resolve, reject) => {
    const request = indexedDB.open(NAME, 1);
    request.onupgradeneeded = () => request.result.createObjectStore(STORE, { keyPath: "id", autoIncrement: true });
    request.onsuccess = () => resolve(request.result);
    request.onerror = () => reject(request.error);
  });
}

/** Run one transaction; its result is that of the last request that `work` returns. */
async function within(mode, work) {
  const database = await opened();
  try {
    return await new Promise((resolve, reject) => {
      const transaction = database.transaction(STORE, mode),
        request = work(transaction.objectStore(STORE));
      transaction.oncomplete = () => resolve(request?.result);
      transaction.onerror = transaction.onabort = () => reject(transaction.error);
    });
  } finally {
    database.close();
  }
}

/** All points, the newest first. */
export async function all() {
  return (await within("readonly", (store) => store.getAll())).sort((a, b) => (a.at < b.at ? 1 : a.at > b.at ? -1 : b.id - a.id));
}

/** One point, or undefined. */
export const one = (id) => within("readonly", (store) => store.get(id));

/**
 * Keep a point. The same question of the same name replaces what was kept of it; beyond the most that are kept, the oldest go.
 * @param {Point} point
 * @returns {Promise<number>} its id
 */
export async function keep(point) {
  const before = await all(),
    same = before.filter((one_) => one_.name === point.name && one_.answer.input_digest === point.answer.input_digest);
  const gone = [...same, ...before.filter((one_) => !same.includes(one_)).slice(MOST - 1)];
  return within("readwrite", (store) => {
    for (const { id } of gone) store.delete(id);
    return store.add(point);
  });
}

/** Delete one point. */
export const remove = (id) => within("readwrite", (store) => store.delete(id));

/** Delete all points. */
export const removeAll = () => within("readwrite", (store) => store.clear());

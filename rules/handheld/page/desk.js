/** Where the page asks: it hands questions to the runtime, which works in a thread of its own so that the page never freezes. */

let worker = null,
  last = 0;
const waiting = new Map();

function open() {
  worker = new Worker(new URL("./bench.js", import.meta.url), { type: "module" });
  worker.addEventListener("message", ({ data: { number, result, error } }) => {
    const { resolve, reject } = waiting.get(number);
    waiting.delete(number);
    if (error) reject(Object.assign(new Error(error.detail), error));
    else resolve(result);
  });
  // A thread that cannot start would leave every question unanswered.
  worker.addEventListener("error", (event) => {
    for (const { reject } of waiting.values())
      reject(Object.assign(new Error(event.message || "the worker failed"), { code: "worker-failed", detail: event.message || "" }));
    waiting.clear();
    worker = null;
  });
}

function ask(verb, ...given) {
  if (!worker) open();
  return new Promise((resolve, reject) => {
    waiting.set(++last, { resolve, reject });
    worker.postMessage({ number: last, verb, given });
  });
}

/** Open the rule set that the device holds, as `opened` in bench.js describes it; rejects with {code, detail}. */
export const start = () => ask("start");

/** Ask for a newer rule set: {state, version, digest, bytes, milliseconds, reason, opened}; `opened`, as of start, is what answers then. */
export const update = () => ask("update");

/** The answer to a question: {answer, milliseconds}, or {problems}, or {blocked}. */
export const answer = (check, question, language) => ask("answer", check, question, language);

/** The thread that keeps the rule set and computes. The only module of the page that talks to the runtime. */
import { CheckBlocked, InputProblems, Keeper, IndexedDbStore } from "./runtime/index.js";

const keeper = new Keeper({ store: new IndexedDbStore(), fetch: (...given) => fetch(...given), base: new URL("./rule-set/", import.meta.url).href });
let ruleSet = null;

function opened({ ruleSet: now, proof, trust, notice, bytes, milliseconds, reason }) {
  ruleSet = now;
  return {
    data: now.data,
    version: now.version,
    digest: now.digest,
    blocked: [...now.blocked.keys()],
    proof,
    development: Boolean(trust?.development),
    notice: notice ?? null,
    bytes,
    milliseconds,
    reason: reason ?? null,
  };
}

const VERBS = {
  async start() {
    return opened(await keeper.start());
  },

  async update() {
    const result = await keeper.update(),
      { state, version, digest, bytes, milliseconds, reason = null } = result;
    return { state, version, digest, bytes, milliseconds, reason, opened: result.ruleSet ? opened(result) : null };
  },

  answer(check, question, language) {
    const began = performance.now();
    try {
      const answer = ruleSet.answer(check, question, language);
      return { answer, milliseconds: performance.now() - began };
    } catch (error) {
      if (error instanceof InputProblems) return { problems: error.problems.map(({ pointer, code, detail }) => ({ pointer, code, detail })) };
      if (error instanceof CheckBlocked) return { blocked: error.message };
      throw error;
    }
  },
};

addEventListener("message", async ({ data: { number, verb, given } }) => {
  try {
    postMessage({ number, result: await VERBS[verb](...given) });
  } catch (error) {
    postMessage({ number, error: { code: error.code || "failed", detail: error.detail || error.message } });
  }
});

/** What an app's author writes; compiled in strict mode. Every `@ts-expect-error` is a mistake that the types must catch. */
import { BundleRefused, CheckBlocked, InputProblems, UnknownCheck } from "../../../rules/handheld/index.js";
import { Keeper, MemoryStore, RuleSet, openBundle, prove, readKeys } from "../../../rules/handheld/index.js";
import type { Answer, KeyList, Seal, Store, Verify } from "../../../rules/handheld/index.js";
import { FileStore } from "../../../rules/handheld/file-store.js";

export async function opened(bytes: Uint8Array, seal: Seal, pins: KeyList, verify?: Verify): Promise<string> {
  try {
    const ruleSet: RuleSet = await openBundle(bytes, { seal, trust: readKeys(pins, verify) });
    const { agree, of, wrong } = prove(ruleSet);
    for (const { check } of wrong) console.log(ruleSet.blocked.get(check)?.toUpperCase());
    return `${agree} of ${of} agree`;
  } catch (error) {
    if (error instanceof BundleRefused && error.code === "revoked-key") return error.detail;
    throw error;
  }
}

export function asked(ruleSet: RuleSet, body: object): Answer | string[] {
  try {
    const answer = ruleSet.answer("loading-error", body, "es"), first = Object.values(answer.results).flat()[0];
    if (first && typeof first.value === "number") console.log(first.value.toFixed(3), first.low, answer.findings[0]?.sentence);
    return answer;
  } catch (error) {
    if (error instanceof InputProblems) return error.problems.map(({ pointer, detail }) => `${pointer}: ${detail}`);
    if (error instanceof CheckBlocked || error instanceof UnknownCheck) return [error.message];
    throw error;
  }
}

export async function kept(folder: string, base: string): Promise<string | null> {
  const store: Store = folder ? new FileStore(folder) : new MemoryStore(), keeper = new Keeper({ store, base, fetch });
  const { state, version, reason, ruleSet, bytes, milliseconds } = await keeper.update({ signal: AbortSignal.timeout(60_000) });
  if (state === "refused") console.log(reason?.code, reason?.detail, ruleSet?.version, bytes / milliseconds);
  const { notice, trust, proof } = await keeper.start();
  return trust.development ? `${notice?.because?.es} ${proof.agree}` : version;
}

export async function mistakes(ruleSet: RuleSet, keeper: Keeper): Promise<void> {
  // @ts-expect-error there is no French
  ruleSet.answer("loading-error", {}, "fr");
  // @ts-expect-error a seal is always needed
  await openBundle(ruleSet.bytes, { trust: "" });
  // @ts-expect-error after a refusal there may be no rule set
  (await keeper.update()).ruleSet.answer("loading-error", {});
  // @ts-expect-error a place to keep bytes is always needed
  new Keeper({ base: "" });
  // @ts-expect-error no such state
  if ((await keeper.update()).state === "done") return;
  // @ts-expect-error it is made once
  ruleSet.version = "2.0.0";
}

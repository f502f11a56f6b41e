/** Precontact on the device: a released rule set answers without network, with the service's numbers and the service's documents. */
export { InputProblems } from "./problems.js";
export { CheckBlocked, LANGUAGE, RuleSet, UnknownCheck, UnknownLanguage } from "./rule-set.js";
export { canonicalText, digest } from "./canonical.js";
export { numberText } from "./phrase.js";
export { BundleRefused, openBundle, readKeys } from "./trust.js";
export { prove } from "./proof.js";
export { Keeper } from "./keeper.js";
export { IndexedDbStore, MemoryStore } from "./stores.js";

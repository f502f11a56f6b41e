/** A rule set carries worked cases with their answers; a device on which a check gives others must not use that check. */
import { shown } from "./trust.js";

const shape = (value) => value !== null && typeof value === "object" && (Array.isArray(value) ? "list" : "object");

/** Where and how two JSON values differ, or "" where they are equal; numbers are compared with ===. */
export function difference(found, recorded, place = "") {
  if (!shape(found) || shape(found) !== shape(recorded)) {
    return found === recorded ? "" : `${place} is ${shown(found)}; ${shown(recorded)} is recorded`;
  }
  for (const name of new Set(Object.keys(found).concat(Object.keys(recorded)))) {
    const inner = difference(found[name], recorded[name], `${place}/${name}`);
    if (inner) return inner;
  }
  return "";
}

/** The first case of every check. @param {RuleSet} ruleSet */
export function oneOfEach({ data }) {
  return Object.keys(data.checks).flatMap((name) => data.cases.find(({ check }) => check === name) ?? []);
}

/**
 * Answer the worked cases of these checks, compare exactly with what is recorded, and block each check that disagrees. No block is ever lifted.
 * @param {RuleSet} ruleSet @param {string[]} [checks] @param {object[]} [cases] fewer than all, for a short proof
 * @returns {{agree: number, of: number, wrong: {id: string, check: string}[]}} how many of how many agree, and which do not
 */
export function prove(ruleSet, checks = ruleSet.checkNames, cases = ruleSet.data.cases) {
  const { blocked } = ruleSet, earlier = [...blocked], because = new Map(), wrong = [], asked = cases.filter(({ check }) => checks.includes(check));
  blocked.clear();
  for (const { id, check, input, answer } of asked) {
    let differs;
    try {
      const { verdict, findings, results } = ruleSet.answer(check, input);
      differs = difference({ verdict, findings: findings.map(({ code }) => code), results }, answer);
    } catch (error) {
      differs = error.message || "no answer";
    }
    if (!differs) continue;
    wrong.push({ id, check });
    because.set(check, because.get(check) ?? `its worked case ${id} is answered otherwise on this device: ${differs}`);
  }
  for (const [check, why] of [...because, ...earlier]) blocked.set(check, why);
  return { agree: asked.length - wrong.length, of: asked.length, wrong };
}

/** A rule set carries worked cases with their answers; a device on which a check gives others must not use that check. */

/** The first case of every check. @param {RuleSet} ruleSet */
export function oneOfEach(ruleSet) {
  const first = new Map();
  for (const one of ruleSet.data.cases) if (!first.has(one.check)) first.set(one.check, one);
  return [...first.values()];
}

/** Where and how two JSON values differ, or null where they are equal; numbers are compared with ===. */
export function difference(found, recorded, place = "") {
  const [kind, right] = [found, recorded].map((v) => (Array.isArray(v) ? "list" : v !== null && typeof v === "object" ? "object" : "plain"));
  if (kind === right && kind !== "plain") {
    const names = Object.keys(recorded), extra = Object.keys(found).find((name) => !Object.hasOwn(recorded, name));
    if (extra !== undefined) return `${place}/${extra} is there, and is not recorded`;
    for (const name of names) {
      if (!Object.hasOwn(found, name)) return `${place}/${name} is not there`;
      const inner = difference(found[name], recorded[name], `${place}/${name}`);
      if (inner) return inner;
    }
    return null;
  }
  if (kind === right && found === recorded) return null;
  const [is, was] = [found, recorded].map((value) => JSON.stringify(value)?.slice(0, 60));
  return `${place} is ${is}; ${was} is recorded`;
}

/**
 * Answer the worked cases of these checks, compare exactly with what is recorded, and block each check that disagrees. No block is ever lifted.
 * @param {RuleSet} ruleSet @param {string[]} [checks] @param {object[]} [cases] fewer than all, for a short proof
 * @returns {{agree: number, of: number, wrong: {id: string, check: string}[]}} how many of how many agree, and which do not
 */
export function prove(ruleSet, checks = ruleSet.checkNames, cases = ruleSet.data.cases) {
  const earlier = new Map(ruleSet.blocked), wrong = [];
  let of = 0;
  for (const check of checks) ruleSet.blocked.delete(check);
  const found = new Map(earlier);
  for (const { id, check, input, answer } of cases) {
    if (!checks.includes(check)) continue;
    of += 1;
    let differs;
    try {
      const { verdict, findings, results } = ruleSet.answer(check, input);
      differs = difference({ verdict, findings: findings.map((finding) => finding.code), results }, answer);
    } catch (error) {
      differs = ` was not answered: ${error.message}`;
    }
    if (!differs) continue;
    wrong.push({ id, check });
    if (found.has(check)) continue;
    found.set(check, `its worked case ${id} is answered otherwise on this device than rule set ${ruleSet.version} records: ${differs.trim()}`);
  }
  for (const [check, because] of found) ruleSet.blocked.set(check, because);
  return { agree: of - wrong.length, of, wrong };
}

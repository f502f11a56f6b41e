/**
 * The JavaScript side of the comparison, the same in Node and in a browser: asks the runtime every question and compares the SHA-256 of what it
 * says, as canonical JSON, with what Python's engine said.
 */
const LONGEST_LIST = 20;      // so many differences are given in full

/** JSON text with sorted keys. ECMAScript's own number and string forms are those of RFC 8785, which Python's side writes. */
export function canonical(value) {
  if (Array.isArray(value)) return `[${value.map(canonical).join(",")}]`;
  if (value !== null && typeof value === "object") {
    return `{${Object.keys(value).sort().map((key) => `${JSON.stringify(key)}:${canonical(value[key])}`).join(",")}}`;
  }
  if (typeof value === "number" && !Number.isFinite(value)) throw new RangeError(`${value} in an answer`);
  if (value === undefined) throw new TypeError("undefined in an answer");
  return JSON.stringify(value);
}

function frozen(value) {
  if (value !== null && typeof value === "object") Object.values(Object.freeze(value)).forEach(frozen);
  return value;
}

/** What the runtime says to a question, as canonical text; the body is frozen, so a runtime that changes it throws. */
export function said(runtime, ruleSet, { check, language, body }) {
  try {
    return canonical(ruleSet.answer(check, frozen(body), language));
  } catch (error) {
    if (error instanceof runtime.InputProblems) return canonical(error.problems.map(({ pointer, code, detail }) => ({ pointer, code, detail })));
    return `threw ${error.stack}`;
  }
}

/** Collects what was compared. */
export class Comparison {
  /** @param {object} runtime exports of index.js @param {object} ruleSet @param {(text: string) => string | Promise<string>} sha256 hexadecimal */
  constructor(runtime, ruleSet, sha256) {
    Object.assign(this, { runtime, ruleSet, sha256 });
    this.count = this.differing = 0;
    this.differences = [];
  }

  /** @param {string} line one question as python_side.py writes it */
  async take(line) {
    const question = JSON.parse(line), text = said(this.runtime, this.ruleSet, question);
    this.count++;
    if (await this.sha256(text) === question.sha256) return;
    this.differing++;
    if (this.differences.length < LONGEST_LIST) this.differences.push({ line, said: text });
  }

  report() {
    const { count, differing, differences } = this;
    return { count, differing, differences };
  }
}

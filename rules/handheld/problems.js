/** What is wrong with a request, item by item. */
import { canonicalText } from "./canonical.js";

const LONGEST = 60, DEEPEST = 32;

/** A request body that cannot be answered; `problems` lists every fault found: {pointer, code, detail}. */
export class InputProblems extends Error {
  /** @param {{pointer: string, code: string, detail: string}[]} problems */
  constructor(problems) {
    super(problems.map((p) => `${p.pointer || "/"}: ${p.detail}`).join("; "));
    this.name = "InputProblems";
    this.problems = problems;
  }
}

/** Adds a problem; null, which stands for what could not be read. */
export function refuse(problems, pointer, code, detail) {
  problems.push({ pointer, code, detail });
  return null;
}

export const isObject = (value) => typeof value === "object" && value !== null && !Array.isArray(value);
export const escaped = (key) => key.replaceAll("~", "~0").replaceAll("/", "~1");

const isWhole = (text) => !/[\ud800-\udfff]/u.test(text);      // no half of a surrogate pair stands alone in it

function held(value, depth = 0) {
  if (typeof value === "number") return value - value === 0;
  if (typeof value === "string") return isWhole(value);
  if (typeof value !== "object" || value === null) return typeof value === "boolean" || value === undefined || value === null;
  return depth < DEEPEST && Object.keys(value).every(isWhole) && Object.values(value).every((v) => held(v, depth + 1));
}

/** A value as it is quoted in a message: canonical JSON, shortened; what JSON cannot hold, or holds too deep, is not written out. */
export function shown(value) {
  if (!held(value)) return "a value that cannot be written here";
  const letters = [...canonicalText(value)];
  return letters.length <= LONGEST ? letters.join("") : `${letters.slice(0, LONGEST - 1).join("")}…`;
}

/** Reading one value of a request: a number, a choice, a switch, a text or a curve. read(x, run, pointer) -> its value, or null after a problem. */
import { EXACT_WHOLE, numberReader } from "./numbers.js";
import { refuse, shown } from "./problems.js";

// Controls, spaces other than the plain one, the soft hyphen, marks that are not seen or change the direction of text, separators of lines,
// surrogates, private use, the noncharacters of the basic plane.
const NOT_PRINTED = new RegExp("[\\0-\\x1f\\x7f-\\xa0\\xad\\u061c\\u1680\\u180e\\u2000-\\u200f\\u2028-\\u202f\\u205f-\\u206f\\u3000\\ud800-\\uf8ff"
  + "\\ufdd0-\\ufdef\\ufeff\\ufff0-\\ufffb\\ufffe\\uffff\\u{e0000}-\\u{10ffff}]", "u");

const isPoint = (p) => Array.isArray(p) && p.length === 2 && p.every((c) => typeof c === "number" && Math.abs(c) <= EXACT_WHOLE);

/** [[x, y], ...] as [xs, ys]. */
export const columns = (points) => [0, 1].map((k) => points.map((p) => p[k]));

const READERS = {
  number(field, slot) {
    const read = numberReader(slot);
    return (x, run, pointer) => read(x, run.problems, pointer);
  },
  choice({ choices }) {
    const only = new Map(choices.map((c) => [c.key, c.only])), listed = [...only.keys()].join(", ");
    return (x, { branch, problems }, pointer) => {
      const wanted = only.get(x);
      if (!only.has(x)) {
        const code = typeof x === "string" ? "unknown-choice" : "wrong-type";
        return refuse(problems, pointer, code, `${shown(x)} is not one of the choices; they are ${listed}`);
      }
      if (!wanted || branch === null || wanted.includes(branch)) return x;
      return refuse(problems, pointer, "not-applicable", `${x} does not go with ${branch}; it belongs to ${wanted.join(", ")}`);
    };
  },
  switch: () => (x, { problems }, pointer) =>
    (typeof x === "boolean" ? x : refuse(problems, pointer, "wrong-type", `${shown(x)} is neither true nor false`)),
  text: ({ longest }) => (x, { problems }, pointer) => {
    if (typeof x !== "string") return refuse(problems, pointer, "wrong-type", `${shown(x)} is not text`);
    const letters = [...x].length;
    if (letters > longest) return refuse(problems, pointer, "too-long", `${letters} characters; at most ${longest}`);
    if (!NOT_PRINTED.test(x)) return x || null;
    return refuse(problems, pointer, "bad-characters", "holds a character that cannot be printed; plain text on one line is right");
  },
  curve: () => (x, { problems }, pointer) => {
    // The points of a curve have one order, whatever order they come in; two at one x are a step there.
    if (Array.isArray(x) && x.length > 0 && x.length <= 64 && x.every(isPoint)) return columns([...x].sort((a, b) => a[0] - b[0]));
    return refuse(problems, pointer, "wrong-type", `${shown(x)} is not a curve; give 1 to 64 pairs of numbers [[x, y], ...]`);
  },
};

/** The reader of a field. */
export const reader = (field, slot) => READERS[field.kind](field, slot);

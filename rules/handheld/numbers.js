/** Reading one number of a request: plain, or with a spread, checked against its declared range and brought to SI. */
import { escaped, isObject, problem, shown } from "./problems.js";

export const EXACT_WHOLE = Number.MAX_SAFE_INTEGER;
const SPREADS = ["half_width", "half_width_percent", "standard_uncertainty"];
const FORMS = "a number, {value, half_width}, {value, half_width_percent}, {value, standard_uncertainty} or {between: [low, high]}";
const BOUNDS = [["above", "above"], ["least", "at least"], ["below", "below"], ["most", "at most"]];

const words = (name) => name.replaceAll("_", " ");

/** An uncertain number as the intake holds it: form "r" (rectangular) or "n" (normal). */
const uncertain = (form, value, size) => (size > 0 ? { form, value, size } : value);

/** A number of a catalogue entry, already in SI. */
export const entryNumber = ({ value, half_width, standard_uncertainty }) =>
  (half_width ? uncertain("r", value, half_width) : uncertain("n", value, standard_uncertainty ?? 0));

/** The declared range in words, in the field's own unit. */
const rangeText = (field) => BOUNDS.filter(([key]) => key in field).map(([key, said]) => `${said} ${field[key]}`).join(" and ") || `between -${EXACT_WHOLE} and ${EXACT_WHOLE}`;

/** The reader for one number field: read(x, problems, pointer) -> a number or {form, value, size} in SI, or null after a problem. */
export function numberReader({ field, factor }) {
  const unit = words(field.unit), { least, above, most, below } = field, allowed = field.uncertain ? FORMS : "a number";
  const inRange = (x) => (least !== undefined ? x >= least : above !== undefined ? x > above : x >= -EXACT_WHOLE)
    && (most !== undefined ? x <= most : below !== undefined ? x < below : x <= EXACT_WHOLE);

  const badNumber = (x, pointer) => (x - x === 0 ? problem(pointer, "out-of-range", `${shown(x)} ${unit} is outside the range; it must be ${rangeText(field)}`)
    : problem(pointer, "not-finite", `${x} is not a finite number; give one in ${unit}`));

  /** A member of a spread form, in the field's own unit. */
  function plain(x, problems, pointer, fits, what) {
    if (typeof x !== "number") problems.push(problem(pointer, x === undefined || x === null ? "missing" : "wrong-type", `${shown(x ?? null)} is not a number; give ${what}`));
    else if (!fits(x)) problems.push(what === "the value" ? badNumber(x, pointer) : problem(pointer, "out-of-range", `${shown(x)} is not possible here; ${what} is between 0 and ${EXACT_WHOLE}`));
    else return x + 0;
    return null;
  }

  function spread(given, problems, pointer) {
    const keys = Object.keys(given).filter((key) => given[key] !== null && given[key] !== undefined), named = SPREADS.filter((key) => keys.includes(key));
    const [unknown] = keys.filter((key) => !SPREADS.includes(key) && key !== "value" && key !== "between").sort(), pair = keys.includes("between");
    if (unknown !== undefined) {
      problems.push(problem(`${pointer}/${escaped(unknown)}`, "unknown-field", `${shown(unknown)} is not part of an uncertain number; it is ${FORMS}`));
    } else if (named.length + pair > 1) {
      problems.push(problem(pointer, "two-spreads", `${[...named, ...(pair ? ["between"] : [])].join(" and ")} are given together; one number has one spread`));
    } else if (pair) {
      return between(given.between, keys.includes("value"), problems, pointer);
    } else if (named.length) {
      return around(keys.includes("value") ? given.value : undefined, given[named[0]], named[0], problems, pointer);
    } else {
      problems.push(problem(pointer, "missing", `no spread in ${shown(Object.fromEntries(keys.map((k) => [k, given[k]])))}; add one of ${SPREADS.join(", ")}, or write the number alone`));
    }
    return null;
  }

  function between(ends, valueToo, problems, pointer) {
    if (valueToo) {
      problems.push(problem(`${pointer}/value`, "two-spreads", "value and between are given together; between alone says both"));
    } else if (!Array.isArray(ends) || ends.length !== 2) {
      problems.push(problem(`${pointer}/between`, "wrong-type", `${shown(ends)} is not a pair; give [low, high], in ${unit}`));
    } else {
      const read = ends.map((end, i) => plain(end, problems, `${pointer}/between/${i}`, inRange, "the value"));
      if (read.includes(null)) return null;
      const [a, b] = read.map((end) => end * factor).sort((x, y) => x - y), half = (b - a) * 0.5;
      return half > 0 ? uncertain("r", a + half, half) : a;
    }
    return null;
  }

  function around(given, width, name, problems, pointer) {
    const x = plain(given, problems, `${pointer}/value`, inRange, "the value");
    const size = plain(width, problems, `${pointer}/${name}`, (w) => w >= 0 && w <= EXACT_WHOLE, `the ${words(name)}`);
    if (x === null || size === null) return null;
    const value = x * factor;
    return uncertain(name === SPREADS[2] ? "n" : "r", value, name === SPREADS[1] ? Math.abs(value) * (size / 100) : size * factor);
  }

  return (x, problems, pointer) => {
    if (typeof x === "number") {
      if (inRange(x)) return x * factor + 0;      // + 0 turns a negative zero into zero
      problems.push(badNumber(x, pointer));
    } else if (!isObject(x)) {
      problems.push(problem(pointer, "wrong-type", `${shown(x)} is not a number; give ${allowed}, in ${unit}`));
    } else if (field.uncertain) {
      return spread(x, problems, pointer);
    } else {
      problems.push(problem(pointer, "not-uncertain", `${shown(x)} is given with a spread; here only a plain number of ${unit} is possible`));
    }
    return null;
  };
}

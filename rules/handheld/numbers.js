/** Reading one number of a request: plain, or with a spread, checked against its declared range and brought to SI. */
import { escaped, isObject, refuse, shown } from "./problems.js";

export const EXACT_WHOLE = Number.MAX_SAFE_INTEGER;
const SPREADS = ["half_width", "half_width_percent", "standard_uncertainty"];
const FORM_KEYS = [...SPREADS, "value", "between"];
const FORMS = "a number, {value, half_width}, {value, half_width_percent}, {value, standard_uncertainty} or {between: [low, high]}";
const BOUNDS = [["above", "above"], ["least", "at least"], ["below", "below"], ["most", "at most"]];

const words = (name) => name.replaceAll("_", " ");

/** An uncertain number as the intake holds it: form "r" (rectangular) or "n" (normal). */
const uncertain = (form, value, size) => (size > 0 ? { form, value, size } : value);

/** A number of a catalogue entry, already in SI. */
export const entryNumber = ({ value, half_width, standard_uncertainty }) =>
  (half_width ? uncertain("r", value, half_width) : uncertain("n", value, standard_uncertainty ?? 0));

/** The declared range in words, in the field's own unit. */
const rangeText = (field) => BOUNDS.filter(([key]) => key in field).map(([key, said]) => `${said} ${field[key]}`).join(" and ")
  || `between -${EXACT_WHOLE} and ${EXACT_WHOLE}`;

/** The reader for one number field: read(x, problems, pointer) -> a number or {form, value, size} in SI, or null after a problem. */
export function numberReader({ field, factor }) {
  const unit = words(field.unit), { least, above, most, below } = field, allowed = field.uncertain ? FORMS : "a number";
  const inRange = (x) => (least !== undefined ? x >= least : above !== undefined ? x > above : x >= -EXACT_WHOLE)
    && (most !== undefined ? x <= most : below !== undefined ? x < below : x <= EXACT_WHOLE);

  const badNumber = (x, problems, pointer) => (x - x === 0
    ? refuse(problems, pointer, "out-of-range", `${shown(x)} ${unit} is outside the range; it must be ${rangeText(field)}`)
    : refuse(problems, pointer, "not-finite", `${x} is not a finite number; give one in ${unit}`));

  /** A member of a spread form, in the field's own unit: a value, or the width that `what` names. */
  function plain(x, problems, pointer, what) {
    if (typeof x !== "number") return refuse(problems, pointer, x === null ? "missing" : "wrong-type", `${shown(x)} is not a number; give the ${what}`);
    if (what === "value") return inRange(x) ? x + 0 : badNumber(x, problems, pointer);
    if (x >= 0 && x <= EXACT_WHOLE) return x + 0;
    return refuse(problems, pointer, "out-of-range", `${shown(x)} is not possible here; the ${what} is between 0 and ${EXACT_WHOLE}`);
  }

  function spread(x, problems, pointer) {
    const given = Object.fromEntries(Object.entries(x).filter(([, member]) => member !== null && member !== undefined)), keys = Object.keys(given);
    const [unknown] = keys.filter((key) => !FORM_KEYS.includes(key)).sort(), named = SPREADS.filter((key) => keys.includes(key)), [name] = named;
    if (keys.includes("between")) named.push("between");
    if (unknown !== undefined) {
      return refuse(problems, `${pointer}/${escaped(unknown)}`, "unknown-field", `${shown(unknown)} is not part of an uncertain number; it is ${FORMS}`);
    }
    if (named.length > 1) return refuse(problems, pointer, "two-spreads", `${named.join(" and ")} are given together; one number has one spread`);
    if (name) return around(given.value ?? null, given[name], name, problems, pointer);
    if (named.length) return between(given.between, "value" in given, problems, pointer);
    return refuse(problems, pointer, "missing", `no spread in ${shown(given)}; add one of ${SPREADS.join(", ")}, or write the number alone`);
  }

  function between(ends, valueToo, problems, pointer) {
    if (valueToo) return refuse(problems, `${pointer}/value`, "two-spreads", "value and between are given together; between alone says both");
    if (!Array.isArray(ends) || ends.length !== 2) {
      return refuse(problems, `${pointer}/between`, "wrong-type", `${shown(ends)} is not a pair; give [low, high], in ${unit}`);
    }
    const read = ends.map((end, i) => plain(end ?? null, problems, `${pointer}/between/${i}`, "value"));
    if (read.includes(null)) return null;
    const [a, b] = read.map((end) => end * factor).sort((x, y) => x - y), half = (b - a) * 0.5;
    return half > 0 ? uncertain("r", a + half, half) : a;
  }

  function around(given, width, name, problems, pointer) {
    const x = plain(given, problems, `${pointer}/value`, "value"), value = x * factor, size = plain(width, problems, `${pointer}/${name}`, words(name));
    if (x === null || size === null) return null;
    return uncertain(name === SPREADS[2] ? "n" : "r", value, name === SPREADS[1] ? Math.abs(value) * (size / 100) : size * factor);
  }

  return (x, problems, pointer) => {
    if (typeof x === "number") return inRange(x) ? x * factor + 0 : badNumber(x, problems, pointer);      // + 0 turns a negative zero into zero
    if (!isObject(x)) return refuse(problems, pointer, "wrong-type", `${shown(x)} is not a number; give ${allowed}, in ${unit}`);
    if (field.uncertain) return spread(x, problems, pointer);
    return refuse(problems, pointer, "not-uncertain", `${shown(x)} is given with a spread; here only a plain number of ${unit} is possible`);
  };
}

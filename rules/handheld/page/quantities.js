/** Numbers of an answer, in their units, to four significant digits. */
import { ofRules, say, spoken } from "./texts.js";
import { spelled } from "./typed.js";

const DIGITS = 4;
const LEAST_SHARE = 1e-6; // a smaller probability is written as such: its digits tell nobody anything
const RAISED = { "-": "⁻", "0": "⁰", "1": "¹", "2": "²", "3": "³", "4": "⁴", "5": "⁵", "6": "⁶", "7": "⁷", "8": "⁸", "9": "⁹" };

/** A value in its own unit: "22.92 V", "2.292 µA", "3.46 × 10⁻³⁰⁸". */
export function shown(value, unit) {
  if (value === null || value === undefined) return say("no-value");
  if (!unit.symbol && value > 0 && value < LEAST_SHARE) return say("below", { value: spelled(LEAST_SHARE, unit, spoken()) });
  const text = spelled(Number(value.toPrecision(DIGITS)), unit, spoken());
  return text.replace(/e(-?)(\d+)/, (_, sign, power) => ` × 10${[...(sign + power)].map((digit) => RAISED[digit]).join("")}`);
}

/** A record of the catalogue, which is in SI, with its spread. */
export function amount(record, unit) {
  const spread = record.half_width ?? record.standard_uncertainty;
  const size = shown(record.value / unit.factor, unit);
  return spread
    ? say(record.half_width ? "read-half_width" : "read-standard_uncertainty", { value: size, other: shown(spread / unit.factor, unit) })
    : size;
}

/** The ends of an interval. */
export const interval = (low, high, unit) => say("interval", { low: shown(low, unit), high: shown(high, unit) });

/** Any value of a working: a number, a complex number, a truth, or one for each item. */
export function worked(value, unit, bundle) {
  if (value === null) return say("no-value");
  if (typeof value === "boolean") return ofRules(bundle.texts[value ? "yes" : "no"]);
  if (Array.isArray(value)) return value.map((one) => worked(one, unit, bundle)).join("; ");
  if (typeof value === "object") {
    const { re, im } = value;
    return im === undefined ? String(value.title ?? value.value) : `${shown(re, unit)} ${im < 0 ? "−" : "+"} j ${shown(Math.abs(im), unit)}`;
  }
  return typeof value === "number" ? shown(value, unit) : String(value);
}

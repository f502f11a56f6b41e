/** Numbers and sentences as a person reads them, in English and Spanish. */

const PREFIXES = ["p", "n", "µ", "m", "", "k", "M", "G"];      // from 10^-12 on, in thousands
const NO_VALUE = { en: "(no value)", es: "(sin valor)" };
const LATIN = "\u017f";      // up to here no Unicode version gives a letter another capital than the others do
const AND = { en: " and ", es: " y " };

/** A number in SI with its unit, to four significant digits: "2.497 MΩ", "-7.7 %". @param {number | null} value */
export function numberText(value, unit, units, language) {
  if (value === null || value - value !== 0) return NO_VALUE[language];
  const { factor, prefixes, symbol } = units[unit], own = value / factor;
  if (own - own !== 0) return NO_VALUE[language];      // finite in SI, but not in its own unit
  let [mantissa, power] = rounded(Math.abs(own)).split("e"), exponent = +power, prefix = "";
  if (prefixes && own) {
    const thousands = Math.min(Math.max(Math.floor(exponent / 3), -4), 3);
    prefix = PREFIXES[thousands + 4];
    exponent -= thousands * 3;
  }
  const digits = mantissa.replace(".", "").replace(/0+$/, "") || "0", text = laidOut(digits, exponent), unitText = prefix + symbol;
  const written = language === "es" ? text.replace(".", ",") : text;
  return (own < 0 && digits !== "0" ? "-" : "") + written + (unitText ? `\u00a0${unitText}` : "");
}

/** To four digits, half up on the exact binary value; not every engine turns a tie upwards as ECMA-262 has it, so a tie is first moved up a little. */
function rounded(x) {
  const five = x.toExponential(4).split("5e"), tie = five.length > 1 && x.toExponential(40).startsWith(`${five[0]}5${"0".repeat(36)}e`);
  return (tie ? x * (1 + 2 ** -40) : x).toExponential(3);
}

function laidOut(digits, exponent) {
  if (exponent < -4 || exponent > 9) return `${digits[0]}${digits.length > 1 ? `.${digits.slice(1)}` : ""}e${exponent}`;
  if (exponent < 0) return `0.${"0".repeat(-exponent - 1)}${digits}`;
  const fraction = digits.slice(exponent + 1);
  return digits.slice(0, exponent + 1).padEnd(exponent + 1, "0") + (fraction && `.${fraction}`);
}

/** A sentence cut at its places: strings of plain words, {name}, and {name, condition} for a list of items. */
export function template(text) {
  return text.split(/\{([^{}]*)\}/).map((part, i) => {
    if (i % 2 === 0) return part;
    const [name, condition] = part.split("|").map((p) => p.trim());
    return { name, condition };
  });
}

/** Names of the formulas that a sentence needs. */
export const namesIn = (text) => template(text).filter((part) => part.name).map(({ name, condition }) => condition ?? name);

/** The sentence; words(name) and listed(name, condition) supply what stands in its places. */
export function filled(parts, words, listed, language) {
  const sentence = parts.map((part) => (part.name === undefined ? part : part.condition ? joined(listed(part.name, part.condition), language) : words(part.name))).join("");
  const first = sentence.slice(0, 1);      // it may begin with a name
  return (first <= LATIN ? first.toUpperCase() : first) + sentence.slice(1);
}

/** Names as a list in a sentence: "a, b and c". */
const joined = (names, language) => (names.length < 2 ? names.join("") : names.slice(0, -1).join(", ") + AND[language] + names.at(-1));

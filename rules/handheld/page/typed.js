/**
 * Numbers as people type them: 10M, 4k7, 250, 2.2 k, 0,47, 100n, 4R7, 1e6, 24 V. The decimal text is put together first and parsed once, so that 4k7
 * is exactly 4700. What can be read in two ways is refused, never guessed.
 */

/** Power of ten of each prefix. K is not the SI's letter, but it is what keyboards produce for kilo. */
export const PREFIXES = { p: -12, n: -9, u: -6, µ: -6, μ: -6, m: -3, k: 3, K: 3, M: 6, G: 9, T: 12 };

const PREFIX_OF = { "-12": "p", "-9": "n", "-6": "µ", "-3": "m", "3": "k", "6": "M", "9": "G", "12": "T" };
const LETTERS = Object.keys(PREFIXES).join("");
// The written signs that stand for a unit beside its own symbol, by symbol.
const ALSO_WRITTEN = { "Ω": ["ohmios", "ohmio", "ohms", "ohm", "R"], "°C": ["C"], "°": ["deg"], "1/K": ["/K"], "1/Ω": ["S"] };
// A unit's letter in the place of the decimal mark: 4R7, 3V3.
const AS_MARK = { Ω: "RΩ", V: "V" };
const LONGEST = 40;

/**
 * What a typed number means in its unit.
 * @param {string} text as typed
 * @param {{symbol: string, prefixes: boolean}} unit of the field, from the rule set
 * @param {string} language of the person: in English a point followed by three digits can only be a decimal point, in Spanish it may group thousands
 * @returns {{value: number} | {fault: string, [hint: string]: string} | null} null where nothing was typed; a fault is a key of the page's texts
 */
export function typed(text, unit, language = "en") {
  const all = tidy(text);
  if (!all) return null;
  if (all.length > LONGEST) return { fault: "typed-too-long" };
  const { body, named } = withoutUnit(all, unit.symbol);
  if (!body) return { fault: "typed-not-a-number" };
  return inserted(body, unit) || plain(body, unit, language, named);
}

function tidy(text) {
  return String(text ?? "")
    .replace(/[\u2212\u2013]/g, "-")
    .replace(/[\u00a0\u2009\u202f]/g, " ")
    .replace(/\u2126/g, "Ω")
    .trim();
}

/** The text before the unit's symbol, if it is written: "24 V" is 24, "10 MΩ" is 10 M. A bare m in a field of metres stays, to be refused. */
function withoutUnit(all, symbol) {
  for (const sign of [symbol, ...(ALSO_WRITTEN[symbol] || [])]) {
    if (sign && all.endsWith(sign)) {
      const body = all.slice(0, -sign.length).trimEnd();
      if (sign !== "m" || /[pnuµμmkKMGT]$/.test(body)) return { body, named: true };
    }
  }
  return { body: all, named: false };
}

/** A letter in the place of the decimal mark: 4k7, 4m7, 4R7, 3V3. */
function inserted(body, unit) {
  const found = /^([+-]?)(\d+)\s?([^\d\s.,'eE+-])\s?(\d+)$/u.exec(body);
  if (!found) return null;
  const [, sign, whole, letter, fraction] = found;
  if ((AS_MARK[unit.symbol] || "").includes(letter)) return decimal(`${sign}${whole}.${fraction}`, 0);
  if (!(letter in PREFIXES)) return { fault: "typed-not-a-number" };
  if (!unit.prefixes) return { fault: "typed-no-prefix", letter };
  if (unit.symbol === "m" && letter === "m") return ambiguousMetre(`${sign}${whole}.${fraction}`);
  return decimal(`${sign}${whole}.${fraction}`, PREFIXES[letter]);
}

function plain(body, unit, language, named) {
  const found = new RegExp(`^([+-]?)([\\d.,\\s]*\\d[.,]?|[.,]\\d+)(?:[eE]([+-]?\\d{1,3}))?\\s*([${LETTERS}]?)$`, "u").exec(body);
  if (!found) return { fault: "typed-not-a-number" };
  const [, sign, digits, power = "0", letter] = found;
  const number = ungrouped(digits, language);
  if (number.fault) return number;
  if (letter && !unit.prefixes) return { fault: "typed-no-prefix", letter };
  if (letter && body.includes(`${power}`) && /[eE]/.test(body)) return { fault: "typed-power-and-prefix" };
  if (unit.symbol === "m" && letter === "m" && !named) return ambiguousMetre(`${sign}${number.digits}`);
  return decimal(sign + number.digits, Number(power) + (letter ? PREFIXES[letter] : 0));
}

function ambiguousMetre(number) {
  return { fault: "typed-metre", number: number.replace(/^\+/, "") };
}

/** Digits with a point as the only mark, or a fault where a mark may group thousands or part decimals. */
function ungrouped(digits, language) {
  const closed = /\s/.test(digits) ? groups(digits) : digits;
  if (closed === null) return { fault: "typed-spaces" };
  const points = count(closed, "."),
    commas = count(closed, ",");
  if (points && commas) {
    const mark = closed.lastIndexOf(".") > closed.lastIndexOf(",") ? "." : ",",
      other = mark === "." ? "," : ".";
    const [whole, fraction] = [closed.slice(0, closed.lastIndexOf(mark)), closed.slice(closed.lastIndexOf(mark) + 1)];
    return count(closed, mark) === 1 && wellGrouped(whole, other)
      ? { digits: `${whole.replaceAll(other, "")}.${fraction}` }
      : { fault: "typed-marks" };
  }
  if (points + commas > 1) {
    const mark = points ? "." : ",";
    return wellGrouped(closed, mark) ? { digits: closed.replaceAll(mark, "") } : { fault: "typed-marks" };
  }
  // One mark, three digits behind it, one to three before: a thousand, or one point something.
  if (/^[1-9]\d{0,2}[.,]\d{3}$/.test(closed) && (commas || language !== "en")) {
    const [whole, fraction] = closed.split(/[.,]/);
    return { fault: "typed-thousand", typed: closed, whole: whole + fraction, parted: `${whole}${commas ? "," : "."}${fraction}0` };
  }
  return { digits: closed.replace(",", ".") };
}

/** Digits grouped by spaces in threes, as 10 000 or 4 700,5; null where a space stands elsewhere. */
function groups(digits) {
  return /^\d{1,3}(\s\d{3})+([.,]\d*)?$/.test(digits) ? digits.replace(/\s/g, "") : null;
}

function wellGrouped(whole, mark) {
  const parts = whole.split(mark);
  return parts.length > 1 && /^[1-9]\d{0,2}$/.test(parts[0]) && parts.slice(1).every((part) => /^\d{3}$/.test(part));
}

function count(text, mark) {
  return text.split(mark).length - 1;
}

/** The number that a decimal text times a power of ten names: one parse, so rounded once. */
function decimal(text, power) {
  const value = Number(`${text}e${power}`);
  return Number.isFinite(value) ? { value: value + 0 } : { fault: "typed-too-large" };
}

/**
 * A value with its unit and a fitting prefix, all its digits: 4700 in ohm is "4.7 kΩ".
 * @param {number} value
 * @param {{symbol: string, prefixes: boolean}} unit
 * @param {string} language
 */
export function spelled(value, unit, language = "en") {
  const [mantissa, power = "0"] = String(Math.abs(value)).split("e");
  const [whole, fraction = ""] = mantissa.split(".");
  const digits = (whole + fraction).replace(/^0+/, "");
  const first = digits ? Number(power) + whole.length - 1 - (whole.length + fraction.length - digits.length) : 0;
  const step = unit.prefixes ? Math.min(Math.max(Math.floor(first / 3) * 3, -12), 12) : 0;
  const text = (value < 0 ? "-" : "") + placed(digits.replace(/0+$/, "") || "0", first - step);
  const symbol = (step ? PREFIX_OF[step] : "") + unit.symbol;
  return (language === "es" ? text.replace(".", ",") : text) + (symbol ? `\u00a0${symbol}` : "");
}

function placed(digits, first) {
  if (first < -6 || first > 15) return `${digits[0]}${digits.length > 1 ? `.${digits.slice(1)}` : ""}e${first}`;
  if (first < 0) return `0.${"0".repeat(-first - 1)}${digits}`;
  const whole = digits.slice(0, first + 1).padEnd(first + 1, "0"),
    rest = digits.slice(first + 1);
  return rest ? `${whole}.${rest}` : whole;
}

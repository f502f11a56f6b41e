/** Numbers as typed: what each means, what is refused, and that whatever is spelled out reads back as the same number. */
import assert from "node:assert/strict";
import test from "node:test";
import { PREFIXES, spelled, typed } from "../../rules/handheld/page/typed.js";

const OHM = { symbol: "Ω", prefixes: true },
  VOLT = { symbol: "V", prefixes: true },
  FARAD = { symbol: "F", prefixes: true },
  HERTZ = { symbol: "Hz", prefixes: true },
  METRE = { symbol: "m", prefixes: true },
  OHM_PER_METRE = { symbol: "Ω/m", prefixes: true },
  PERCENT = { symbol: "%", prefixes: false },
  CELSIUS = { symbol: "°C", prefixes: false },
  RATIO = { symbol: "", prefixes: false };

// typed, unit, value in English, value in Spanish; a word is the fault.
const TABLE = [
  ["10M", OHM, 1e7, 1e7],
  ["4k7", OHM, 4700, 4700],
  ["250", OHM, 250, 250],
  ["2.2 k", OHM, 2200, 2200],
  ["2,2 k", OHM, 2200, 2200],
  ["0,47", OHM, 0.47, 0.47],
  ["4m7", OHM, 0.0047, 0.0047],
  ["100n", FARAD, 1e-7, 1e-7],
  ["47u", FARAD, 47e-6, 47e-6],
  ["47µ", FARAD, 47e-6, 47e-6],
  ["47\u03bcF", FARAD, 47e-6, 47e-6],
  ["4p7", FARAD, 4.7e-12, 4.7e-12],
  ["4R7", OHM, 4.7, 4.7],
  ["0R22", OHM, 0.22, 0.22],
  ["470R", OHM, 470, 470],
  ["3V3", VOLT, 3.3, 3.3],
  ["24 V", VOLT, 24, 24],
  ["24mV", VOLT, 0.024, 0.024],
  ["10 MΩ", OHM, 1e7, 1e7],
  ["10 M\u2126", OHM, 1e7, 1e7],
  ["10 kohm", OHM, 10000, 10000],
  ["4K7", OHM, 4700, 4700],
  ["50Hz", HERTZ, 50, 50],
  ["1.5kHz", HERTZ, 1500, 1500],
  ["1e6", OHM, 1e6, 1e6],
  ["1,5e-3", OHM, 0.0015, 0.0015],
  ["-5", VOLT, -5, -5],
  ["\u22125", VOLT, -5, -5],
  ["+5", VOLT, 5, 5],
  [".5", VOLT, 0.5, 0.5],
  [",5", VOLT, 0.5, 0.5],
  ["5.", VOLT, 5, 5],
  ["10 000", OHM, 10000, 10000],
  ["10\u202f000,5", OHM, 10000.5, 10000.5],
  ["1,234.5", OHM, 1234.5, 1234.5],
  ["1.234,5", OHM, 1234.5, 1234.5],
  ["1,000,000", OHM, 1e6, 1e6],
  ["1.000.000", OHM, 1e6, 1e6],
  ["0,125", OHM, 0.125, 0.125],
  ["0.125", OHM, 0.125, 0.125],
  ["1,2345", OHM, 1.2345, 1.2345],
  ["1234,567", OHM, 1234.567, 1234.567],
  ["30", METRE, 30, 30],
  ["2km", METRE, 2000, 2000],
  ["5mm", METRE, 0.005, 0.005],
  ["7.41m", OHM_PER_METRE, 0.00741, 0.00741],
  ["7.41 mΩ/m", OHM_PER_METRE, 0.00741, 0.00741],
  ["5%", PERCENT, 5, 5],
  ["0,5 %", PERCENT, 0.5, 0.5],
  ["20 °C", CELSIUS, 20, 20],
  ["20C", CELSIUS, 20, 20],
  ["0.5", RATIO, 0.5, 0.5],
  ["", OHM, null, null],
  ["   ", OHM, null, null],
  // What can be read in two ways. In English a point cannot group thousands; a comma can in English, and either can in Spanish.
  ["1,000", OHM, "typed-thousand", "typed-thousand"],
  ["1.000", OHM, 1, "typed-thousand"],
  ["12.345", VOLT, 12.345, "typed-thousand"],
  ["4,700k", OHM, "typed-thousand", "typed-thousand"],
  ["-1,000", OHM, "typed-thousand", "typed-thousand"],
  ["5m", METRE, "typed-metre", "typed-metre"],
  ["5 m", METRE, "typed-metre", "typed-metre"],
  ["4m7", METRE, "typed-metre", "typed-metre"],
  // What is no number.
  ["5k", PERCENT, "typed-no-prefix", "typed-no-prefix"],
  ["4k7", CELSIUS, "typed-no-prefix", "typed-no-prefix"],
  ["1e6k", OHM, "typed-power-and-prefix", "typed-power-and-prefix"],
  ["1 00", OHM, "typed-spaces", "typed-spaces"],
  ["1.2.3", OHM, "typed-marks", "typed-marks"],
  ["1,23,456", OHM, "typed-marks", "typed-marks"],
  ["1e999", OHM, "typed-too-large", "typed-too-large"],
  ["k", OHM, "typed-not-a-number", "typed-not-a-number"],
  ["Ω", OHM, "typed-not-a-number", "typed-not-a-number"],
  ["4kk7", OHM, "typed-not-a-number", "typed-not-a-number"],
  ["4V7", OHM, "typed-not-a-number", "typed-not-a-number"],
  ["10Mk", OHM, "typed-not-a-number", "typed-not-a-number"],
  ["24 A", VOLT, "typed-not-a-number", "typed-not-a-number"],
  ["--5", OHM, "typed-not-a-number", "typed-not-a-number"],
  ["0x10", OHM, "typed-not-a-number", "typed-not-a-number"],
  ["Infinity", OHM, "typed-not-a-number", "typed-not-a-number"],
  ["NaN", OHM, "typed-not-a-number", "typed-not-a-number"],
  ["10M; 1", OHM, "typed-not-a-number", "typed-not-a-number"],
  ["9".repeat(41), OHM, "typed-too-long", "typed-too-long"],
];

for (const [text, unit, ...expected] of TABLE) {
  test(`${JSON.stringify(text)} in ${unit.symbol || "ratio"}`, () => {
    ["en", "es"].forEach((language, i) => {
      const found = typed(text, unit, language);
      assert.equal(found && (found.fault ?? found.value), expected[i], language);
    });
  });
}

/** A small generator of whole numbers, the same in every run. */
function* drawn(seed) {
  let state = seed >>> 0;
  for (;;) {
    state = (Math.imul(state, 1664525) + 1013904223) >>> 0;
    yield state / 2 ** 32;
  }
}

test("a prefix is exact: the value is the number that the decimal text times the power names", () => {
  const draw = drawn(1);
  const digits = (most) => String(1 + Math.floor(draw.next().value * most));
  for (let i = 0; i < 20000; i++) {
    const letters = Object.keys(PREFIXES),
      letter = letters[Math.floor(draw.next().value * letters.length)],
      whole = digits(9999),
      fraction = digits(9999) + "1";
    const exact = Number(`${whole}.${fraction}e${PREFIXES[letter]}`);
    for (const text of [`${whole}${letter}${fraction}`, `${whole}.${fraction}1`.slice(0, -1) + letter, `${whole}.${fraction} ${letter}Ω`]) {
      const found = typed(text, OHM, "en");
      assert.equal(found.value, exact, text);
    }
  }
});

test("what is spelled out reads back as the same number, in both languages", () => {
  const draw = drawn(2);
  for (let i = 0; i < 20000; i++) {
    const value = Number(
      ((draw.next().value - 0.3) * 10 ** Math.floor(draw.next().value * 22 - 10)).toPrecision(1 + Math.floor(draw.next().value * 17)),
    );
    for (const unit of [OHM, VOLT, PERCENT, RATIO]) {
      for (const language of ["en", "es"]) {
        const text = spelled(value, unit, language),
          found = typed(text, unit, language);
        // Three digits behind the mark are what a person must not type; as output they stand beside the unit and are not typed.
        if (found.fault) assert.equal(found.fault, "typed-thousand", text);
        else assert.equal(found.value, value, text);
      }
    }
  }
});

test("no text makes the reader fail: it is a finite number, a fault, or nothing", () => {
  const draw = drawn(3),
    letters = "0123456789.,kMmunpRΩ eE+-'%°CVx\u00a0";
  for (let i = 0; i < 50000; i++) {
    const text = Array.from({ length: Math.floor(draw.next().value * 10) }, () => letters[Math.floor(draw.next().value * letters.length)]).join("");
    for (const unit of [OHM, VOLT, METRE, PERCENT, CELSIUS]) {
      const found = typed(text, unit, i % 2 ? "en" : "es");
      assert.ok(found === null || typeof found.fault === "string" || Number.isFinite(found.value), text);
    }
  }
});

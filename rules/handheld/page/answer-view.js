/** An answer as a technician reads it: the verdict in words, what was found, the numbers, the cautions, and how it came about. */
import { make } from "./elements.js";
import { trailInWords } from "./faults.js";
import { interval, shown, worked } from "./quantities.js";
import { DESCRIBED, SPREADS, asTyped, entered, placed } from "./question.js";
import { capital, ofRules, say } from "./texts.js";

/**
 * The sections of an answer.
 * @param {object} bundle the rule set's data
 * @param {object} answer the service's document
 * @param {object} question the body that was asked
 */
export function answerSections(bundle, answer, question) {
  const check = bundle.checks[answer.check];
  return [
    verdict(check, answer),
    findings(bundle, check, answer),
    jump(answer),
    numbers(bundle, check, answer, question),
    cautions(answer),
    assumptions(bundle, check, answer),
    unverified(bundle, check, answer),
    working(bundle, check, answer),
  ];
}

function verdict(check, answer) {
  return make(
    "div",
    { class: `verdict ${answer.verdict}` },
    make("p", { class: "asked" }, ofRules(check.question)),
    make("h1", { id: "heading" }, make("span", { class: "unseen" }, `${say("verdict")}: `), say(`verdict-${answer.verdict}`)),
    make("p", { class: "meaning" }, say(`verdict-${answer.verdict}-means`)),
  );
}

function findings(bundle, check, answer) {
  return make(
    "section",
    { "aria-labelledby": "found" },
    make("h2", { id: "found" }, say("findings")),
    make(
      "ul",
      { class: "findings" },
      answer.findings.map((finding, i) =>
        make(
          "li",
          { class: i ? null : "decisive" },
          i && finding.verdict !== "note" ? make("strong", {}, `${say(`verdict-${finding.verdict}`)}: `) : null,
          inPlainWords(bundle, check, finding.sentence),
        ),
      ),
    ),
  );
}

function jump(answer) {
  if (!answer.cautions.length) return null;
  const words = [...new Set(answer.cautions.map((caution) => say(`signal-${caution.word}`)))].join(", ");
  return make(
    "p",
    {},
    make(
      "a",
      {
        class: "jump",
        href: "#cautions",
        onclick: (event) => {
          event.preventDefault();
          const heading = document.getElementById("cautions");
          heading.tabIndex = -1;
          heading.focus();
          heading.scrollIntoView();
        },
      },
      say("cautions-below", { count: answer.cautions.length, words }),
    ),
  );
}

function numbers(bundle, check, answer, question) {
  const given = [],
    lacking = [];
  for (const formula of check.formulas.filter((one) => one.show === "result")) {
    const result = answer.results[formula.key];
    if (result === undefined) continue;
    const several = Array.isArray(result),
      rows = several ? result : [result];
    if (rows.some((row) => row.value !== null)) given.push(quantity(bundle, check, formula, result, question));
    else if (rows.length)
      lacking.push(make("li", {}, `${capital(ofRules(formula.meaning))}: ${inPlainWords(bundle, check, rows[0].reason) || say("no-value")}`));
  }
  return make(
    "section",
    { "aria-labelledby": "numbers" },
    make("h2", { id: "numbers" }, say("numbers")),
    make("p", { class: "hint" }, say("numbers-hint")),
    given.length ? make("dl", { class: "numbers" }, given) : make("p", {}, say("no-numbers")),
    lacking.length
      ? make("details", { class: "fold" }, make("summary", {}, say("not-computed", { count: lacking.length })), make("ul", {}, lacking))
      : null,
  );
}

function quantity(bundle, check, formula, result, question) {
  const unit = bundle.units[formula.unit] || { symbol: "", prefixes: false };
  const words = capital(ofRules(formula.meaning));
  if (!Array.isArray(result)) return make("div", {}, make("dt", {}, words), value(result, unit));
  return make(
    "div",
    {},
    make("dt", {}, words),
    result.map((row, i) =>
      make("dd", { class: "each" }, make("span", { class: "of" }, itemName(bundle, check, row, i, result.length, question)), valueParts(row, unit)),
    ),
  );
}

const value = (row, unit) => make("dd", {}, valueParts(row, unit));

function valueParts(row, unit) {
  if (row.value === null) return [make("span", { class: "reason" }, row.reason || say("no-value"))];
  return [
    make("span", { class: "value" }, row.title ?? (typeof row.value === "number" ? shown(row.value, unit) : String(row.value))),
    row.low === undefined ? null : make("span", { class: "interval" }, ` ${interval(row.low, row.high, unit)}`),
    row.reason ? make("span", { class: "reason" }, ` ${row.reason}`) : null,
  ];
}

/** What one row of a result stands for: an entry by its title, an item of a list by its label or number. */
function itemName(bundle, check, row, i, size, question) {
  for (const axis of check.axes) {
    const entry = row.id !== undefined && axis.from === "entries" && bundle.entries[axis.of]?.[row.id];
    if (entry) return ofRules(entry.title);
  }
  const lists = check.axes.filter((axis) => axis.from === "list" && question[axis.list]?.length === size);
  return (lists.length === 1 && question[lists[0].list][i].label) || say("item-number", { number: i + 1 });
}

function cautions(answer) {
  if (!answer.cautions.length) return null;
  return make(
    "section",
    { "aria-labelledby": "cautions" },
    make("h2", { id: "cautions" }, say("cautions")),
    answer.cautions.map((caution) =>
      make(
        "div",
        { class: `safety ${caution.word === "notice" ? "notice-word" : caution.word}` },
        make(
          "p",
          { class: "signal" },
          make("span", { "class": "alert-sign", "aria-hidden": "true" }, caution.word === "notice" ? "" : "▲"),
          say(`signal-${caution.word}`),
        ),
        make("p", {}, caution.text),
      ),
    ),
  );
}

function assumptions(bundle, check, answer) {
  if (!answer.assumptions.length) return null;
  return make(
    "section",
    { "aria-labelledby": "assumed" },
    make("h2", { id: "assumed" }, say("assumptions")),
    make(
      "ul",
      {},
      answer.assumptions.map((one) => {
        if (one.input === undefined) return make("li", {}, one.because);
        const at = placed(bundle, check, one.input),
          amount = assumedValue(bundle, at.field, one);
        return make("li", {}, `${trailInWords(at)}: ${amount}. ${capital(one.because)}.`);
      }),
    ),
  );
}

function assumedValue(bundle, field, { value: assumed }) {
  if (field.kind === "number") return shown(assumed, bundle.units[field.unit]);
  if (field.kind === "choice") return ofRules(field.choices.find((choice) => choice.key === assumed).meaning);
  return typeof assumed === "boolean" ? say(assumed ? "yes" : "no") : String(assumed);
}

function unverified(bundle, check, answer) {
  if (!answer.unverified.length) return null;
  return make(
    "section",
    { "aria-labelledby": "unverified" },
    make("h2", { id: "unverified" }, say("unverified")),
    make("p", { class: "hint" }, say("unverified-hint")),
    make(
      "ul",
      {},
      answer.unverified.map((one) =>
        make("li", {}, `${meaningOf(bundle, check, one.name)} (${say(`standing-${one.standing}`)}; ${sourceOf(bundle, one.source)})`),
      ),
    ),
  );
}

/** A sentence with the pointers and names in it replaced by what they mean. */
function inPlainWords(bundle, check, sentence) {
  const pointers = sentence?.replace(/(?:\/[a-z0-9_]+)+/g, (pointer) => {
    const at = placed(bundle, check, pointer);
    return at.field && !at.rest.length ? `“${trailInWords(at)}”` : pointer;
  });
  return pointers?.replace(/\b[a-z][a-z0-9_]*(?:\.[a-z][a-z0-9_]*)+\b/g, (name) => {
    const meaning = meaningOf(bundle, check, name);
    return meaning === name ? name : `“${meaning}”`;
  });
}

/** The meaning of a name that formulas use: a field, a formula, a constant. */
function meaningOf(bundle, check, name) {
  const known = check.formulas.find((one) => one.name === name) || check.constants?.[name] || bundle.constants[name];
  if (known?.meaning) return capital(ofRules(known.meaning));
  const trail = [];
  let fields = check.inputs;
  for (const step of name.split(".")) {
    const field = fields?.find((one) => one.name === step || one.item === step);
    if (!field) return name;
    trail.push(field);
    fields = field.kind === "reference" ? bundle.kinds[field.of].fields : field.fields;
  }
  return trail.map((field) => capital(ofRules(field.meaning))).join(" › ");
}

/** "circuits-text-1, ch. 8" with the title of the work. */
function sourceOf(bundle, cited) {
  const [id, ...place] = cited.split(", ");
  const work = bundle.sources[id];
  return work ? [work.title, work.edition, ...place].filter(Boolean).join(", ") : cited;
}

function working(bundle, check, answer) {
  const rows = answer.working.map((step) =>
    make(
      "li",
      {},
      make(
        "p",
        {},
        make("strong", {}, meaningOf(bundle, check, step.name)),
        ` = ${worked(step.value, bundle.units[step.unit] || { symbol: "", prefixes: false }, bundle)}`,
      ),
      make("p", {}, make("code", { lang: "zxx" }, `${step.name} = ${step.formula}`)),
      make("p", { class: "hint" }, sourceOf(bundle, step.source)),
    ),
  );
  return make("details", { class: "fold" }, make("summary", {}, say("working", { count: rows.length })), make("ol", { class: "working" }, rows));
}

/** What was asked, as it was typed. */
export function askedSection(bundle, check, draft, open = false) {
  const rows = asTyped(bundle, check, draft).map(({ pointer, field, value: given }) =>
    make("div", {}, make("dt", {}, trailInWords(placed(bundle, check, pointer))), make("dd", {}, typedInWords(bundle, field, given))),
  );
  return make("details", { class: "fold", open }, make("summary", {}, say("what-was-asked")), make("dl", { class: "numbers" }, rows));
}

function typedInWords(bundle, field, given) {
  if (field.kind === "number") {
    const symbol = bundle.units[field.unit].symbol;
    const spread = SPREADS.includes(given.spread) && given.other.trim();
    return `${entered(given, { symbol })} ${symbol}`.trim() + (spread ? `; ${say(`spread-${given.spread}`, { unit: symbol })}: ${given.other}` : "");
  }
  if (field.kind === "choice") return ofRules(field.choices.find((choice) => choice.key === given)?.meaning || { en: given, es: given });
  if (field.kind === "switch") return say(given);
  if (field.kind === "curve") return given.map((pair) => pair.join(": ")).join("; ");
  if (field.kind === "reference")
    return given.pick === DESCRIBED
      ? say("not-listed")
      : ofRules(bundle.entries[field.of]?.[given.pick]?.title || { en: given.pick, es: given.pick });
  return given;
}

/** The controls of one field: a number, a choice, a switch, a text or a curve. Each writes what is typed into its part of the draft. */
import { button, fill, idOf, make } from "./elements.js";
import { inWords } from "./faults.js";
import { PERCENT, SPREADS, applies, entered } from "./question.js";
import { keypad } from "./settings.js";
import { capital, ofRules, say } from "./texts.js";
import { spelled, typed } from "./typed.js";

const RADIOS_UP_TO = 7; // more choices than these make a list to pick from

/**
 * The element of a leaf field.
 * @param {object} field as declared
 * @param {object} draft that holds the field's part under its key
 * @param {string} pointer of the field in the question
 * @param {object} form {bundle, branch, changed()}: what all fields of the form share
 * @param {{hint?: string, changed?: Function}} [own]
 */
export function leaf(field, draft, pointer, form, own = {}) {
  return LEAVES[field.kind](field, draft, pointer, form, own);
}

const LEAVES = { number, choice, switch: onOff, text: plainText, curve };

/** What is asked, and whether an answer is needed. */
export function asked(field) {
  return [capital(ofRules(field.meaning)), field.required && make("span", { class: "needed" }, ` ${say("needed")}`)];
}

/** What holds when the field stays empty, if the rule set says. */
function assumed(field, form) {
  if (!field.assume) return null;
  const { value } = field.assume;
  const text =
    field.kind === "number"
      ? spelled(value, form.bundle.units[field.unit], form.language)
      : field.kind === "switch"
        ? say(value ? "yes" : "no")
        : ofRules(field.choices.find((choice) => choice.key === value).meaning);
  return say("assumed-if-empty", { value: text });
}

function hintOf(field, form, own, id) {
  const words = own.hint || assumed(field, form);
  return words && make("p", { class: "hint", id: `${id}:hint` }, words);
}

function described(...elements) {
  return (
    elements
      .filter(Boolean)
      .map((element) => element.id)
      .join(" ") || undefined
  );
}

const typing = { type: "text", autocomplete: "off", autocapitalize: "off", autocorrect: "off", spellcheck: "false", enterkeyhint: "next" };

function number(field, draft, pointer, form, own) {
  const given = draft[field.key],
    id = idOf(pointer),
    unit = form.bundle.units[field.unit];
  const read = make("p", { class: "as-read", id: `${id}:read` }),
    hint = hintOf(field, form, own, id);
  const prefix = unit.prefixes && (keypad() === "digits" || given.prefix) && prefixes(field, given, id, unit, () => show());
  const sign = unit.symbol && make("span", { class: prefix ? "unseen" : "unit", id: `${id}:unit` }, unit.symbol);
  const input = make("input", {
    ...typing,
    "inputmode": keypad() === "digits" ? "decimal" : undefined,
    id,
    "value": given.text,
    "aria-describedby": described(sign, read, hint),
    "aria-required": field.required && "true",
  });
  const uncertainty = field.uncertain && spread(field, given, id, unit, () => show());
  const show = () => {
    const words = asRead(given, unit, form.language);
    fill(read, words);
    read.classList.toggle("wrong", Boolean(words) && !words.startsWith("="));
    form.changed();
  };
  input.addEventListener("input", () => {
    given.text = input.value;
    show();
  });
  show();
  return make(
    "div",
    { "class": "field", "data-at": pointer },
    make("label", { for: id }, asked(field)),
    hint,
    make("div", { class: "entry" }, input, prefix, sign, uncertainty?.key),
    uncertainty?.panel,
    read,
  );
}

/** How the number is understood, shown while it is typed. */
function asRead(given, unit, language) {
  const value = typed(entered(given, unit), unit, language);
  if (!value) return "";
  if (value.fault) return inWords(value, unit);
  const base = spelled(value.value, unit, language);
  if (!given.spread || !given.other.trim()) return `= ${base}`;
  const sizeUnit = given.spread === "half_width_percent" ? PERCENT : unit;
  const other = typed(given.other, sizeUnit, language);
  if (other.fault) return inWords(other, sizeUnit);
  return `= ${say(`read-${given.spread}`, { value: base, other: spelled(other.value, sizeUnit, language) })}`;
}

/** The prefix to pick where the keypad has large digits only. */
function prefixes(field, given, id, unit, show) {
  const select = make(
    "select",
    { "id": `${id}:prefix`, "class": "prefix", "aria-label": say("prefix-of", { field: ofRules(field.meaning) }) },
    ["", "p", "n", "µ", "m", "k", "M", "G"].map((letter) =>
      make("option", { value: letter, selected: letter === (given.prefix || "") }, letter + unit.symbol),
    ),
  );
  select.addEventListener("change", () => {
    given.prefix = select.value;
    show();
  });
  return select;
}

/** The key that opens the uncertainty of a number, and its panel. */
function spread(field, given, id, unit, show) {
  const words = ofRules(field.meaning),
    sign = make("span", { class: "unit" });
  const other = make("input", { ...typing, id: `${id}:other`, value: given.other });
  const otherLabel = make("label", { for: `${id}:other` }),
    entry = make("div", { class: "stacked" }, otherLabel, make("div", { class: "entry" }, other, sign));
  const select = make(
    "select",
    { id: `${id}:spread` },
    ["", ...SPREADS].map((form_) =>
      make("option", { value: form_, selected: given.spread === form_ }, say(`spread-${form_ || "none"}`, { unit: unit.symbol || say("same-unit") })),
    ),
  );
  const panel = make(
    "div",
    { "class": "spread", "id": `${id}:panel`, "hidden": !given.spread, "role": "group", "aria-label": say("spread-of", { field: words }) },
    make("div", { class: "stacked" }, make("label", { for: `${id}:spread` }, say("spread")), select),
    entry,
  );
  const key = button(
    "±",
    () => {
      panel.hidden = !panel.hidden;
      key.setAttribute("aria-expanded", String(!panel.hidden));
      if (!panel.hidden) select.focus();
    },
    { "class": "spread-key", "aria-expanded": String(!panel.hidden), "aria-controls": panel.id, "aria-label": say("spread-of", { field: words }) },
  );
  const arrange = () => {
    entry.hidden = !given.spread;
    otherLabel.textContent = say(given.spread === "between" ? "spread-upper" : "spread-size");
    sign.textContent = given.spread === "half_width_percent" ? "%" : unit.symbol;
  };
  select.addEventListener("change", () => {
    given.spread = select.value;
    arrange();
    show();
  });
  other.addEventListener("input", () => {
    given.other = other.value;
    show();
  });
  arrange();
  return { key, panel };
}

function choice(field, draft, pointer, form, own) {
  const open = field.choices.filter((option) => applies(option, form.branch)).map((option) => [option.key, capital(ofRules(option.meaning))]);
  return options(field, open, draft, pointer, form, own);
}

function onOff(field, draft, pointer, form, own) {
  return options(
    field,
    [
      ["yes", say("yes")],
      ["no", say("no")],
    ],
    draft,
    pointer,
    form,
    own,
  );
}

/** Few options are laid out to be touched, many are a list to pick from. An answer that is not needed can be taken back. */
export function options(field, open, draft, pointer, form, own = {}) {
  const id = idOf(pointer),
    hint = hintOf(field, form, own, id),
    current = draft[field.key];
  const take = (value) => {
    draft[field.key] = value;
    own.changed?.(value);
    form.changed();
  };
  if (open.length > RADIOS_UP_TO) return picked(field, open, current, pointer, hint, take, own.unset);
  const all = field.required ? open : [...open, ["", own.unset || say("not-stated")]];
  const radios = all.map(([key, words], i) => {
    const at = i ? `${id}:${i}` : id;
    return make(
      "div",
      { class: "option" },
      make("input", {
        type: "radio",
        id: at,
        name: id,
        value: key,
        checked: current === key && (key !== "" || !field.required),
        onchange: () => take(key),
      }),
      make("label", { for: at }, words),
    );
  });
  return make(
    "fieldset",
    { "class": "field options", "data-at": pointer, "aria-describedby": hint ? hint.id : undefined },
    make("legend", {}, asked(field)),
    hint,
    radios,
  );
}

function picked(field, open, current, pointer, hint, take, unset) {
  const id = idOf(pointer);
  const select = make(
    "select",
    { id, "aria-describedby": described(hint), "aria-required": field.required && "true", "onchange": () => take(select.value) },
    make("option", { value: "" }, unset || say(field.required ? "choose" : "not-stated")),
    open.map(([key, words]) => make("option", { value: key, selected: key === current }, words)),
  );
  return make("div", { "class": "field", "data-at": pointer }, make("label", { for: id }, asked(field)), hint, select);
}

function plainText(field, draft, pointer, form, own) {
  const id = idOf(pointer),
    hint = hintOf(field, form, own, id);
  const input = make("input", {
    ...typing,
    id,
    "value": draft[field.key],
    "maxlength": field.longest,
    "aria-describedby": described(hint),
    "aria-required": field.required && "true",
  });
  input.addEventListener("input", () => {
    draft[field.key] = input.value;
    form.changed();
  });
  return make("div", { "class": "field", "data-at": pointer }, make("label", { for: id }, asked(field)), hint, input);
}

function curve(field, draft, pointer, form, own) {
  const rows = draft[field.key],
    id = idOf(pointer),
    units = field.units.map((name) => form.bundle.units[name]),
    hint = hintOf(field, form, own, id);
  const list = make("div"),
    add = button(
      say("add-point"),
      () => {
        rows.push(["", ""]);
        arrange();
        list.lastElementChild.querySelector("input").focus();
      },
      { id, class: "quiet" },
    );
  const arrange = () =>
    fill(
      list,
      rows.map((row, i) =>
        make(
          "div",
          { "class": "pair", "role": "group", "aria-label": say("point-number", { number: i + 1 }) },
          units.map((unit, j) =>
            make("input", {
              ...typing,
              "id": `${idOf(pointer)}/${i}/${j}`,
              "value": row[j],
              "placeholder": unit.symbol,
              "aria-label": `${say("point-number", { number: i + 1 })}, ${unit.symbol}`,
              "oninput": (event) => {
                row[j] = event.target.value;
                form.changed();
              },
            }),
          ),
          button(
            "×",
            () => {
              rows.splice(i, 1);
              arrange();
              add.focus();
            },
            { "class": "quiet", "aria-label": say("remove-point", { number: i + 1 }) },
          ),
        ),
      ),
    );
  arrange();
  return make("fieldset", { "class": "field", "data-at": pointer }, make("legend", {}, asked(field)), hint, list, add);
}

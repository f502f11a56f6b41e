/** The form of a check, made from what the rule set declares: nothing about any check is written here. */
import { button, fill, focusOn, idOf, make } from "./elements.js";
import { asked, leaf, options } from "./fields.js";
import { amount } from "./quantities.js";
import { DESCRIBED, applies, branchField, part } from "./question.js";
import { capital, ofRules, say } from "./texts.js";

/**
 * The fields of a check.
 * @param {object} bundle the rule set's data
 * @param {object} check as declared
 * @param {object} draft what was typed so far; it is written to
 * @param {{language: string, changed: Function}} around
 */
export function fieldsOf(bundle, check, draft, { language, changed }) {
  const decides = branchField(check),
    rest = make("div");
  part(draft, decides);
  const form = { bundle, language, changed, branch: draft[decides.key] || null };
  const arrange = () =>
    fill(
      rest,
      form.branch
        ? check.inputs.filter((field) => field !== decides && applies(field, form.branch)).map((field) => built(field, draft, "", form, true))
        : make("p", { class: "hint" }, say("choose-first")),
    );
  const first = leaf(
    decides,
    draft,
    `/${decides.key}`,
    { ...form, branch: null },
    {
      changed: (key) => {
        form.branch = key || null;
        arrange();
      },
    },
  );
  arrange();
  return make("div", {}, first, rest);
}

/** Whether anything was typed into a part of a draft. */
function touched(value) {
  if (value === null || typeof value !== "object") return Boolean(value);
  return Object.entries(value).some(([key, inner]) => key !== "spread" && key !== "prefix" && touched(inner));
}

/** Whether a field asks for something that the question cannot do without. */
function asksFor(field, branch) {
  if (field.kind === "group" || (field.kind === "list" && field.required)) {
    return field.required || field.fields.some((inner) => applies(inner, branch) && asksFor(inner, branch));
  }
  return Boolean(field.required);
}

function built(field, draft, pointer, form, foldable = false) {
  const given = part(draft, field),
    at = `${pointer}/${field.key}`;
  const element =
    field.kind === "group"
      ? group(field, given, at, form)
      : field.kind === "list"
        ? list(field, given, at, form)
        : field.kind === "reference"
          ? reference(field, given, at, form)
          : leaf(field, draft, at, form);
  if (!foldable || !["group", "list", "reference"].includes(field.kind) || asksFor(field, form.branch)) return element;
  // What may stay empty is folded, so that a phone shows first what is needed.
  return make("details", { class: "fold", open: touched(given) }, make("summary", {}, capital(ofRules(field.meaning))), element);
}

function group(field, draft, pointer, form) {
  const inner = field.fields.filter((one) => applies(one, form.branch));
  return make(
    "fieldset",
    { "class": "group", "id": idOf(pointer), "data-at": pointer },
    make("legend", {}, asked(field)),
    inner.map((one) => built(one, draft, pointer, form)),
  );
}

function list(field, items, pointer, form) {
  const holder = make("div"),
    count = make("p", { class: "hint" });
  const words = ofRules(field.meaning);
  const add = button(
    say("add-item"),
    () => {
      items.push({});
      arrange();
      focusOn(holder.lastElementChild.querySelector("input, select"));
      form.changed();
    },
    { "id": idOf(pointer), "class": "quiet", "aria-label": say("add-item-to", { list: words }) },
  );
  const arrange = () => {
    fill(
      holder,
      items.map((item, i) =>
        make(
          "fieldset",
          { "class": "group item", "id": idOf(`${pointer}/${i}`), "data-at": `${pointer}/${i}` },
          make("legend", {}, say("item-number", { number: i + 1 }), make("span", { class: "unseen" }, ` ${words}`)),
          field.fields.filter((one) => applies(one, form.branch)).map((one) => built(one, item, `${pointer}/${i}`, form)),
          button(
            say("remove-item", { number: i + 1 }),
            () => {
              items.splice(i, 1);
              arrange();
              add.focus();
              form.changed();
            },
            { class: "quiet" },
          ),
        ),
      ),
    );
    add.hidden = items.length >= field.most;
    fill(count, items.length >= field.most ? say("list-full", { most: field.most }) : "");
  };
  arrange();
  return make("fieldset", { "class": "group", "data-at": pointer }, make("legend", {}, asked(field)), holder, count, add);
}

/** An entry of a catalogue, with other values for some of its fields, or described from nothing. */
function reference(field, given, pointer, form) {
  const kind = form.bundle.kinds[field.of],
    entries = form.bundle.entries[field.of] || {},
    own = make("div");
  const titles = Object.keys(entries)
    .map((id) => [id, ofRules(entries[id].title)])
    .sort((a, b) => a[1].localeCompare(b[1], form.language, { numeric: true }));
  const arrange = () => fill(own, given.pick && members(kind, entries[given.pick], given, pointer, form));
  const pick = options({ ...field, key: "pick" }, [...titles, [DESCRIBED, say("not-listed")]], given, pointer, form, {
    changed: () => {
      given.own = {}; // other values belong to the entry that they were given for
      arrange();
    },
  });
  arrange();
  return make("div", { class: "reference" }, pick, own);
}

function members(kind, entry, given, pointer, form) {
  const controls = () =>
    kind.fields.map((field) => {
      part(given.own, field);
      const stored = entry?.fields[field.name];
      return leaf(
        entry ? { ...field, required: false, assume: undefined } : field,
        given.own,
        `${pointer}/${field.key}`,
        form,
        entry ? { unset: say("as-catalogue"), hint: stored !== undefined && say("in-catalogue", { value: catalogued(field, stored, form) }) } : {},
      );
    });
  if (!entry)
    return make(
      "fieldset",
      { class: "group" },
      make("legend", {}, say("described-values")),
      make("p", { class: "hint" }, say("described-hint")),
      controls(),
    );
  const details = make("details", { class: "fold", open: touched(given.own) }, make("summary", {}, say("other-values")));
  const open = () =>
    details.children.length < 2 && details.append(make("div", {}, make("p", { class: "hint" }, say("other-values-hint")), controls()));
  if (details.open) open();
  details.addEventListener("toggle", () => details.open && open()); // made when it is opened: a kind has many fields
  return details;
}

/** What the catalogue says of a field. */
function catalogued(field, stored, form) {
  if (field.kind === "number") return amount(stored, form.bundle.units[field.unit]);
  if (field.kind === "switch") return say(stored ? "yes" : "no");
  if (field.kind === "choice") return ofRules(field.choices.find((one) => one.key === stored).meaning);
  if (field.kind === "curve")
    return stored.points.map((pair) => pair.map((value, i) => amount({ value }, form.bundle.units[field.units[i]])).join(": ")).join(", ");
  return String(stored);
}

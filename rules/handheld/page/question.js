/**
 * From what was typed to the question: a draft holds the text as typed, member by member as the rule set declares the check; the question
 * is its JSON.
 *
 * A draft mirrors the declaration. A number is {text, prefix, spread, other}: `spread` is "" or a form of uncertainty, `other` its size (for
 * "between", the upper end). A reference is {pick, own}: the id, DESCRIBED, or nothing; `own` is a draft of the kind's fields. A list or a
 * curve is an array.
 */
import { typed } from "./typed.js";

export const DESCRIBED = "*"; // no id has a star
export const SPREADS = ["half_width_percent", "half_width", "standard_uncertainty", "between"];

/** What was entered for a number: the text, and the prefix that was picked beside it. In metres a prefix needs its unit. */
export const entered = ({ text, prefix }, unit) => (prefix && text.trim() ? text + prefix + (unit.symbol === "m" ? "m" : "") : text);
export const PERCENT = { symbol: "%", prefixes: false };

/** Whether a field, or one of its choices, belongs to the branch. */
export const applies = (field, branch) => !field.only || field.only.includes(branch);

/** The field that decides which others apply. */
export const branchField = (check) => check.inputs.find((field) => field.name === check.branch);

/** The part of a draft for one field; made where it is not there yet. */
export function part(draft, field) {
  if (draft[field.key] === undefined) draft[field.key] = emptyPart(field);
  return draft[field.key];
}

function emptyPart(field) {
  if (field.kind === "number") return { text: "", prefix: "", spread: "", other: "" };
  if (field.kind === "reference") return { pick: "", own: {} };
  if (field.kind === "list") return field.required ? Array.from({ length: Math.max(field.least, 1) }, () => ({})) : [];
  if (field.kind === "curve") return [];
  return field.kind === "group" ? {} : "";
}

/**
 * Read a draft.
 * @returns {{body: object, faults: {pointer: string, fault: string}[]}} the question, without what could not be read; and why it could not
 */
export function question(bundle, check, draft, language) {
  const run = { bundle, language, branch: draft[branchField(check).key] || undefined, faults: [] };
  return { body: members(check.inputs, draft, run, "") || {}, faults: run.faults };
}

function members(fields, draft, run, pointer) {
  const body = {};
  for (const field of fields) {
    if (!applies(field, run.branch) || draft[field.key] === undefined) continue;
    const value = READERS[field.kind](field, draft[field.key], run, `${pointer}/${field.key}`);
    if (value !== undefined) body[field.key] = value;
  }
  return Object.keys(body).length ? body : undefined;
}

const READERS = {
  number(field, given, run, pointer) {
    const unit = run.bundle.units[field.unit],
      value = one(entered(given, unit), unit, run, pointer);
    if (!field.uncertain || !given.spread) return value;
    if (given.spread === "between") {
      const high = one(given.other, unit, run, pointer, "other");
      if (value === undefined && high === undefined) return undefined;
      return value === undefined || high === undefined ? lacking(given, run, pointer) : { between: [value, high] };
    }
    const size = one(given.other, given.spread === "half_width_percent" ? PERCENT : unit, run, pointer, "other");
    if (value === undefined && size === undefined) return undefined;
    return value === undefined || size === undefined ? lacking(given, run, pointer) : { value, [given.spread]: size };
  },
  choice: (field, given, run) => (field.choices.some((choice) => choice.key === given && applies(choice, run.branch)) ? given : undefined),
  switch: (field, given) => (given === "yes" ? true : given === "no" ? false : undefined),
  text: (field, given) => given.trim() || undefined,
  curve(field, given, run, pointer) {
    const units = field.units.map((name) => run.bundle.units[name]);
    const points = given.map((pair, i) => pair.map((text, j) => one(text, units[j], run, `${pointer}/${i}/${j}`) ?? null));
    const kept = points.filter((pair, i) => given[i].some((text) => text.trim()));
    points.forEach((pair, i) =>
      pair.forEach((value, j) => {
        if (value === null && !given[i][j].trim() && given[i][1 - j].trim())
          run.faults.push({ pointer: `${pointer}/${i}/${j}`, fault: "pair-half-given" });
      }),
    );
    return kept.length ? kept : undefined;
  },
  group: (field, given, run, pointer) => members(field.fields, given, run, pointer),
  list: (field, given, run, pointer) =>
    given.length ? given.map((item, i) => members(field.fields, item, run, `${pointer}/${i}`) || {}) : undefined,
  reference(field, given, run, pointer) {
    if (!given.pick) return undefined;
    const own = members(run.bundle.kinds[field.of].fields, given.own, run, pointer);
    if (given.pick === DESCRIBED) return own || {};
    return own ? { id: given.pick, ...own } : given.pick;
  },
};

function one(text, unit, run, pointer, where = "") {
  const read = typed(text, unit, run.language);
  if (read?.fault) run.faults.push({ pointer, where, ...read });
  return read?.value;
}

function lacking(given, run, pointer) {
  const empty = !given.text.trim() ? "" : !given.other.trim() ? "other" : null;
  if (empty !== null)
    run.faults.push({
      pointer,
      where: empty,
      fault: given.spread === "between" ? "between-half-given" : empty ? "spread-not-given" : "value-not-given",
    });
  return undefined;
}

/** The required fields without which the question cannot be answered, as pointers, in the order of the form. */
export function lackingFields(bundle, check, body, branch) {
  const found = [];
  const walk = (fields, given, pointer) => {
    for (const field of fields) {
      if (!applies(field, branch)) continue;
      const at = `${pointer}/${field.key}`,
        value = given?.[field.key];
      if (field.kind === "group") {
        const before = found.length;
        walk(field.fields, value, at);
        if (field.required && value === undefined && found.length === before) found.push(at);
      } else if (value === undefined) {
        if (field.required) found.push(at);
      } else if (field.kind === "list") {
        value.forEach((item, i) => walk(field.fields, item, `${at}/${i}`));
      } else if (field.kind === "reference" && typeof value === "object" && value.id === undefined) {
        walk(bundle.kinds[field.of].fields, value, at);
      }
    }
  };
  walk(check.inputs, body, "");
  return found;
}

/**
 * What stands at a place of a question: the declared field, its number in lists on the way, and the pointer of the field itself.
 * @returns {{trail: {field?: object, number?: number}[], field: object | null, pointer: string, rest: string[]}}
 */
export function placed(bundle, check, pointer) {
  const trail = [],
    rest = pointer
      .split("/")
      .slice(1)
      .map((step) => step.replaceAll("~1", "/").replaceAll("~0", "~"));
  let fields = check.inputs,
    field = null,
    at = "";
  while (rest.length && fields) {
    const next = fields.find((candidate) => candidate.key === rest[0]);
    if (!next) break;
    field = next;
    at += `/${rest.shift()}`;
    trail.push({ field });
    fields = field.kind === "reference" ? bundle.kinds[field.of].fields : field.fields;
    if (field.kind === "list" && rest.length) {
      trail.push({ number: Number(rest[0]) + 1 });
      at += `/${rest.shift()}`;
    }
  }
  return { trail, field, pointer: at, rest };
}

/** The answers that a draft gives, field by field, as typed: for reading over what was asked. */
export function asTyped(bundle, check, draft) {
  const rows = [],
    branch = draft[branchField(check).key];
  const walk = (fields, given, pointer) => {
    for (const field of fields) {
      const value = given[field.key],
        at = `${pointer}/${field.key}`;
      if (value === undefined || !applies(field, branch)) continue;
      if (field.kind === "group") walk(field.fields, value, at);
      else if (field.kind === "list") value.forEach((item, i) => walk(field.fields, item, `${at}/${i}`));
      else if (field.kind === "reference") {
        if (value.pick) rows.push({ pointer: at, field, value });
        if (value.pick) walk(bundle.kinds[field.of].fields, value.own, at);
      } else if (field.kind === "number" ? value.text.trim() : value.length) rows.push({ pointer: at, field, value });
    }
  };
  walk(check.inputs, draft, "");
  return rows;
}

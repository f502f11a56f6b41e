/**
 * From a request body to slots: every problem found at once, in the order of the declaration.
 *
 * An intake is {states (the signature), values, sizes of list axes, assumed slots, origins and titles of what came from the catalogue, problems,
 * branch}.
 */
import { declaredInputs } from "./declaration.js";
import { entryNumber } from "./numbers.js";
import { InputProblems, escaped, isObject, refuse, shown } from "./problems.js";
import { columns, reader } from "./readers.js";

const NO_TITLE = { en: "the instrument described", es: "el instrumento descrito" };
const LISTED = 12;      // so many allowed keys are written out in a message

const sorted = (keys) => [...keys].sort().join(", ");
const started = (branch) => ({ states: [], values: [], sizes: new Map(), assumed: [], origins: new Map(), titles: new Map(), problems: [], branch });

/** What a body has under a key: null where there is nothing. */
const member = (body, key) => (Object.hasOwn(body, key) ? body[key] ?? null : null);

/** intake(body) for one check; throws InputProblems listing every fault. */
export function compileIntake(bundle, name) {
  const { tree } = declaredInputs(bundle, name), steps = tree.map((declared) => compiled(declared, bundle)), { branch } = bundle.checks[name];
  const [chosen] = tree.find(([field]) => field.name === branch), branches = chosen.choices.map((c) => c.key), keys = steps.map((step) => step.key);
  return (body) => {
    const fine = isObject(body), given = fine ? member(body, chosen.key) : null, run = started(branches.includes(given) ? given : null);
    if (fine) {
      for (const step of steps) step.take(member(body, step.key), run, "");
      unknown(body, keys, run, "");
    } else {
      refuse(run.problems, "", "wrong-type", `${shown(body)} is not a JSON object; the members are ${keys.join(", ")}`);
    }
    if (run.problems.length) throw new InputProblems(run.problems);
    return run;
  };
}

function compiled([field, slot, children], bundle) {
  if (field.kind === "group") return remembered(group(field, children.map((child) => compiled(child, bundle))));
  if (field.kind === "list") return remembered(list(field, children, bundle));
  return field.kind === "reference" ? remembered(reference(field, slot, children, bundle), true) : leaf(field, slot);
}

/** A part that keeps what it makes of nothing, or of the id of an entry alone: that never changes. */
function remembered(part, byId = false) {
  const kept = new Map();
  return { key: part.key, take(x, run, pointer) {
    if (x !== null && !(byId && typeof x === "string")) {
      part.take(x, run, pointer);
      return;
    }
    const id = `${run.branch}/${x === null ? "" : `/${x}`}`;
    let found = kept.get(id);
    if (!found) {
      found = started(run.branch);
      part.take(x, found, pointer);
      if (found.problems.length) run.problems.push(...found.problems);
      else kept.set(id, found);
    }
    run.states.push(...found.states);
    run.values.push(...found.values);
    run.assumed.push(...found.assumed);
    found.sizes.forEach((size, axis) => run.sizes.set(axis, size));
    found.titles.forEach((title, path) => run.titles.set(path, title));
    found.origins.forEach((record, index) => run.origins.set(index, record));
  } };
}

function unknown(body, keys, { problems }, pointer) {
  const found = Object.keys(body).filter((key) => !keys.includes(key) && body[key] !== undefined);
  for (const key of found.sort()) {
    refuse(problems, `${pointer}/${escaped(key)}`, "unknown-field", `${shown(key)} is not known here; the members are ${sorted(keys)}`);
  }
}

/** Whether the field belongs to the chosen branch; a value given elsewhere is a problem. */
function applies({ only }, { branch, problems }, given, pointer) {
  if (!only || branch === null || only.includes(branch)) return true;
  if (given) refuse(problems, pointer, "not-applicable", `does not apply to ${branch}; it belongs to ${only.join(", ")}`);
  return false;
}

function require(field, { branch, problems }, pointer) {
  if (!field.required || (branch === null && field.only)) return;
  const asked = field.meaning.en + (field.kind === "number" ? `, in ${field.unit.replaceAll("_", " ")}` : "");
  refuse(problems, pointer, "missing", `nothing is given; needed: ${asked}`);
}

/** What is given to a field that may be required: x, or null where it is absent or does not apply. */
function offered(field, run, x, pointer) {
  if (!applies(field, run, x !== null, pointer)) return null;
  if (x === null) require(field, run, pointer);
  return x;
}

const assumption = ({ kind, assume }, { factor }) => (assume ? (kind === "number" ? assume.value * factor : assume.value) : null);

/**
 * valueOf(x, run, where, entry, place) -> [value, record or null] of one field: x is what is given, `entry` the catalogue's [value, record] where a
 * reference supplies one, `place` what is noted where a value is assumed.
 */
function valueTaker(field, slot) {
  const read = reader(field, slot), assumed = assumption(field, slot);
  return (x, run, where, entry, place) => {
    if (!applies(field, run, x !== null, where)) return [null, null];
    if (x !== null) return [read(x, run, where), null];
    if (entry) return entry;
    if (assumed !== null) run.assumed.push(place);
    else require(field, run, where);
    return [assumed, null];
  };
}

/** A number, choice, switch, text or curve outside any list. */
function leaf(field, slot) {
  const valueOf = valueTaker(field, slot), { key, kind } = field, stated = kind === "choice" || kind === "switch", nothing = stated ? null : "a";
  return { key, name: field.name, nothing, take(x, run, pointer, entry) {
    const [value, record] = valueOf(x, run, `${pointer}/${key}`, entry, slot.index);
    if (record) run.origins.set(slot.index, record);
    run.values.push(value);
    run.states.push(value === null ? nothing : stated ? value : kind === "number" && isObject(value) ? "u" : "x");
  } };
}

/** A named object of fields. */
function group(field, steps) {
  const { key } = field, keys = steps.map((step) => step.key);
  return { key, take(x, run, pointer) {
    const where = `${pointer}/${key}`, applied = applies(field, run, x !== null, where), before = run.problems.length;
    let body = x === null || !applied ? {} : x;
    if (!isObject(body)) {
      refuse(run.problems, where, "wrong-type", `${shown(x)} is not an object; its members are ${sorted(keys)}`);
      body = {};
    }
    for (const step of steps) step.take(member(body, step.key), run, where);
    unknown(body, keys, run, where);
    if (x === null && applied && run.problems.length === before) require(field, run, where);      // its fields have not said so already
  } };
}

function entryValue(field, stored) {
  if (field.kind === "number") return [entryNumber(stored), stored];
  return field.kind === "curve" ? [columns(stored.points), stored] : [stored, null];
}

/** The entries of a kind: resolve(x, run, pointer) -> {overrides by key or null, entry values by name, title}. */
function catalogue({ of: kind }, bundle) {
  const { folder, fields, described = NO_TITLE } = bundle.kinds[kind], keys = [...fields.map((f) => f.key), "id"], found = new Map();
  for (const [id, { title, fields: stored }] of Object.entries(bundle.entries[kind] ?? {})) {
    const values = new Map(fields.filter((f) => Object.hasOwn(stored, f.name)).map((f) => [f.name, entryValue(f, stored[f.name])]));
    found.set(id, { overrides: {}, entry: values, title });
  }
  const nothing = { overrides: null, entry: new Map(), title: described }, ids = [...found.keys()].sort();
  const unknownId = (x, { problems }, pointer) => refuse(problems, pointer, "unknown-id", `${shown(x)} is not in the ${kind} catalogue; `
    + (ids.length <= LISTED ? `known: ${ids.join(", ")}` : `${ids.length} are listed under /v1/catalogues/${folder}`));
  return (x, run, pointer) => {
    if (typeof x === "string") {
      if (found.has(x)) return found.get(x);
      unknownId(x, run, pointer);
    } else if (!isObject(x)) {
      refuse(run.problems, pointer, "wrong-type",
        `${shown(x)} is neither an id nor an object; give an id of the ${kind} catalogue, its data, or an id with overrides`);
    } else {
      unknown(x, keys, run, pointer);
      const named = member(x, "id");
      if (named === null) return { ...nothing, overrides: x };
      if (found.has(named)) return { ...found.get(named), overrides: x };
      unknownId(named, run, `${pointer}/id`);
    }
    return nothing;
  };
}

/** A catalogue reference outside any list. */
function reference(field, path, children, bundle) {
  const resolve = catalogue(field, bundle), steps = children.map(([f, slot]) => leaf(f, slot)), { key } = field;
  return { key, take(x, run, pointer) {
    const where = `${pointer}/${key}`, given = offered(field, run, x, where);
    const { overrides, entry, title } = given === null ? { overrides: null } : resolve(given, run, where);
    if (given !== null) run.titles.set(path, title);
    for (const step of steps) {
      if (overrides) {
        step.take(member(overrides, step.key), run, where, entry.get(step.name));
      } else {
        run.states.push(step.nothing);
        run.values.push(null);
      }
    }
  } };
}

/** A list of objects: one axis; every field is a column. */
function list(field, children, bundle) {
  const columnsOf = children.map(([f, slot, inner]) => (f.kind === "reference" ? referenceColumns(f, slot, inner, bundle) : plainColumn(f, slot)));
  const { key, item: axis, least = 0, most = 16 } = field, keys = columnsOf.map((c) => c.key);
  function items(x, run, where) {
    const { problems } = run;
    if (x === null) return [];
    if (!Array.isArray(x)) return refuse(problems, where, "wrong-type", `${shown(x)} is not a list; give a list of ${axis} objects`) ?? [];
    if (x.length > most) return refuse(problems, where, "too-many-items", `${x.length} items; at most ${most}`) ?? [];
    if (x.length < least) refuse(problems, where, "too-few-items", `${x.length} items; at least ${least}`);
    return x.map((one, i) => {
      const at = `${where}/${i}`;
      if (!isObject(one)) return refuse(problems, at, "wrong-type", `${shown(one)} is not an object; its members are ${sorted(keys)}`) ?? {};
      unknown(one, keys, run, at);
      return one;
    });
  }
  return { key, take(x, run, pointer) {
    const where = `${pointer}/${key}`, all = items(offered(field, run, x, where), run, where);
    run.sizes.set(axis, all.length);
    for (const column of columnsOf) column.take(all, run, where);
  } };
}

/** One field of a list's items: values(pairs of [given, entry], run, pointer, inside); none(count, run) where nothing is given at all. */
function column(field, slot) {
  const valueOf = valueTaker(field, slot), codes = field.kind === "choice" ? field.choices.map((c) => c.key) : null;
  function append(values, run) {
    const lacking = values.filter((v) => v === null).length, all = lacking === values.length;
    const spread = field.kind === "number" && values.some(isObject), letter = field.kind === "number" && lacking ? (spread ? "V" : "N") : spread ? "U" : "L";
    run.states.push(all ? "a" : letter);
    run.values.push(all ? null : codes ? values.map((v) => codes.indexOf(v)) : values);
  }
  return {
    none: (count, run) => append(new Array(count).fill(null), run),
    values(pairs, run, pointer, inside) {
      const taken = pairs.map(([x, entry], i) => valueOf(x, run, `${pointer}/${i}${inside}/${field.key}`, entry, [slot.index, i]));
      if (taken.some(([, record]) => record)) run.origins.set(slot.index, taken.map(([, record]) => record));
      append(taken.map(([value]) => value), run);
    },
  };
}

function plainColumn(field, slot) {
  const one = column(field, slot), { key } = field;
  return { key, take: (items, run, pointer) => one.values(items.map((item) => [member(item, key)]), run, pointer, "") };
}

/** A catalogue reference in a list: every field of its kind is a column. */
function referenceColumns(field, path, children, bundle) {
  const resolve = catalogue(field, bundle), parts = children.map(([f, slot]) => [f, column(f, slot)]), { key } = field;
  return { key, take(items, run, pointer) {
    const resolved = items.map((item, i) => {
      const x = member(item, key), where = `${pointer}/${i}/${key}`;
      if (x !== null) return resolve(x, run, where);
      require(field, run, where);
      return { overrides: null, entry: new Map(), title: null };
    });
    if (items.length) run.titles.set(path, resolved.map((r) => r.title));
    const nowhere = resolved.every((r) => !r.overrides);
    for (const [f, part] of parts) {
      if (nowhere) part.none(items.length, run);
      else part.values(resolved.map(({ overrides, entry }) => [member(overrides ?? {}, f.key), entry.get(f.name)]), run, pointer, `/${key}`);
    }
  } };
}

/** What the engine needs to know of one check of one rule set: formulas, axes, columns, constants, look-ups. */
import { declaredInputs } from "./declaration.js";
import { lookup } from "./lookup.js";
import { namesIn } from "./phrase.js";

const UNVERIFIED = ["practice", "informal", "memory"];
const own = (record, key) => (record && Object.hasOwn(record, key) ? record[key] : undefined);

/** One check, read from the bundle once: what a graph or an answer asks for by name. */
export function modelOf(bundle, name) {
  const declared = bundle.checks[name], { formulas, axes, findings } = declared, { slots } = declaredInputs(bundle, name);
  return {
    bundle, name, declared, formulas, axes, findings, slots,
    ordered: [...formulas].sort((a, b) => a.order - b.order),
    slotIndex: new Map(slots.map((slot, index) => [slot.path, index])),
    formulaNamed: new Map(formulas.map((f) => [f.name, f])),
    axisNamed: new Map(axes.map((a) => [a.name, a])),
    mentioned: new Set(findings.flatMap((f) => Object.values(f.sentence).flatMap(namesIn))),
    memo: new Map(),
  };
}

function kept({ memo }, key, make) {
  if (!memo.has(key)) memo.set(key, make());
  return memo.get(key);
}

const fieldsOf = ({ bundle, axisNamed }, axis) => bundle.kinds[axisNamed.get(axis).of].fields;

/** The constant's record: value in SI, unit, source, standing. */
export const constant = ({ declared, bundle }, name) => own(declared.constants, name) ?? bundle.constants[name];

/** Entries of the catalogue along an axis: [id, entry], in order of id. */
export function entries(model, axis) {
  const all = own(model.bundle.entries, model.axisNamed.get(axis).of) ?? {};
  return kept(model, `entries ${axis}`, () => Object.keys(all).sort().map((id) => [id, all[id]]));
}

/** list, entries, table or count. */
export const axisFrom = ({ axisNamed }, axis) => axisNamed.get(axis).from;

const tableOf = ({ bundle, axisNamed }, axis) => bundle.tables[axisNamed.get(axis).table];

/** Number of places along an axis that the bundle fixes. */
export function axisSize(model, axis) {
  const { from, count } = model.axisNamed.get(axis);
  return from === "count" ? count : from === "entries" ? entries(model, axis).length : Object.values(tableOf(model, axis).data)[0].length;
}

/** The kind's declaration of a field that runs along an axis of entries. */
export const columnField = (model, axis, column) => fieldsOf(model, axis).find((f) => f.name === column);

/** number, choice or switch. */
export const columnKind = (model, axis, column) => (tableOf(model, axis) ? "number" : columnField(model, axis, column).kind);

/** Values along the axis, null where an entry has none: numbers in SI, codes of choices, booleans. */
export function column(model, axis, name) {
  if (tableOf(model, axis)) return tableOf(model, axis).data[name];
  const { kind, assume, unit, choices } = columnField(model, axis, name);
  return entries(model, axis).map(([, { fields }]) => {
    let value = own(fields, name) ?? assume?.value;
    if (value === undefined) return null;
    if (kind === "choice") return choices.findIndex((c) => c.key === value);
    return kind !== "number" ? value : value.value ?? value * model.bundle.units[unit].factor;
  });
}

/** The column as an array of numbers; an absent number is NaN, an absent choice -1; switches as 0 and 1. */
export function columnArray(model, axis, name) {
  const kind = columnKind(model, axis, name), values = column(model, axis, name);
  return kind === "switch" ? Uint8Array.from(values) : Float64Array.from(values, (v) => v ?? (kind === "choice" ? -1 : NaN));
}

/** [name, record] of the numbers of the bundle that a constant, column or table look-up reads. @param {Array} leaf [op, ...extra] */
export function fixedOrigins(model, [op, name, column]) {
  if (op === "constant") return [[name, constant(model, name)]];
  const table = op === "column" ? model.axisNamed.get(name).table : column;
  if (table) return [[table, model.bundle.tables[table]]];
  return entries(model, name).map(([id, { fields }]) => [`${id}.${column}`, own(fields, column)]).filter(([, v]) => typeof v === "object");
}

/** Paths of the inputs that apply in the branch this signature took. @returns {Set<string>} */
export function applicable(model, states) {
  const branch = states[model.slotIndex.get(model.declared.branch)];
  return kept(model, `branch ${branch}`, () => new Set(model.slots.filter(({ only }) => !only || only.includes(branch)).map((s) => s.path)));
}

/** Paths of all inputs that a formula mentions, itself or through others, whichever side of a conditional they stand on. @returns {Set<string>} */
export const inputsOf = (model, name) => kept(model, `inputs ${name}`, () => {
  const found = new Set(), queue = [model.formulaNamed.get(name).tree];
  for (const tree of queue) {
    if (!Array.isArray(tree)) continue;
    const [op, a, b] = tree, mentioned = op === "ref" ? a : op === "lookup" && a === "curve" ? b : undefined;
    if (model.formulaNamed.has(mentioned)) inputsOf(model, mentioned).forEach((path) => found.add(path));
    else if (model.slotIndex.has(mentioned)) found.add(mentioned);
    queue.push(...tree.slice(1));
  }
  return found;
});

/** The reader, read(x, [xs, ys]), and the data of ["table", name, column] or ["curve", slot index], whose data a request gives. */
export function lookupOf({ bundle, slots }, [source, name, column]) {
  if (source === "curve") return [lookup(slots[name].field), null];
  const table = bundle.tables[name];
  return [lookup(table), [table.data[table.columns[0].name], table.data[column]]];
}

/** Whether a number of this origin may not make this check's verdict milder. */
export const isWeak = ({ name }, { standing, cautious_in }) => UNVERIFIED.includes(standing) && own(cautious_in, name) === undefined;

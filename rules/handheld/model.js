/** What the engine needs to know of one check of one rule set: formulas, axes, columns, constants, look-ups. */
import { Check } from "./declaration.js";
import { Lookup } from "./lookup.js";
import { Template } from "./phrase.js";

const UNVERIFIED = ["practice", "informal", "memory"];
const own = (record, key) => (Object.hasOwn(record, key) ? record[key] : undefined);
const choiceAt = (field, key) => field.choices.findIndex((c) => c.key === key);

/** One check, read from the bundle once; everything a graph or an answer asks for by name. */
export class CheckModel {
  constructor(bundle, name) {
    this.bundle = bundle;
    this.name = name;
    this.declared = bundle.checks[name];
    this.formulas = this.declared.formulas;
    this.axes = this.declared.axes;
    this.findings = this.declared.findings;
    this.slots = new Check(bundle, name).slots;
    this.slotIndex = new Map(this.slots.map((slot, index) => [slot.path, index]));
    this.formulaNamed = new Map(this.formulas.map((f) => [f.name, f]));
    this.mentioned = new Set(this.findings.flatMap((f) => Object.values(f.sentence).flatMap((text) => new Template(text).names())));
    this.axisNamed = new Map(this.axes.map((a) => [a.name, a]));
    this.memo = new Map();
  }

  kept(key, make) {
    if (!this.memo.has(key)) this.memo.set(key, make());
    return this.memo.get(key);
  }

  /** The constant's record: value in SI, unit, source, standing. */
  constant(name) {
    return own(this.declared.constants ?? {}, name) ?? this.bundle.constants[name];
  }

  /** Entries of the catalogue along an axis: [id, entry], in order of id. */
  entries(axis) {
    return this.kept(`entries ${axis}`, () => {
      const all = own(this.bundle.entries, this.axisNamed.get(axis).of) ?? {};
      return Object.keys(all).sort().map((id) => [id, all[id]]);
    });
  }

  entryIds(axis) {
    return this.entries(axis).map(([id]) => id);
  }

  /** Title of the entry at a place of an axis of entries, by language. */
  entryTitle(axis, place) {
    return this.entries(axis)[place][1].title;
  }

  /** list, entries, table or count. */
  axisFrom(axis) {
    return this.axisNamed.get(axis).from;
  }

  /** Number of places along an axis that the bundle fixes. */
  axisSize(axis) {
    const { from, count, table } = this.axisNamed.get(axis);
    if (from === "count") return count;
    return from === "entries" ? this.entries(axis).length : Object.values(this.bundle.tables[table].data)[0].length;
  }

  /** The kind's declaration of a field that runs along an axis of entries. */
  columnField(axis, column) {
    return this.bundle.kinds[this.axisNamed.get(axis).of].fields.find((f) => f.name === column);
  }

  /** number, choice or switch. */
  columnKind(axis, column) {
    return this.axisFrom(axis) === "table" ? "number" : this.columnField(axis, column).kind;
  }

  /** Values along the axis, null where an entry has none: numbers in SI, codes of choices, booleans. */
  column(axis, column) {
    if (this.axisFrom(axis) === "table") return this.bundle.tables[this.axisNamed.get(axis).table].data[column];
    const field = this.columnField(axis, column);
    return this.entries(axis).map(([, entry]) => this.entryValue(entry, field));
  }

  entryValue(entry, field) {
    let value = own(entry.fields, field.name);
    if (value === undefined && field.assume) {
      const { value: assumed } = field.assume;
      value = field.kind === "number" ? { value: assumed * this.bundle.units[field.unit].factor } : assumed;
    }
    if (value === undefined) return null;
    return field.kind === "choice" ? choiceAt(field, value) : field.kind === "number" ? value.value : value;
  }

  /** The column as an array of numbers; an absent number is NaN, an absent choice -1; switches as 0 and 1. */
  columnArray(axis, column) {
    const kind = this.columnKind(axis, column), values = this.column(axis, column);
    if (kind === "switch") return Uint8Array.from(values, (v) => (v ? 1 : 0));
    return Float64Array.from(values, (v) => v ?? (kind === "choice" ? -1 : NaN));
  }

  columnOrigins(axis, column) {
    if (this.axisFrom(axis) === "table") return [[this.axisNamed.get(axis).table, this.bundle.tables[this.axisNamed.get(axis).table]]];
    return this.entries(axis).map(([id, entry]) => [`${id}.${column}`, own(entry.fields, column)]).filter(([, v]) => v && typeof v === "object");
  }

  /** [name, record] of the numbers of the bundle that a constant, column or table look-up reads. @param {Array} leaf [op, ...extra] */
  fixedOrigins(leaf) {
    if (leaf[0] === "constant") return [[leaf[1], this.constant(leaf[1])]];
    return leaf[0] === "column" ? this.columnOrigins(leaf[1], leaf[2]) : [[leaf[2], this.bundle.tables[leaf[2]]]];
  }

  /** Paths of the inputs that apply in the branch this signature took. @returns {Set<string>} */
  applicable(states) {
    const branch = states[this.slotIndex.get(this.declared.branch)];
    return this.kept(`branch ${branch}`, () => new Set(this.slots.filter((s) => s.only === null || s.only.includes(branch)).map((s) => s.path)));
  }

  /** Paths of all inputs that a formula mentions, itself or through others, whichever side of a conditional they stand on. */
  inputsOf(name) {
    return this.kept(`inputs ${name}`, () => {
      const found = new Set();
      for (const mentioned of references(this.formulaNamed.get(name).tree)) {
        if (this.formulaNamed.has(mentioned)) this.inputsOf(mentioned).forEach((path) => found.add(path));
        else if (this.slotIndex.has(mentioned)) found.add(mentioned);
      }
      return found;
    });
  }

  /** The Lookup for ["table", name, column] or ["curve", slot index]. */
  lookup(extra) {
    return this.kept(`lookup ${extra}`, () => {
      if (extra[0] === "curve") return new Lookup(this.slots[extra[1]].field);
      const table = this.bundle.tables[extra[1]];
      return new Lookup(table, [table.data[table.columns[0].name], table.data[extra[2]]]);
    });
  }

  /** Whether a number of this origin may not make this check's verdict milder. */
  isWeak(origin) {
    return UNVERIFIED.includes(origin.standing) && own(origin.cautious_in ?? {}, this.name) === undefined;
  }
}

function* references(tree) {
  if (!Array.isArray(tree) || !tree.length) return;
  if (tree[0] === "ref") {
    yield tree[1];
  } else if (tree[0] === "lookup" && tree[1] === "curve") {
    yield tree[2];
    yield* references(tree[3]);
  } else {
    for (const part of tree.slice(1)) yield* references(part);
  }
}

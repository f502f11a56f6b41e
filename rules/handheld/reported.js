/** Reads the results of one answer: numbers with their intervals, and the words of a sentence. */
import { axisFrom, axisSize, constant, entries } from "./model.js";
import { filled, numberText } from "./phrase.js";

const finite = (value) => value - value === 0;
const scaled = (value, factor) => value / factor + 0;      // + 0 turns a negative zero into zero

/** Why a formula that could have a number has none. */
export const noValue = (formula, texts, language) => (formula.absent_because ?? texts["no-value"])[language];

/** The view of one request's results that the answer writer and the sentences look through. */
export class Reader {
  constructor({ model, units, texts }, intake, plan, results, intervals, language) {
    Object.assign(this, { model, units, texts, intake, plan, results, intervals, language });
  }

  // ---- results ----

  /** The public form of a result whose value the numbers decide. */
  result(output) {
    const value = this.results[output.place], ends = output.samples === null ? null : this.intervals.get(output.samples);
    if (!output.axes.length) return this.one(value, ends, output);
    const { data, sizes } = value, truth = data instanceof Uint8Array;
    const along = (depth, start) => {
      const axis = output.axes[depth], last = depth === sizes.length - 1;
      const named = axisFrom(this.model, axis) === "entries" && entries(this.model, axis);
      return Array.from({ length: sizes[depth] }, (_, k) => {
        const at = start * sizes[depth] + k, item = last ? this.one(truth ? data[at] === 1 : data[at], ends && ends.map((e) => e.data[at]), output) : along(depth + 1, at);
        return named ? { id: named[k][0], ...(last ? item : { items: item }) } : item;
      });
    };
    return along(0, 0);
  }

  one(value, ends, { formula, names, factor }) {
    if (typeof value === "boolean") return { value };
    if (!finite(value)) return { value: null, reason: noValue(formula, this.texts, this.language) };
    if (names) return this.named(names, Math.trunc(value));
    const found = { value: scaled(value, factor) };
    if (!ends) return found;
    const [low, high] = ends;
    if (low > -Infinity && high < Infinity) return { ...found, low: scaled(low, factor), high: scaled(high, factor) };
    return { ...found, low: null, high: null, reason: this.texts["partly-no-value"][this.language] };
  }

  named(axis, place) {
    const list = axisFrom(this.model, axis) !== "entries";
    if (!(place >= 0 && place < this.size(axis))) return { value: null, reason: this.texts["no-value"][this.language] };
    return { value: list ? place : entries(this.model, axis)[place][0], title: this.nameAt(axis, place) };
  }

  size(axis) {
    return axisFrom(this.model, axis) === "list" ? this.intake.sizes.get(axis) ?? 0 : axisSize(this.model, axis);
  }

  /** What a person calls the item or entry at a place of an axis. */
  nameAt(axis, place) {
    const { model, intake, language } = this;
    if (axisFrom(model, axis) === "entries") return entries(model, axis)[place][1].title[language];
    const label = model.slotIndex.get(`${axis}.label`);
    if (label !== undefined && intake.states[label] !== "a" && intake.values[label][place]) return intake.values[label][place];
    for (const [path, titles] of intake.titles) if (path.startsWith(`${axis}.`) && titles[place]) return titles[place][language];
    return this.texts["item-number"][language].replace("{number}", place + 1);
  }

  // ---- working ----

  /** A formula's value for the working: a number, boolean, list, complex as an object, or null. */
  plain({ place, imaginary, hidden, fixed, factor }) {
    if (place === null) return hidden.length ? null : fixed;
    const bare = (value) => this.bare(value, factor);
    return imaginary === null ? bare(this.results[place]) : { re: bare(this.results[place]), im: bare(this.results[imaginary]) };
  }

  bare(value, factor) {
    if (typeof value === "boolean") return value;
    if (typeof value === "number") return finite(value) ? scaled(value, factor) : null;
    const { data, sizes } = value, along = (depth, start) => Array.from({ length: sizes[depth] }, (_, k) => {
      const at = start * sizes[depth] + k;
      return depth < sizes.length - 1 ? along(depth + 1, at) : this.bare(data instanceof Uint8Array ? data[at] === 1 : data[at], factor);
    });
    return along(0, 0);
  }

  // ---- sentences ----

  /** The words of a template with its places filled in. */
  sentence(parts) {
    return filled(parts, (name) => this.words(name), (name, condition) => this.listed(name, condition), this.language);
  }

  /** What stands in a sentence for {name}: a quantity with its unit, a choice's meaning, or a title. */
  words(name) {
    const { model, plan, intake, language } = this, output = plan.outputs.get(name);
    if (output) return this.formulaWords(output);
    if (intake.titles.has(name)) return intake.titles.get(name)[language];
    const index = model.slotIndex.get(name);
    if (index === undefined) {
      const { value, unit } = constant(model, name);
      return this.quantity(value, unit);
    }
    return this.slotWords(model.slots[index], intake.states[index], intake.values[index]);
  }

  formulaWords({ formula, absent, hidden, place, fixed, imaginary }) {
    if (absent || hidden.length) return this.quantity(null, formula.unit);
    let value = place === null ? fixed : this.results[place];
    if (typeof value === "boolean") return this.yesNo(value);
    if (typeof value === "string") return value;
    if ("names" in formula && finite(value)) return this.nameAt(formula.names, Math.trunc(value));
    if (imaginary !== null) value = Math.sqrt(value * value + this.results[imaginary] * this.results[imaginary]);
    return this.quantity(value, formula.unit);
  }

  slotWords({ kind, field, unit }, state, value) {
    if (kind === "choice" && state !== null) return field.choices.find((c) => c.key === state).meaning[this.language];
    if (kind === "text" && state !== "a") return value;
    if (kind === "switch" && state !== null) return this.yesNo(state);
    return this.quantity(state === null || state === "a" ? null : value.value ?? value, unit);
  }

  yesNo(value) {
    return this.texts[value ? "yes" : "no"][this.language];
  }

  quantity(value, unit) {
    return numberText(value, unit, this.units, this.language);
  }

  /** For {axis.label | condition}: the names of the items for which the condition holds. */
  listed(name, condition) {
    const [axis] = name.split("."), { absent, fixed, place } = this.plan.outputs.get(condition);
    if (absent || fixed === false) return [];
    const held = fixed === true || this.results[place], holds = held.data ?? new Array(this.size(axis)).fill(held);
    return Array.from(holds.keys()).filter((k) => holds[k]).map((k) => this.nameAt(axis, k));
  }
}

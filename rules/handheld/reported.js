/** Reads the results of one answer: numbers with their intervals, and the words of a sentence. */
import { axisFrom, axisSize, constant, entries } from "./model.js";
import { filled, numberText } from "./phrase.js";

const finite = (value) => value - value === 0;
const scaled = (value, factor) => value / factor + 0;      // + 0 turns a negative zero into zero

/** Why a formula that could have a number has none. */
export const noValue = (formula, texts, language) => (formula.absent_because ?? texts["no-value"])[language];

/** Nested lists of visit(value, place), each item of them as finished(item, depth, k) leaves it. */
function nested({ data, sizes }, visit, finished = (item) => item) {
  const truth = data instanceof Uint8Array, along = (depth, start) => Array.from({ length: sizes[depth] }, (_, k) => {
    const at = start * sizes[depth] + k;
    return finished(depth < sizes.length - 1 ? along(depth + 1, at) : visit(truth ? data[at] === 1 : data[at], at), depth, k);
  });
  return along(0, 0);
}

/**
 * The view of one request's results that the answer writer looks through: result(output) is the public form of a result whose value the numbers
 * decide, plain(output) a formula's value for the working, sentence(template) its words with the places filled in.
 */
export function reader({ model, units, texts }, intake, plan, results, intervals, language) {
  const text = (code) => texts[code][language], yesNo = (value) => text(value ? "yes" : "no");
  const quantity = (value, unit) => numberText(value, unit, units, language);
  const entriesOf = (axis) => axisFrom(model, axis) === "entries" && entries(model, axis);
  const size = (axis) => (axisFrom(model, axis) === "list" ? intake.sizes.get(axis) ?? 0 : axisSize(model, axis));

  function result(output) {
    const { place, samples, axes } = output, ends = samples === null ? null : intervals.get(samples);
    if (!axes.length) return one(results[place], ends, output);
    return nested(results[place], (value, at) => one(value, ends && ends.map((e) => e.data[at]), output), (item, depth, k) => {
      const found = entriesOf(axes[depth]);
      return found ? { id: found[k][0], ...(Array.isArray(item) ? { items: item } : item) } : item;
    });
  }

  function one(value, ends, { formula, names, factor }) {
    if (typeof value === "boolean") return { value };
    const own = scaled(value, factor);      // which may leave the numbers that there are
    if (!finite(own)) return { value: null, reason: noValue(formula, texts, language) };
    if (names) return named(names, Math.trunc(own));
    if (!ends) return { value: own };
    const [low, high] = ends.map((end) => scaled(end, factor));
    if (low > -Infinity && high < Infinity) return { value: own, low, high };
    return { value: own, low: null, high: null, reason: text("partly-no-value") };
  }

  function named(axis, place) {
    if (!(place >= 0 && place < size(axis))) return { value: null, reason: text("no-value") };
    const found = entriesOf(axis);
    return { value: found ? found[place][0] : place, title: nameAt(axis, place) };
  }

  /** What a person calls the item or entry at a place of an axis. */
  function nameAt(axis, place) {
    const found = entriesOf(axis), label = model.slotIndex.get(`${axis}.label`);
    if (found) return found[place][1].title[language];
    if (label !== undefined && intake.states[label] !== "a" && intake.values[label][place]) return intake.values[label][place];
    for (const [path, titles] of intake.titles) if (path.startsWith(`${axis}.`) && titles[place]) return titles[place][language];
    return text("item-number").replace("{number}", place + 1);
  }

  function plain({ place, imaginary, hidden, fixed, factor }) {
    if (place === null) return hidden.length ? null : fixed;
    const bare = (value) => {
      if (typeof value === "boolean") return value;
      return typeof value === "number" ? (finite(scaled(value, factor)) ? scaled(value, factor) : null) : nested(value, bare);
    };
    return imaginary === null ? bare(results[place]) : { re: bare(results[place]), im: bare(results[imaginary]) };
  }

  /** What stands in a sentence for {name}: a quantity with its unit, a choice's meaning, or a title. */
  function words(name) {
    const output = plan.outputs.get(name), index = model.slotIndex.get(name);
    if (output) return formulaWords(output);
    if (intake.titles.has(name)) return intake.titles.get(name)[language];
    if (index !== undefined) return slotWords(model.slots[index], intake.states[index], intake.values[index]);
    const found = constant(model, name);      // nothing: a reference that was not given
    return found ? quantity(found.value, found.unit) : quantity(null);
  }

  function formulaWords({ formula, absent, hidden, place, fixed, imaginary }) {
    if (absent || hidden.length) return quantity(null);
    let value = place === null ? fixed : results[place];
    if (typeof value === "boolean") return yesNo(value);
    if (typeof value === "string") return value;
    if ("names" in formula && finite(value)) return nameAt(formula.names, Math.trunc(value));
    if (imaginary !== null) value = Math.sqrt(value * value + results[imaginary] * results[imaginary]);
    return quantity(value, formula.unit);
  }

  function slotWords({ kind, field, unit }, state, value) {
    if (state === null || (state === "a" && kind !== "choice")) return quantity(null);
    if (kind === "choice") return field.choices.find((c) => c.key === state).meaning[language];
    return kind === "text" ? value : kind === "switch" ? yesNo(state) : quantity(value.value ?? value, unit);
  }

  /** For {axis.label | condition}: the names of the items for which the condition holds. */
  function listed(name, condition) {
    const [axis] = name.split("."), { absent, fixed, place } = plan.outputs.get(condition);
    if (absent || fixed === false) return [];
    const held = fixed === true || results[place], holds = held.data ?? new Array(size(axis)).fill(held);
    return Array.from(holds.keys()).filter((k) => holds[k]).map((k) => nameAt(axis, k));
  }

  return { result, plain, sentence: (template) => filled(template, words, listed, language) };
}

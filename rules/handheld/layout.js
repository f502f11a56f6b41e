/** What of an answer is the same for every request of one signature and language, prepared once. */
import { applicable, inputsOf } from "./model.js";
import { noValue } from "./reported.js";

/**
 * Per plan and language: which results and steps of working are reported. results(reader) is the object of results by key, working(reader) the list of
 * steps.
 */
export function layout(model, plan, texts, language) {
  const inBranch = applicable(model, plan.states), results = [], working = [];
  const lacks = (paths) => paths.some((path) => !inBranch.has(path));

  /** Whether every branch-bound input that the formula mentions belongs to other branches. */
  function elsewhere(name) {
    const bound = [...inputsOf(model, name)].filter((path) => model.slots[model.slotIndex.get(path)].only !== null);
    return bound.length > 0 && !bound.some((path) => inBranch.has(path));
  }

  /** The finished form of a result that no number changes; undefined where it does not belong to this branch. */
  function fixed({ absent, fixed: value, formula }) {
    if (!absent) return { value };
    if (lacks(absent.needs) || elsewhere(formula.name)) return undefined;
    if (formula.absent_because) return { value: null, reason: noValue(formula, texts, language) };
    const keys = absent.needs.map((path) => model.slots[model.slotIndex.get(path)].pointer.replaceAll("/*", ""));
    return keys.length ? { value: null, reason: texts["needs-input"][language].replace("{names}", () => keys.join(", ")) } : undefined;
  }

  for (const formula of model.ordered) {
    const output = plan.outputs.get(formula.name), { key, name, unit, text, source, show } = formula;
    if (show === "result") {
      const made = output.place === null ? fixed(output) : null;
      if (made !== undefined) results.push([key, made, output]);
    }
    if (show !== "hidden" && !output.absent) working.push([output, { name, value: null, unit, formula: text, source }]);
  }
  return {
    results(reader) {
      const listed = {};
      for (const [key, made, output] of results) listed[key] = made ?? reader.result(output);
      return listed;
    },
    working: (reader) => working.map(([output, step]) => ({ ...step, value: reader.plain(output) })),
  };
}

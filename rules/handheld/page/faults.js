/** What is wrong with a question, in words, at its field and in a summary that leads there. */
import { fill, focusOn, idOf, make } from "./elements.js";
import { placed } from "./question.js";
import { canSay, capital, ofRules, say } from "./texts.js";
import { spelled } from "./typed.js";

/** A fault of a typed number, in words. */
export function inWords(fault, unit) {
  return say(fault.fault, { ...fault, unit: unit?.symbol || say("this-unit") });
}

/**
 * Every fault of a question once: those of what was typed, then what the runtime found elsewhere.
 * @param {{pointer: string}[]} typedFaults
 * @param {{pointer: string, code: string, detail: string}[]} problems
 */
export function together(typedFaults, problems) {
  const near = (a, b) => a === b || a.startsWith(`${b}/`) || b.startsWith(`${a}/`);
  return [...typedFaults, ...problems.filter((problem) => !typedFaults.some((fault) => near(fault.pointer, problem.pointer)))];
}

/**
 * Show faults at their fields and in the summary, which takes the focus.
 * @param {Element} form that holds the fields
 * @param {Element} summary
 * @param {object[]} faults as `together` gives them
 * @param {object} bundle
 * @param {object} check
 */
export function showFaults(form, summary, faults, bundle, check) {
  clearFaults(form, summary);
  const seen = new Set(),
    rows = faults.map((fault) => {
      const at = placed(bundle, check, fault.pointer),
        words = fault.code ? problemInWords(fault, at, bundle) : inWords(fault, bundle.units[at.field.unit]);
      return { at, words, holder: holderOf(form, at.pointer), where: fault.where };
    });
  // In the order of the form, which is the order in which a person mends them.
  rows.sort((a, b) => (a.holder && b.holder ? (a.holder.compareDocumentPosition(b.holder) & Node.DOCUMENT_POSITION_FOLLOWING ? -1 : 1) : 0));
  const links = rows.map(({ at, words, holder, where }) => {
    const target = holder && mark(holder, at.pointer, words, where, seen);
    const text = `${trailInWords(at)}: ${words}`;
    return make("li", {}, target ? make("a", { href: `#${target.id}`, onclick: (event) => go(event, target) }, text) : text);
  });
  fill(summary, make("h2", {}, say(rows.length === 1 ? "fault-heading-one" : "fault-heading", { count: rows.length })), make("ul", {}, links));
  summary.hidden = false;
  focusOn(summary);
  summary.scrollIntoView({ block: "start" });
}

/** Take the marks of earlier faults away. */
export function clearFaults(form, summary) {
  for (const words of form.querySelectorAll(".fault")) words.remove();
  for (const input of form.querySelectorAll("[aria-invalid]")) {
    input.removeAttribute("aria-invalid");
    const kept = (input.getAttribute("aria-describedby") || "").split(" ").filter((id) => id && !id.endsWith(":fault"));
    if (kept.length) input.setAttribute("aria-describedby", kept.join(" "));
    else input.removeAttribute("aria-describedby");
  }
  fill(summary);
  summary.hidden = true;
}

function go(event, target) {
  event.preventDefault();
  focusOn(target);
  target.scrollIntoView({ block: "center" });
}

/** The element of the field, or of the nearest one around it. */
function holderOf(form, pointer) {
  for (let at = pointer; at; at = at.slice(0, at.lastIndexOf("/"))) {
    const found = [...form.querySelectorAll("[data-at]")].find((element) => element.dataset.at === at);
    if (found) return found;
  }
  return null;
}

function mark(holder, pointer, words, where, seen) {
  const id = idOf(pointer, "fault");
  const control =
    (where && document.getElementById(idOf(holder.dataset.at, where))) ||
    document.getElementById(idOf(holder.dataset.at)) ||
    holder.querySelector("input, select, button");
  if (seen.has(id)) return control;
  seen.add(id);
  for (let folded = control.closest("details:not([open])"); folded; folded = folded.parentElement.closest("details:not([open])")) folded.open = true;
  const panel = control.closest(".spread");
  if (panel) panel.hidden = false;
  const legend = holder.matches("fieldset") ? holder.querySelector("legend") : holder.querySelector("label");
  legend.after(make("p", { class: "fault", id }, make("span", { "class": "fault-sign", "aria-hidden": "true" }, "✕ "), words));
  for (const input of control.type === "radio" ? holder.querySelectorAll("input") : [control]) {
    if (!input.matches("button, fieldset")) input.setAttribute("aria-invalid", "true");
    input.setAttribute("aria-describedby", [id, input.getAttribute("aria-describedby")].filter(Boolean).join(" "));
  }
  return control;
}

/** "The circuit › No. 2 › Series resistance". */
export function trailInWords(at) {
  return (
    at.trail.map((step) => (step.field ? capital(ofRules(step.field.meaning)) : say("item-number", { number: step.number }))).join(" › ") ||
    say("the-question")
  );
}

/** A problem that the runtime found, in the language of the page; its own detail where there are no words of ours. */
export function problemInWords({ code, detail }, { field, rest }, bundle) {
  const unit = field?.kind === "number" && bundle.units[field.unit];
  if (code === "out-of-range" && unit) return say("problem-out-of-range", { range: rangeInWords(field, unit) });
  if (code === "missing" && rest.length) return detail;
  const key = `problem-${code}`;
  return canSay(key) ? say(key, { unit: unit ? unit.symbol : "", most: field?.most ?? field?.longest, least: field?.least }) : detail;
}

function rangeInWords(field, unit) {
  const ends = ["above", "least", "below", "most"]
    .filter((end) => end in field)
    .map((end) => say(`range-${end}`, { value: spelled(field[end], unit, document.documentElement.lang) }));
  return ends.join(` ${say("and")} `);
}

/** The view of one check: its form, and asking. */
import { button, fill, make } from "./elements.js";
import { answer as ask } from "./desk.js";
import { clearFaults, showFaults, together, trailInWords } from "./faults.js";
import { fieldsOf } from "./form.js";
import { homeView } from "./home-view.js";
import { keep } from "./points.js";
import { branchField, lackingFields, placed, question } from "./question.js";
import { draftOf, session, storeDraft } from "./session.js";
import { ofRules, say, spoken } from "./texts.js";

const STORE_AFTER_MILLISECONDS = 300,
  NAMED = 3;

/** The form of a check. */
export async function checkView(name) {
  const { data } = session.rules,
    check = data.checks[name];
  if (!check || session.rules.blocked.includes(name)) return homeView();
  const draft = draftOf(name),
    summary = make("div", { class: "summary", role: "alert", hidden: true }),
    needed = make("p", { class: "needed-list" });
  let timer = null;
  const changed = () => {
    clearTimeout(timer);
    timer = setTimeout(() => {
      storeDraft(name);
      countNeeded();
    }, STORE_AFTER_MILLISECONDS);
  };
  const countNeeded = () => fill(needed, stillNeeded(data, check, draft));
  const form = make("form", {
    novalidate: true,
    onsubmit: (event) => {
      event.preventDefault();
      clearTimeout(timer);
      storeDraft(name);
      countNeeded();
      submit(name, check, draft, form, summary);
    },
  });
  const draw = () => {
    fill(
      form,
      fieldsOf(data, check, draft.fields, { language: spoken(), changed }),
      make(
        "div",
        { class: "field" },
        make("label", { for: "point-name" }, say("point-name")),
        make("p", { class: "hint", id: "point-name-hint" }, say("point-name-hint")),
        make("input", {
          "type": "text",
          "id": "point-name",
          "autocomplete": "off",
          "maxlength": 80,
          "value": draft.name,
          "aria-describedby": "point-name-hint",
          "oninput": (event) => {
            draft.name = event.target.value;
            changed();
          },
        }),
      ),
      needed,
      make(
        "div",
        { class: "keys" },
        make("button", { class: "primary" }, say("ask")),
        button(
          say("clear-form"),
          () => {
            draft.name = "";
            draft.fields = {};
            storeDraft(name);
            clearFaults(form, summary);
            draw();
            form.querySelector("input, select").focus();
          },
          { class: "quiet" },
        ),
      ),
    );
    countNeeded();
  };
  draw();
  return {
    title: ofRules(check.title),
    element: make(
      "div",
      {},
      make("p", { class: "over" }, ofRules(check.title)),
      make("h1", { id: "heading" }, ofRules(check.question)),
      make("p", { class: "hint" }, say("numbers-as-typed")),
      summary,
      form,
    ),
  };
}

/** What cannot be left empty and still is. */
function stillNeeded(data, check, draft) {
  const branch = draft.fields[branchField(check).key];
  if (!branch) return "";
  const lacking = lackingFields(data, check, question(data, check, draft.fields, spoken()).body, branch);
  if (!lacking.length) return say("nothing-needed");
  const names = lacking.slice(0, NAMED).map((pointer) => trailInWords(placed(data, check, pointer)));
  return `${say("still-needed", { count: lacking.length })} ${names.join("; ")}${lacking.length > NAMED ? " …" : "."}`;
}

async function submit(name, check, draft, form, summary) {
  const { data } = session.rules,
    read = question(data, check, draft.fields, spoken()),
    send = form.querySelector(".primary");
  send.disabled = true;
  try {
    const result = await ask(name, read.body, spoken());
    if (result.blocked) throw Object.assign(new Error(), { detail: result.blocked });
    if (read.faults.length || result.problems) return showFaults(form, summary, together(read.faults, result.problems || []), data, check);
    clearFaults(form, summary);
    const point = {
      at: new Date().toISOString(),
      name: draft.name.trim(),
      check: name,
      draft: structuredClone(draft.fields),
      question: read.body,
      answer: result.answer,
      verdict: result.answer.verdict,
      language: spoken(),
      milliseconds: result.milliseconds,
    };
    const id = await keep(point).catch(() => {
      session.unsaved = point;
      return "unsaved";
    });
    location.hash = `#/answer/${id}`;
  } catch (error) {
    fill(summary, make("h2", {}, say("failed")), make("p", {}, error.detail || error.message));
    summary.hidden = false;
    summary.tabIndex = -1;
    summary.focus();
  } finally {
    send.disabled = false;
  }
}

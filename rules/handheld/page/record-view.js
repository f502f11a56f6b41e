/** The view of one answer: what it says, on what it rests, and handing it on. */
import { answerSections, askedSection } from "./answer-view.js";
import { answer as ask } from "./desk.js";
import { announce, button, make } from "./elements.js";
import { one } from "./points.js";
import { recentView } from "./recent-view.js";
import { session, storeDraft } from "./session.js";
import { locale, ofRules, say, spoken } from "./texts.js";

/** An answer that was given on this device. */
export async function recordView(id) {
  const point = id === "unsaved" ? session.unsaved : await one(Number(id)).catch(() => undefined);
  const { data, digest, proof } = session.rules;
  if (!point || !data.checks[point.check]) return recentView();
  const sameRules = point.answer.rule_set.digest === digest;
  // The same question in the language that is spoken now: only the words differ.
  const answer = sameRules && point.language !== spoken() ? (await ask(point.check, point.question, spoken())).answer || point.answer : point.answer;
  const check = data.checks[point.check];
  return {
    title: `${say(`verdict-${answer.verdict}`)}: ${ofRules(check.title)}`,
    element: make(
      "article",
      { "aria-labelledby": "heading" },
      point.name && make("p", { class: "over" }, point.name),
      !sameRules &&
        make(
          "p",
          { class: "notice" },
          make("strong", {}, `${say("signal-notice")}: `),
          say("other-rules", { version: point.answer.rule_set.version }),
        ),
      id === "unsaved" && make("p", { class: "notice" }, make("strong", {}, `${say("signal-notice")}: `), say("not-kept")),
      answerSections(data, answer, point.question),
      askedSection(data, check, point.draft),
      handOn(point, answer),
      basis(point, answer, proof, sameRules),
    ),
  };
}

/** {question, answer}: the answer is the service's own document, so that anybody can ask the service again and compare. */
const exported = (point, answer) => `${JSON.stringify({ question: point.question, answer }, null, 2)}\n`;

function handOn(point, answer) {
  const name = `precontact-${answer.check}-${answer.input_digest.slice(8, 16)}.json`,
    text = () => exported(point, answer);
  const save = () => {
    const address = URL.createObjectURL(new Blob([text()], { type: "application/json" }));
    const link = make("a", { href: address, download: name });
    document.body.append(link);
    link.click();
    link.remove();
    setTimeout(() => URL.revokeObjectURL(address), 10000);
    announce(say("saved", { name }));
  };
  const copy = async () =>
    announce(
      await navigator.clipboard.writeText(text()).then(
        () => say("copied"),
        () => say("copy-failed"),
      ),
    );
  const file = () => new File([text()], name, { type: "application/json" });
  const share = () =>
    navigator.share({ files: [file()], title: name }).catch((error) => error.name !== "AbortError" && announce(say("share-failed")));
  return make(
    "section",
    { "aria-labelledby": "hand-on" },
    make("h2", { id: "hand-on" }, say("hand-on")),
    make("p", { class: "hint" }, say("hand-on-hint")),
    make(
      "div",
      { class: "keys" },
      make(
        "a",
        {
          class: "button primary",
          href: `#/check/${point.check}`,
          onclick: () => storeDraft(point.check, { name: point.name, fields: structuredClone(point.draft) }),
        },
        say("change-question"),
      ),
      button(say("save-file"), save, { class: "quiet" }),
      navigator.canShare?.({ files: [file()] }) && button(say("share"), share, { class: "quiet" }),
      navigator.clipboard && button(say("copy"), copy, { class: "quiet" }),
    ),
  );
}

function basis(point, answer, proof, sameRules) {
  const row = (key, text) => make("div", {}, make("dt", {}, say(key)), make("dd", {}, text));
  return make(
    "section",
    { "aria-labelledby": "basis" },
    make("h2", { id: "basis" }, say("basis")),
    make(
      "dl",
      { class: "basis" },
      row("basis-rule-set", answer.rule_set.version),
      row("basis-digest", make("code", {}, answer.rule_set.digest)),
      sameRules && row("basis-proof", say("proof", proof)),
      row("basis-question", make("code", {}, answer.input_digest)),
      row("basis-when", new Date(point.at).toLocaleString(locale(), { dateStyle: "medium", timeStyle: "short" })),
      row("basis-time", say("milliseconds", { count: point.milliseconds < 10 ? point.milliseconds.toFixed(1) : Math.round(point.milliseconds) })),
    ),
  );
}

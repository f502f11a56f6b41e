/** The view of the rule set on this device, of its updates, and of how the page is shown. */
import { button, make } from "./elements.js";
import { session, updateRules } from "./session.js";
import { KEYPADS, LIGHTS, chooseKeypad, chooseLanguage, chooseLight, keypad, light } from "./settings.js";
import { canSay, locale, ofRules, say, spoken } from "./texts.js";

/** Notices that hold for every view: a key of development, a rule set that is withdrawn from use, a check that is blocked. */
export function noticeTexts() {
  const { rules } = session,
    found = [];
  if (!rules) return found;
  if (rules.development) found.push({ sign: say("signal-warning"), text: say("development-key") });
  if (rules.notice?.deprecated || rules.notice?.sunset) found.push({ sign: say("signal-notice"), text: retirement(rules.notice) });
  if (rules.reason) found.push({ sign: say("signal-notice"), text: say("older-answers", { reason: refusalText(rules.reason) }) });
  if (rules.blocked.length)
    found.push({
      sign: say("signal-warning"),
      text: say("checks-blocked", { checks: rules.blocked.map((name) => ofRules(rules.data.checks[name].title)).join(", ") }),
    });
  return found;
}

function retirement({ deprecated, sunset, because }) {
  const day = (date) => new Date(date).toLocaleDateString(locale(), { dateStyle: "long", timeZone: "UTC" });
  return [deprecated && say("deprecated", { date: day(deprecated) }), sunset && say("sunset", { date: day(sunset) }), because && ofRules(because)]
    .filter(Boolean)
    .join(" ");
}

/** Why a rule set was refused, in the language of the page. */
export function refusalText({ code, detail }) {
  const key = `refused-${code}`;
  return canSay(key) ? say(key) : `${say("refused")} ${detail || code}`;
}

function size(bytes) {
  return bytes < 1000 ? say("bytes", { count: bytes }) : say("kilobytes", { count: Math.round(bytes / 1000) });
}

const seconds = (milliseconds) => say("seconds", { count: (milliseconds / 1000).toLocaleString(locale(), { maximumFractionDigits: 2 }) });

/** What the last update did. */
export function updateText() {
  const { update } = session;
  if (!update) return say("update-never");
  if (update.state === "asking") return say("update-asking");
  const text = say(`update-${update.state}`, {
    version: update.version || "",
    size: size(update.bytes || 0),
    time: seconds(update.milliseconds || 0),
  });
  return update.reason && update.state === "refused" ? `${text} ${refusalText(update.reason)}` : text;
}

/** The rule set and the settings. */
export async function ruleSetView() {
  const { rules, kept } = session,
    row = (key, content) => make("div", {}, make("dt", {}, say(key)), make("dd", {}, content));
  return {
    title: say("nav-rule-set"),
    element: make(
      "div",
      {},
      make("h1", { id: "heading" }, say("rule-set-heading")),
      make(
        "dl",
        { class: "basis" },
        row("basis-rule-set", `${rules.version} – ${ofRules(rules.data.title)}`),
        row("basis-digest", make("code", {}, rules.digest)),
        row("basis-proof", say("proof", rules.proof)),
        row("basis-size", size(rules.bytes)),
        row("basis-opened", seconds(rules.milliseconds)),
        row("basis-key", say(rules.development ? "key-development" : "key-good")),
        row("basis-page", say(`page-${kept === "renewed" ? "kept" : kept}`)),
      ),
      make("h2", {}, say("update-heading")),
      make("p", { class: "update" }, updateText()),
      button(say("update-now"), () => updateRules(), { class: "primary", id: "update-now" }),
      make("h2", {}, say("settings-heading")),
      chosen("settings-light", "light", LIGHTS, light(), (one) => say(`light-${one}`), chooseLight),
      chosen("settings-keypad", "keypad", KEYPADS, keypad(), (one) => say(`keypad-${one}`), chooseKeypad),
      chosen(
        "settings-language",
        "language",
        ["en", "es"],
        spoken(),
        (one) => ({ en: "English", es: "Español" })[one],
        (one) => {
          if (chooseLanguage(one)) window.dispatchEvent(new HashChangeEvent("hashchange"));
        },
        (one) => ({ lang: one }),
      ),
      make("h2", {}, say("privacy-heading")),
      make("p", {}, say("privacy")),
    ),
  };
}

function chosen(legend, name, values, current, words, choose, extra = () => ({})) {
  return make(
    "fieldset",
    { class: "field options" },
    make("legend", {}, say(legend)),
    values.map((one) =>
      make(
        "div",
        { class: "option" },
        make("input", { type: "radio", name, id: `set-${one}`, value: one, checked: one === current, onchange: () => choose(one) }),
        make("label", { for: `set-${one}`, ...extra(one) }, words(one)),
      ),
    ),
  );
}

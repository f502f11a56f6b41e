/** The first view: which question. And what is seen until there is a rule set. */
import { button, make } from "./elements.js";
import { all } from "./points.js";
import { pointCard } from "./recent-view.js";
import { refusalText } from "./rule-set-view.js";
import { session } from "./session.js";
import { ofRules, say } from "./texts.js";

const RECENT = 3;

/** The checks of the rule set, and the latest test points. */
export async function homeView() {
  const { data, blocked } = session.rules,
    recent = (await all().catch(() => [])).slice(0, RECENT);
  const checks = Object.keys(data.checks).sort((a, b) => ofRules(data.checks[a].title).localeCompare(ofRules(data.checks[b].title)));
  return {
    title: say("nav-checks"),
    element: make(
      "div",
      {},
      make("h1", { id: "heading" }, say("home-heading")),
      make(
        "ul",
        { class: "checks" },
        checks.map((name) =>
          make(
            "li",
            {},
            blocked.includes(name)
              ? make("div", { class: "check-card blocked" }, make("b", {}, ofRules(data.checks[name].title)), make("span", {}, say("check-blocked")))
              : make(
                  "a",
                  { class: "check-card", href: `#/check/${name}` },
                  make("b", {}, ofRules(data.checks[name].title)),
                  make("span", {}, ofRules(data.checks[name].question)),
                ),
          ),
        ),
      ),
      recent.length
        ? make(
            "section",
            { "aria-labelledby": "recent" },
            make("h2", { id: "recent" }, say("recent-heading")),
            make(
              "ul",
              { class: "points" },
              recent.map((point) => pointCard(point, data)),
            ),
          )
        : null,
    ),
  };
}

/** While the rule set is opened, or where there is none. */
export function openingView(again) {
  const { refusal, update } = session,
    failed = refusal && update && update.state !== "asking";
  return {
    title: say(failed ? "no-rule-set" : "opening"),
    focus: Boolean(failed),
    element: make(
      "div",
      {},
      make("h1", {}, say(failed ? "no-rule-set" : "opening")),
      make("p", { role: failed ? "alert" : "status" }, failed ? refusalText(refusal) : say(update ? "fetching" : "proving")),
      failed && button(say("try-again"), again, { class: "primary", id: "try-again" }),
    ),
  };
}

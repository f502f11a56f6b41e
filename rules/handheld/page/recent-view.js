/** The view of recent test points. */
import { announce, button, make } from "./elements.js";
import { all, remove, removeAll } from "./points.js";
import { session, storeDraft } from "./session.js";
import { locale, ofRules, say } from "./texts.js";

/** All points that this device keeps. */
export async function recentView() {
  const { data } = session.rules,
    holder = make("div");
  let failed = false;
  const draw = async () => {
    const points = await all().catch(() => {
      failed = true;
      return [];
    });
    holder.replaceChildren(...(points.length ? filled(points, data, draw) : [make("p", {}, say(failed ? "points-unreadable" : "no-points"))]));
  };
  await draw();
  return {
    title: say("nav-recent"),
    element: make("div", {}, make("h1", { id: "heading" }, say("recent-heading")), make("p", { class: "hint" }, say("recent-hint")), holder),
  };
}

function filled(points, data, draw) {
  const heading = () => document.querySelector("main h1");
  const after = async (text) => {
    await draw();
    heading().tabIndex = -1;
    heading().focus();
    announce(text);
  };
  const sure = make(
    "div",
    { "class": "sure", "hidden": true, "role": "group", "aria-label": say("delete-all") },
    make("p", {}, say("delete-all-sure", { count: points.length })),
    make(
      "div",
      { class: "keys" },
      button(
        say("delete-all-yes"),
        async () => {
          await removeAll();
          await after(say("all-deleted"));
        },
        { class: "primary" },
      ),
      button(
        say("keep-them"),
        () => {
          sure.hidden = true;
          open.focus();
        },
        { class: "quiet" },
      ),
    ),
  );
  const open = button(
    say("delete-all"),
    () => {
      sure.hidden = false;
      sure.querySelector("button").focus();
    },
    { class: "quiet" },
  );
  return [
    make(
      "ul",
      { class: "points" },
      points.map((point) =>
        pointCard(point, data, async () => {
          await remove(point.id);
          await after(say("deleted"));
        }),
      ),
    ),
    open,
    sure,
  ];
}

/** One point as an item of a list. */
export function pointCard(point, data, deleting) {
  const check = data.checks[point.check],
    title = point.name || (check ? ofRules(check.title) : point.check);
  const when = new Date(point.at).toLocaleString(locale(), { dateStyle: "medium", timeStyle: "short" });
  return make(
    "li",
    { class: "point" },
    make(
      "a",
      { class: "point-link", href: `#/answer/${point.id}` },
      make("b", {}, title),
      make("span", {}, `${say(`verdict-${point.verdict}`)} · ${point.name && check ? `${ofRules(check.title)} · ` : ""}${when}`),
    ),
    deleting &&
      make(
        "div",
        { class: "keys" },
        check &&
          make(
            "a",
            {
              "class": "button quiet",
              "href": `#/check/${point.check}`,
              "aria-label": `${say("change-question")}: ${title}, ${when}`,
              "onclick": () => storeDraft(point.check, { name: point.name, fields: structuredClone(point.draft) }),
            },
            say("change-question"),
          ),
        button(say("delete"), deleting, { "class": "quiet", "aria-label": `${say("delete")}: ${title}, ${when}` }),
      ),
  );
}

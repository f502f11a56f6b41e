/** The page's frame: header, notices, state, and which view is shown. */
import { checkView } from "./check-view.js";
import { announce, button, fill, focusOn, make } from "./elements.js";
import { homeView, openingView } from "./home-view.js";
import { recentView } from "./recent-view.js";
import { recordView } from "./record-view.js";
import { noticeTexts, ruleSetView, updateText } from "./rule-set-view.js";
import { keepPage, onChange, openRules, session, updateRules } from "./session.js";
import { applySettings, chooseLanguage, chooseLight, light } from "./settings.js";
import { say, spoken } from "./texts.js";

const header = document.querySelector("header"),
  notices = document.getElementById("notices"),
  main = document.querySelector("main"),
  footer = document.querySelector("footer");
const skip = document.querySelector(".skip");

const VIEWS = { "check": checkView, "answer": recordView, "recent": recentView, "rule-set": ruleSetView, "": homeView };
let shownRoute = null;

const route = () => location.hash.replace(/^#\/?/, "").split("/").map(decodeURIComponent);

/** Show the view that the address names; the focus goes to its heading unless it is the same view again. */
async function show({ keepFocus = false } = {}) {
  const [name, ...rest] = route(),
    asked = location.hash,
    sameView = asked === shownRoute;
  const view = session.rules ? await (VIEWS[name] || homeView)(...rest) : openingView(openRules);
  if (location.hash !== asked) return; // the person went on while the view was made
  shownRoute = asked;
  const held = main.contains(document.activeElement) && document.activeElement.id;
  fill(main, view.element);
  if (sameView && held) document.getElementById(held)?.focus();
  document.title = `${view.title} – Precontact`;
  drawFrame(name);
  if (!keepFocus && !sameView && view.focus !== false) {
    window.scrollTo(0, 0);
    focusOn(main.querySelector("h1"));
  }
}

function drawFrame(name) {
  const link = (to, key) => make("a", { "href": `#/${to}`, "aria-current": (name || "") === to ? "page" : undefined }, say(key));
  const other = spoken() === "en" ? "es" : "en";
  const sun = button(
    "☀",
    () => {
      chooseLight(light() === "sun" ? "auto" : "sun");
      drawFrame(name);
      header.querySelector(".sun").focus();
    },
    { "class": "tool sun", "aria-pressed": String(light() === "sun"), "aria-label": say("light-sun") },
  );
  const language = button(
    other.toUpperCase(),
    async () => {
      chooseLanguage(other);
      await show({ keepFocus: true });
      header.querySelector(".language").focus();
    },
    { "class": "tool language", "lang": other, "aria-label": other === "es" ? "ES: Español" : "EN: English" },
  );
  fill(
    header,
    make(
      "div",
      { class: "masthead" },
      make("a", { class: "mark", href: "#/" }, make("b", {}, "Precontact"), make("span", {}, ` ${say("field-sheet")}`)),
      make("div", { class: "tools" }, language, sun),
    ),
    session.rules &&
      make("nav", { "aria-label": say("views") }, link("", "nav-checks"), link("recent", "nav-recent"), link("rule-set", "nav-rule-set")),
  );
  skip.textContent = say("skip");
  notices.setAttribute("aria-label", say("notices"));
  drawState();
}

function drawState() {
  const { rules, kept } = session;
  fill(
    notices,
    noticeTexts().map(({ sign, text }) => make("p", { class: "notice" }, make("strong", {}, `${sign}: `), text)),
    kept === "renewed" &&
      make(
        "p",
        { class: "notice" },
        `${say("page-renewed")} `,
        button(say("reload"), () => location.reload(), { class: "quiet" }),
      ),
  );
  const network = say(navigator.onLine ? "online" : "offline"),
    offline = say(`page-${kept === "renewed" ? "kept" : kept}`);
  fill(
    footer,
    make(
      "p",
      {},
      rules
        ? say("footer", { version: rules.version, digest: rules.digest.slice(0, 16), agree: rules.proof.agree, of: rules.proof.of })
        : say("no-rule-set"),
    ),
    make("p", {}, `${network} ${offline}`),
    make("p", {}, say("never-says")),
  );
}

applySettings();
drawFrame(route()[0]);
fill(main, openingView(openRules).element);
skip.addEventListener("click", (event) => {
  event.preventDefault(); // the address belongs to the views
  focusOn(main.querySelector("h1"));
});
window.addEventListener("hashchange", () => show());
window.addEventListener("online", drawState);
window.addEventListener("offline", drawState);
onChange((what) => {
  // A form that is being filled in stays as it is; the next view is made from what is new.
  const typing = main.querySelector("form")?.contains(document.activeElement);
  if (!session.rules || (what === "rules" && !typing) || (what === "update" && route()[0] === "rule-set")) show({ keepFocus: true });
  drawState();
  if (what === "update" && session.rules && (session.update.state === "updated" || route()[0] === "rule-set")) announce(updateText());
});

await openRules();
await show({ keepFocus: true });
keepPage();
if (session.update === null) updateRules(); // what was on the device answers at once; a newer one comes in behind it

/** The page's own words, in the language that was chosen. What a rule set says comes from the rule set. */
import en from "./texts-en.js";
import es from "./texts-es.js";

export const LANGUAGES = { en, es };
let language = "en";

/** The language in use: "en" or "es". */
export const spoken = () => language;

/** Choose the language; the document says so too. */
export function speak(chosen) {
  language = chosen in LANGUAGES ? chosen : "en";
  document.documentElement.lang = language;
}

/** A text by its key, with {places} filled in. */
export function say(key, places = {}) {
  const text = LANGUAGES[language][key];
  if (text === undefined) throw new Error(`no text is called ${key}`);
  return text.replace(/\{(\w+)\}/g, (_, name) => places[name] ?? "");
}

/** Whether there is a text of that key. */
export const canSay = (key) => key in LANGUAGES[language];

/** A text of the rule set, {en, es}. */
export const ofRules = (text) => text[language];

/** The form of dates and times: the device's own, where it is of that language. */
export const locale = () => (navigator.language.startsWith(language) ? navigator.language : language);

/** Text to begin a line with. */
export const capital = (text) => text.charAt(0).toLocaleUpperCase(language) + text.slice(1);

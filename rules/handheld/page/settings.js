/** How this person wants the page: language and light. Remembered on the device. */
import { LANGUAGES, speak, spoken } from "./texts.js";

export const LIGHTS = ["auto", "light", "dark", "sun"];
export const KEYPADS = ["letters", "digits"];
const LANGUAGE = "precontact-language";
const LIGHT = "precontact-light";
const KEYPAD = "precontact-keypad";

function remembered(key) {
  try {
    return localStorage.getItem(key);
  } catch {
    return null; // a browser may forbid it: then the page simply forgets
  }
}

function remember(key, value) {
  try {
    localStorage.setItem(key, value);
  } catch {
    // As above.
  }
}

/** Take up what was chosen before; at first, what the device prefers. */
export function applySettings() {
  const preferred = (navigator.languages || []).map((tag) => tag.slice(0, 2)).find((tag) => tag in LANGUAGES);
  speak(remembered(LANGUAGE) || preferred || "en");
  document.documentElement.dataset.light = light();
}

/** The chosen light. */
export const light = () => (LIGHTS.includes(remembered(LIGHT)) ? remembered(LIGHT) : "auto");

/** Choose the light. */
export function chooseLight(chosen) {
  remember(LIGHT, chosen);
  document.documentElement.dataset.light = chosen;
}

/** How numbers are typed: "letters", or "digits" for a keypad of large digits, on which a glove hits better. */
export const keypad = () => (remembered(KEYPAD) === "digits" ? "digits" : "letters");

/** Choose how numbers are typed. */
export const chooseKeypad = (chosen) => remember(KEYPAD, chosen);

/** Choose the language; whether it is another one. */
export function chooseLanguage(chosen) {
  const before = spoken();
  remember(LANGUAGE, chosen);
  speak(chosen);
  return spoken() !== before;
}

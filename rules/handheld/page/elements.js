/** Elements of the page, made by code: no markup is ever built from text. */

/**
 * An element with its attributes, properties and children.
 * @param {string} tag
 * @param {object} [given] attributes; `on*` are listeners, `class` and `text` as they say; undefined, null and false are left out
 * @param {...(Node | string | null | undefined | false)} children
 */
export function make(tag, given = {}, ...children) {
  const element = document.createElement(tag);
  for (const [name, value] of Object.entries(given)) {
    if (value === undefined || value === null || value === false) continue;
    if (name.startsWith("on")) element.addEventListener(name.slice(2), value);
    else if (name === "text") element.textContent = value;
    else if (name === "value" || name === "checked" || name === "hidden" || name === "selected" || name === "open") element[name] = value;
    else element.setAttribute(name, value === true ? "" : value);
  }
  element.append(...children.flat().filter((child) => child !== null && child !== undefined && child !== false));
  return element;
}

/** Replace what an element holds. */
export function fill(element, ...children) {
  element.replaceChildren(...children.flat().filter((child) => child !== null && child !== undefined && child !== false));
  return element;
}

/** A button that does one thing. */
export function button(text, onclick, given = {}) {
  return make("button", { type: "button", onclick, ...given }, text);
}

/** Put the focus on an element that is not a control, and bring it into view. */
export function focusOn(element) {
  if (!element.matches("a[href], button, input, select, textarea, summary")) element.tabIndex = -1;
  element.focus();
}

/** The id of what belongs to a place of the question. */
export const idOf = (pointer, part = "") => `at${pointer}${part && `:${part}`}`;

/** Tell those who listen rather than look. */
export function announce(text) {
  const status = document.getElementById("status");
  status.textContent = "";
  setTimeout(() => (status.textContent = text), 50); // a change is what is read out
}

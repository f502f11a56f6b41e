/** What the open page knows: the rule set that answers, whether there is a network, and the drafts that are being typed. */
import * as desk from "./desk.js";

const DRAFT = "precontact-draft-";

export const session = {
  rules: null, // what the desk opened: {data, version, digest, proof, ...}
  update: null, // what the last update did
  refusal: null, // why there is no rule set
  kept: navigator.serviceWorker?.controller ? "kept" : "waiting", // the page's own files: "waiting", "kept", "renewed", "impossible"
  unsaved: null, // an answer that the device could not keep
};

const drafts = new Map();
const listeners = new Set();

/** Be told when something above changed. */
export const onChange = (listener) => listeners.add(listener);
const changed = (what) => listeners.forEach((listener) => listener(what));

/** Open the rule set on the device; the first time, fetch it. */
export async function openRules() {
  try {
    session.rules = await desk.start();
    session.refusal = null;
  } catch (error) {
    session.refusal = { code: error.code, detail: error.detail };
    await updateRules();
  }
  changed("rules");
}

/** Ask for a newer rule set. */
export async function updateRules() {
  if (session.update?.state === "asking") return;
  session.update = { state: "asking" };
  changed("update");
  try {
    const { opened, ...update } = await desk.update();
    session.update = update;
    if (opened && opened.digest !== session.rules?.digest) {
      session.rules = opened;
      session.refusal = null;
      changed("rules");
    } else if (opened) {
      Object.assign(session.rules, { notice: opened.notice, development: opened.development });
    }
    if (!session.rules) session.refusal = update.reason || session.refusal;
  } catch (error) {
    session.update = { state: "refused", reason: { code: error.code, detail: error.detail } };
  }
  changed("update");
}

/** The draft of a check: {name, fields}. It outlives a reload of the page in the same tab. */
export function draftOf(check) {
  if (!drafts.has(check)) {
    let stored = null;
    try {
      stored = JSON.parse(sessionStorage.getItem(DRAFT + check));
    } catch {
      // Nothing is stored, or nothing may be: an empty form.
    }
    drafts.set(check, stored || { name: "", fields: {} });
  }
  return drafts.get(check);
}

/** Keep a draft as it is now, or put another in its place. */
export function storeDraft(check, draft = drafts.get(check)) {
  drafts.set(check, draft);
  try {
    sessionStorage.setItem(DRAFT + check, JSON.stringify(draft));
  } catch {
    // It then lives as long as the page is open.
  }
}

/** Keep the page's own files on the device, and look for newer ones. */
export async function keepPage() {
  if (!("serviceWorker" in navigator)) {
    session.kept = "impossible";
    return changed("kept");
  }
  navigator.serviceWorker.addEventListener("message", ({ data }) => {
    if (data.page !== "renewed") return;
    session.kept = "renewed";
    changed("kept");
  });
  try {
    const hadOne = Boolean(navigator.serviceWorker.controller);
    await navigator.serviceWorker.register("./service-worker.js");
    const { active } = await navigator.serviceWorker.ready;
    session.kept = "kept";
    if (hadOne) active.postMessage("renew");
  } catch {
    session.kept = navigator.serviceWorker.controller ? "kept" : "impossible";
  }
  changed("kept");
}

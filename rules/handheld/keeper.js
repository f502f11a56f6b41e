/**
 * Keeps a rule set on the device, and brings in a newer one without ever being left with none.
 *
 * The store holds each bundle under its digest, and one small record of state in two copies, each with its own digest. A newer bundle is verified,
 * written, read back and proved, and only then is the record replaced: whenever the power fails, either the old or the new one answers. The old one
 * is kept for the day on which the new one is found damaged.
 */
import { oneOfEach, prove } from "./proof.js";
import { receiver } from "./receiver.js";
import { BundleRefused, check, digestOf, firstKeys, openBundle, readKeys, remembering, succeedingKeys } from "./trust.js";

export const RUNTIME = "1.0.0";         // as package.json says; a proof holds for one version of the runtime
const COPIES = ["state-a", "state-b"], BUNDLE = "bundle.", PROOF = "proof.";
const PAUSED_AFTER_MILLISECONDS = 40;   // a page can draw in the pauses of a long proof

const refused = (code, detail) => new BundleRefused(code, detail);
const nameOf = (digest, what = BUNDLE) => what + digest.slice(8);       // without "sha-256:"
const utf8 = (text) => new TextEncoder().encode(text);
const text = (bytes) => bytes && new TextDecoder().decode(bytes);
const same = (a, b) => JSON.stringify(a) === JSON.stringify(b);
const now = () => performance.now();

/** The refusal that an error is: whatever no other module expects comes from the store. */
const asRefused = (error) => (error?.detail ? error : refused("storage-failed", `this device's storage failed: ${error?.message ?? error}`));

const said = ({ code, detail }) => ({ code, detail });      // plain data, which a worker can hand over

/** Whether version `a` is above version `b`. */
function isAbove(a, b) {
  const [x, y] = [a, b].map((version) => version.split("."));
  return (x[0] - y[0] || x[1] - y[1] || x[2] - y[2]) > 0;
}

/** Why the seal of what is installed is not good to this trust, or null. */
const refusalOf = ({ entry, ruleSet }, trust) => check(trust, ruleSet.bytes, entry.seal).then(() => null, asRefused);

let queue = Promise.resolve();

/** Run one update after the other, in all pages of an origin where the engine can see to that. */
function inTurn(work) {
  const locks = globalThis.navigator?.locks;
  return locks ? locks.request("precontact-keeper", work) : (queue = queue.then(work));
}

/** Prove all cases, with pauses. */
async function provedWhole(ruleSet) {
  const whole = { agree: 0, of: 0, wrong: [] };
  let since = now();
  for (const one of ruleSet.data.cases) {
    const { agree, of, wrong } = prove(ruleSet, [one.check], [one]);
    whole.agree += agree;
    whole.of += of;
    whole.wrong.push(...wrong);
    if (now() - since < PAUSED_AFTER_MILLISECONDS) continue;
    await new Promise((resolve) => setTimeout(resolve));
    since = now();
  }
  ruleSet.forget();
  return whole;
}

/** Keeps and updates the rule set of one device. */
export class Keeper {
  /**
   * @param {object} options
   * @param {Store} options.store where the bytes are kept
   * @param {string} options.base address of the folder rule-set/ of a service or of a static export
   * @param {typeof fetch} [options.fetch]
   * @param {Uint8Array | string | object} [options.pins] the key list that is compiled in; without one the first list found is trusted
   * @param {Function} [options.verify] Ed25519 for an engine without it, as for readKeys
   * @param {string} [options.engine] name and version of the JavaScript engine: a proof holds for one
   */
  constructor(options) {
    const { start, update } = keeping(options);

    /**
     * Open what is installed, from the store alone: digest, seal and proof are checked. All cases are proved once; afterwards one of each check.
     * @type {() => Promise<{ruleSet, proof, trust, notice, bytes, milliseconds, reason}>} `reason`: why the bundle before the last one answers, or
     * null; rejects with BundleRefused where nothing usable is installed
     */
    this.start = start;

    /**
     * Ask for the latest rule set, and install it if it is another one. Never throws for what the network, the server or the storage does.
     * @type {(options?: {signal?: AbortSignal, allowOlder?: boolean}) => Promise<object>} what was done, and what answers after it; `bytes` are those
     * received; `allowOlder`: take a version below the installed one
     */
    this.update = (given = {}) => inTurn(() => update(given));
  }
}

function keeping({ store, base, fetch = globalThis.fetch, pins: pinned, verify, engine }) {
  const { process, navigator } = globalThis, pins = pinned && readKeys(pinned, verify);
  const proofKey = [RUNTIME, engine ?? [process?.version, process?.arch, navigator?.userAgent]].join();
  const folder = base.replace(/\/$/, "");
  let active = null;        // {entry, ruleSet, trust, proof}: what answers

  const answering = () => active && { ruleSet: active.ruleSet, proof: active.proof, trust: active.trust, notice: active.entry.notice };

  /** The last state that was written whole. A copy that cannot be read is no reason to believe that nothing is installed. */
  async function load() {
    const read = [];
    let failed = null;
    for (const copy of COPIES) {
      try {
        const bytes = await store.get(copy);
        if (!bytes) continue;
        const record = text(bytes), end = record.indexOf("\n");
        const whole = record.slice(0, end) === (await digestOf(utf8(record.slice(end + 1))));
        read.push({ sequence: 0, ...(whole && JSON.parse(record.slice(end))), copy });
      } catch (error) {
        failed = error;
      }
    }
    const [best = { sequence: 0 }, spare] = read.sort((a, b) => b.sequence - a.sequence);
    if (failed && !best.sequence) throw failed;
    return { ...best, damaged: read.length && !best.sequence, alone: spare?.sequence !== best.sequence };
  }

  /** Replace the state: first the copy that is not in use. Once that is written the new state holds; the other copy becomes a spare. */
  async function save({ copy, sequence, current, previous }, trust, changes) {
    const next = { sequence: sequence + 1, current, previous, keys: trust.list, revoked: [...trust.revoked], pinned: !!pins, ...changes };
    const data = JSON.stringify(next), record = utf8(`${await digestOf(utf8(data))}\n${data}`);
    const [first, second] = copy === COPIES[0] ? [COPIES[1], copy] : COPIES;
    await put(first, record);
    await store.put(second, record).catch(() => {});
    return { ...next, copy: first };
  }

  async function put(name, bytes) {
    try {
      await store.put(name, bytes);
    } catch (error) {
      if (!/quota|ENOSPC|EDQUOT/i.test(`${error?.name} ${error?.code}`)) throw error;
      throw refused("storage-full", `this device has no room for ${bytes.length} bytes; free some storage`);
    }
  }

  /** Who is trusted: what was compiled in, and the newer lists that were accepted since. */
  function trusted(state) {
    const kept = state.keys && (state.pinned || !pins) && remembering(readKeys(state.keys, verify), state.revoked);
    if (!pins || !kept) return pins || kept || null;
    return pins.serial > kept.serial ? remembering(pins, kept.revoked) : remembering(kept, pins.revoked);
  }

  /** Make the installed bundle answer, or the one before it where that one is not good; why, or null. */
  async function open(state) {
    active = null;
    if (!state.current) {
      throw state.damaged ? refused("damaged", "what is kept on this device is damaged; connect, to install it anew")
        : refused("nothing-installed", "no rule set is installed on this device yet; connect once");
    }
    const trust = trusted(state);
    let reason = null;
    for (const entry of [state.current, state.previous]) {
      if (!entry) continue;
      try {
        const bytes = await store.get(nameOf(entry.digest));
        if (!bytes) throw refused("damaged", `rule set ${entry.version} is gone from this device; connect, to install it anew`);
        const ruleSet = await openBundle(bytes, { ...entry, trust });
        active = { entry, ruleSet, trust, proof: await proved(ruleSet) };
        return reason;
      } catch (error) {
        reason ??= asRefused(error);
      }
    }
    throw reason;
  }

  /** Prove one case of each check where all agreed before on this engine, otherwise all. */
  async function proved(ruleSet) {
    const { digest, data: { cases } } = ruleSet;
    if (text(await store.get(nameOf(digest, PROOF))) === proofKey && !prove(ruleSet, undefined, oneOfEach(ruleSet)).wrong.length) {
      return { agree: cases.length, of: cases.length, wrong: [] };
    }
    const proof = await provedWhole(ruleSet);
    await remember(digest, proof);
    return proof;
  }

  async function remember(digest, { wrong }) {
    if (!wrong.length) await store.put(nameOf(digest, PROOF), utf8(proofKey)).catch(() => {});      // otherwise all are proved again
  }

  /** Remove what belongs to bundles that no state names: leftovers of interrupted updates, and the one before the previous one. */
  async function sweep({ current, previous }) {
    const kept = [current, previous].flatMap((entry) => (entry ? [nameOf(entry.digest), nameOf(entry.digest, PROOF)] : []));
    try {
      for (const name of await store.names()) if (/^(bundle|proof)\./.test(name) && !kept.includes(name)) await store.remove(name);
    } catch {
      // room that is not freed now is freed after the next update
    }
  }

  /** The trust after the publisher's key list was looked at: a newer one that a trusted key has sealed takes the place of the old one. */
  async function renewed(from, trust) {
    const list = await from.document("keys.json"), offered = readKeys(list, verify), seal = () => from.seal("keys.seal.json");
    // A development key is made anew at every start of a service and vouches for nothing: what follows it is a first installation again.
    if (!trust || (trust.development && !pins && !same(offered.list, trust.list))) return firstKeys(list, await seal(), verify);
    return offered.serial > trust.serial ? succeedingKeys(trust, list, await seal()) : trust;
  }

  /** The installed bundle is the latest one: keep its newest seal and what is said of its retirement. */
  async function confirm(from, state, latest, trust, isNew) {
    const entry = { ...active.entry, notice: latest.notice };
    if (isNew) {
      entry.seal = await from.seal(latest.seal);
      await check(trust, active.ruleSet.bytes, entry.seal);
    }
    if (isNew || state.alone || !same(entry, state.current)) state = await save(state, trust, { current: entry });
    active = { ...active, entry, trust };
    await sweep(state);
  }

  /** Fetch, verify, write, prove and only then install; false where the server says that there is nothing else than what is installed. */
  async function install(from, state, latest, trust) {
    const { digest, notice } = latest, seal = await from.seal(latest.seal), bytes = await from.bundle(latest, active?.entry.digest);
    if (!bytes) return false;
    const ruleSet = await openBundle(bytes, { seal, trust, digest }), { version, checkNames, blocked } = ruleSet;
    if (version !== latest.version) throw refused("wrong-version", `version ${latest.version} was announced; the bundle is ${version}`);
    await put(nameOf(digest), bytes);
    const written = await store.get(nameOf(digest));
    if (!written || (await digestOf(written)) !== digest) throw new Error("it does not give back what was written");
    const proof = await provedWhole(ruleSet), { agree, of, wrong } = proof;
    if (wrong.length && (active || checkNames.every((name) => blocked.has(name)))) {
      throw refused("disagrees", `${agree} of ${of} worked cases of ${version} agree on this device; ${wrong[0].id} of ${wrong[0].check} does not`);
    }
    const entry = { version, digest, seal, notice }, next = await save(state, trust, { current: entry, previous: active?.entry });
    active = { entry, ruleSet, trust, proof };
    await remember(digest, proof);
    await sweep(next);
    return true;
  }

  /** A newer key list came, and no bundle that it vouches for: it is kept where the installed one stands, or is revoked. */
  async function heed(state, trust) {
    const refusal = active && (await refusalOf(active, trust));
    if (!state.keys || (refusal && refusal.code !== "revoked-key")) return;
    const next = await save(state, trust);
    if (active) active = { ...active, trust };
    if (!refusal) return;
    await open(next).catch(() => {});       // the one before it, where its seal stands
    throw refusal;
  }

  /** A version below the installed one is an old seal played again, unless the keys of the installed one were revoked. */
  async function refuseOlder({ version, digest }, { current }, trust, unusable) {
    if (!current || digest === current.digest || isAbove(version, current.version)) return;
    if ((unusable ?? (await refusalOf(active, trust)))?.code === "revoked-key") return;
    throw refused("not-newer", `version ${version} is offered where ${current.version} is installed; one above it is right`);
  }

  /** The steps of an update; "installed", "updated" or "current". */
  async function bring(from, allowOlder) {
    const state = await load();
    let unusable = null;        // why the installed one does not answer
    if (active?.entry.digest !== state.current?.digest) unusable = await open(state).catch(asRefused);
    const latest = await from.latest(), old = trusted(state), trust = await renewed(from, old);
    try {
      const digest = active?.entry.digest;
      if (!allowOlder) await refuseOlder(latest, state, trust, unusable);
      if (digest === latest.digest) await confirm(from, state, latest, trust, trust !== old);
      else if (await install(from, state, latest, trust)) return digest ? "updated" : "installed";
      return "current";
    } catch (error) {
      await load().then(sweep, () => {});       // as it is now: a write that failed may have been done
      if (trust !== old) await heed(state, trust);
      throw error;
    }
  }

  return {
    async start() {
      const began = now();
      try {
        const reason = await open(await load());
        return { ...answering(), reason: reason && said(reason), bytes: active.ruleSet.bytes.length, milliseconds: now() - began };
      } catch (error) {
        throw asRefused(error);
      }
    },

    async update({ signal, allowOlder }) {
      const began = now(), from = receiver(folder, fetch, signal);
      let state, reason;
      try {
        state = await bring(from, allowOlder);
      } catch (error) {
        reason = asRefused(error);
        state = reason.code === "unreachable" ? reason.code : "refused";
      }
      const { version = null, digest = null } = active?.ruleSet ?? {};
      return { state, version, digest, ...answering(), ...(reason && { reason: said(reason) }), ...from.counted, milliseconds: now() - began };
    },
  };
}

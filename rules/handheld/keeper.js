/**
 * Keeps a rule set on the device, and brings in a newer one without ever being left with none.
 *
 * The store holds each bundle under its digest, and one small record of state in two copies, each with its own digest. A newer bundle is verified,
 * written, read back and proved, and only then is the record replaced: whenever the power fails, either the old or the new one answers. The old one
 * is kept for the day on which the new one is found damaged.
 */
import { oneOfEach, prove } from "./proof.js";
import { Receiver } from "./receiver.js";
import { BundleRefused, Trust, digestOf, openBundle } from "./trust.js";

export const RUNTIME = "1.0.0";         // as package.json says; a proof holds for one version of the runtime
const COPIES = ["state-a", "state-b"], PROOFS = "proofs", PROOFS_KEPT = 4, BUNDLE = "bundle.";
const PAUSED_AFTER_MILLISECONDS = 40;    // a page can draw in the pauses of a long proof

const nameOf = (digest) => BUNDLE + digest.slice("sha-256:".length);
const pause = () => new Promise((resolve) => setTimeout(resolve));

/** The refusal that an error is: whatever no other module expects comes from the store. */
function asRefused(error) {
  return error instanceof BundleRefused ? error : new BundleRefused("storage-failed", `this device's storage failed: ${error?.message ?? error}`);
}

/** Negative, zero, positive: as version `a` is older than, the same as, newer than `b`. */
function inOrder(a, b) {
  const [x, y] = [a, b].map((version) => version.split(".").map(Number));
  return x[0] - y[0] || x[1] - y[1] || x[2] - y[2];
}

/** JSON data as the bytes of a record that notices damage. */
async function sealed(data) {
  const text = JSON.stringify(data);
  return new TextEncoder().encode(`${await digestOf(new TextEncoder().encode(text))}\n${text}`);
}

/** The data of such a record, or null where it is damaged. */
async function unsealed(bytes) {
  const end = bytes.indexOf(10), text = bytes.subarray(end + 1), decoder = new TextDecoder();
  return decoder.decode(bytes.subarray(0, Math.max(end, 0))) === (await digestOf(text)) ? JSON.parse(decoder.decode(text)) : null;
}

let queue = Promise.resolve();

/** Run one update after the other, in all pages of an origin where the engine can see to that. */
function inTurn(work) {
  const { locks } = globalThis.navigator ?? {};
  if (locks) return locks.request("precontact-keeper", work);
  const done = queue.then(work);
  queue = done.catch(() => {});
  return done;
}

/** Keeps and updates the rule set of one device. */
export class Keeper {
  #store;
  #receiver;
  #verify;
  #pins;
  #engine;
  #active = null;       // {entry, ruleSet, proof}: what answers

  /**
   * @param {object} options
   * @param {Store} options.store where the bytes are kept
   * @param {string} options.base address of the folder rule-set/ of a service or of a static export
   * @param {typeof fetch} [options.fetch]
   * @param {Uint8Array | string | object} [options.pins] the key list that is compiled in; without one the first list found is trusted
   * @param {Function} [options.verify] Ed25519 for an engine whose WebCrypto has none, as for Trust.read
   * @param {string} [options.engine] name and version of the JavaScript engine: a proof holds for one
   */
  constructor({ store, base, fetch = globalThis.fetch, pins, verify, engine }) {
    this.#store = store;
    this.#receiver = new Receiver(base, fetch);
    this.#verify = verify;
    this.#pins = pins && Trust.read(pins, verify);
    this.#engine = engine ?? [globalThis.process?.version, globalThis.process?.arch, globalThis.navigator?.userAgent].join(" ");
  }

  /**
   * Open what is installed, from the store alone: digest, seal and proof are checked. All cases are proved once; afterwards one of each check.
   * @returns {Promise<{ruleSet, proof, trust, notice, bytes, milliseconds, reason}>} `reason`: why the bundle before the last one answers, or null
   * @throws {BundleRefused} where nothing usable is installed
   */
  async start() {
    const began = performance.now();
    try {
      const { reason } = await this.#open(await this.#load());
      return { ...this.#answering(), reason, milliseconds: performance.now() - began };
    } catch (error) {
      throw asRefused(error);
    }
  }

  /**
   * Ask for the latest rule set, and install it if it is another one. Never throws for what the network, the server or the storage does.
   * @param {{signal?: AbortSignal, allowOlder?: boolean}} [options] `allowOlder`: take a version below the installed one
   * @returns {Promise<object>} state, and what answers after it; `bytes` are those received
   */
  update(options = {}) {
    return inTurn(() => this.#update(options));
  }

  async #update({ signal, allowOlder = false }) {
    const began = performance.now(), receiver = this.#receiver.counting(signal);
    let state = "current", reason = null;
    try {
      state = await this.#brought(receiver, allowOlder);
    } catch (error) {
      const { code, detail } = asRefused(error);
      state = code === "unreachable" ? code : "refused";
      reason = { code, detail };
    }
    const { ruleSet } = this.#active ?? {};
    return {
      state, version: ruleSet?.version ?? null, digest: ruleSet?.digest ?? null, ...(this.#active && this.#answering()), ...(reason && { reason }),
      bytes: receiver.bytes, milliseconds: performance.now() - began,
    };
  }

  #answering() {
    const { entry, ruleSet, proof, trust } = this.#active;
    return { ruleSet, proof, trust, notice: entry.notice, bytes: ruleSet.bytes.length };
  }

  /** The last state that was written whole. A copy that cannot be read is no reason to believe that nothing is installed. */
  async #load() {
    const read = [];
    let failed = null;
    for (const copy of COPIES) {
      try {
        const bytes = await this.#store.get(copy);
        if (bytes) read.push({ sequence: 0, ...(await unsealed(bytes)), copy });
      } catch (error) {
        failed = error;
      }
    }
    const [best = { sequence: 0 }, spare] = read.sort((a, b) => b.sequence - a.sequence);
    if (failed && !best.sequence) throw failed;
    return { ...best, damaged: read.length > 0 && !best.sequence, alone: spare?.sequence !== best.sequence };
  }

  /** Replace the state: first the copy that is not in use. Once that is written the new state holds; the other copy becomes a spare. */
  async #save(state, changes) {
    const { copy, damaged, alone, ...kept } = state, next = { ...kept, ...changes, sequence: state.sequence + 1 };
    const record = await sealed(next), [first, second] = copy === COPIES[0] ? [COPIES[1], copy] : COPIES;
    await this.#put(first, record);
    await this.#store.put(second, record).catch(() => {});
    return { ...next, copy: first };
  }

  async #put(name, bytes) {
    try {
      await this.#store.put(name, bytes);
    } catch (error) {
      if (!/quota|ENOSPC|EDQUOT/i.test(`${error?.name} ${error?.code}`)) throw error;
      throw new BundleRefused("storage-full", `this device has no room for ${bytes.length} bytes; free some storage and try again`);
    }
  }

  /** Who is trusted: what was compiled in, and the newer lists that were accepted since. */
  #trusted({ keys, revoked, pinned }) {
    const pins = this.#pins, kept = keys && Trust.read(keys, this.#verify).remembering(revoked);
    if (!pins) return kept ?? null;
    if (!kept || !pinned) return pins;
    return pins.serial > kept.serial ? pins.remembering(kept.revoked) : kept.remembering(pins.revoked);
  }

  /** Make the installed bundle answer, or the one before it where that one is damaged; why, or null. */
  async #open(state) {
    this.#active = null;
    if (!state.current) {
      if (state.damaged) throw new BundleRefused("damaged", "the record of what is installed is damaged; connect, so that it can be installed anew");
      throw new BundleRefused("nothing-installed", "no rule set is installed on this device yet; connect once, so that one can be fetched");
    }
    const trust = this.#trusted(state);
    let reason = null;
    for (const entry of [state.current, state.previous].filter(Boolean)) {
      try {
        const bytes = await this.#store.get(nameOf(entry.digest));
        if (!bytes) throw new BundleRefused("damaged", `rule set ${entry.version} is no longer on this device; connect, so that it can be fetched`);
        const ruleSet = await openBundle(bytes, { seal: entry.seal, trust, digest: entry.digest });
        this.#active = { entry, ruleSet, trust, proof: await this.#proved(ruleSet) };
        return { reason };
      } catch (error) {
        const { code, detail } = asRefused(error);
        reason ??= { code, detail };
      }
    }
    throw new BundleRefused(reason.code, reason.detail);
  }

  /** Prove one case of each check where all agreed before on this engine, otherwise all. */
  async #proved(ruleSet) {
    const proofs = await this.#proofs(), { cases } = ruleSet.data;
    if (proofs[ruleSet.digest] === this.#proofKey() && !prove(ruleSet, undefined, oneOfEach(ruleSet)).wrong.length) {
      return { agree: cases.length, of: cases.length, wrong: [] };
    }
    const proof = await provedWhole(ruleSet);
    if (!proof.wrong.length) await this.#remember(ruleSet.digest).catch(() => {});      // then all are proved again next time
    return proof;
  }

  #proofKey() {
    return `${RUNTIME} ${this.#engine}`;
  }

  async #proofs() {
    const bytes = await this.#store.get(PROOFS);
    return (bytes && (await unsealed(bytes))) || {};
  }

  async #remember(digest) {
    const { [digest]: _, ...others } = await this.#proofs();
    const kept = Object.fromEntries(Object.entries(others).slice(1 - PROOFS_KEPT));
    await this.#store.put(PROOFS, await sealed({ ...kept, [digest]: this.#proofKey() }));
  }

  /** Remove the bundles that no state names: leftovers of interrupted updates, and the one before the previous one. */
  async #sweep({ current, previous }) {
    const kept = [current, previous].filter(Boolean).map(({ digest }) => nameOf(digest));
    try {
      for (const name of await this.#store.names()) if (name.startsWith(BUNDLE) && !kept.includes(name)) await this.#store.remove(name);
    } catch {
      // room that is not freed now is freed after the next update
    }
  }

  /** The steps of an update; "installed", "updated" or "current". */
  async #brought(receiver, allowOlder) {
    const state = await this.#load();
    let unusable = null;        // why the installed one does not answer
    if (this.#active?.entry.digest !== state.current?.digest) unusable = await this.#open(state).then(({ reason }) => reason, asRefused);
    const latest = await receiver.latest(), old = this.#trusted(state), trust = await this.#renewed(receiver, old);
    try {
      const { digest } = this.#active?.entry ?? {};
      if (!allowOlder) await this.#refuseOlder(latest, state, trust, unusable);
      if (digest === latest.digest) await this.#confirmed(receiver, state, latest, trust, trust !== old);
      else if (await this.#installed(receiver, state, latest, trust)) return digest ? "updated" : "installed";
      return "current";
    } catch (error) {
      await this.#load().then((kept) => this.#sweep(kept), () => {});     // as it is now: a write that failed may have been done
      if (trust !== old) await this.#revoke(state, trust);
      throw error;
    }
  }

  /** A version below the installed one is an old seal played again, unless the keys of the installed one were revoked. */
  async #refuseOlder({ version, digest }, { current }, trust, unusable) {
    if (!current || digest === current.digest || inOrder(version, current.version) > 0) return;
    const refusal = unusable ?? (await refusalOf(this.#active, trust));
    if (refusal?.code === "revoked-key") return;
    throw new BundleRefused("not-newer", `version ${version} is offered where ${current.version} is installed; one above it is right`);
  }

  /** The trust after the publisher's key list was looked at: a newer one that a trusted key has sealed takes the place of the old one. */
  async #renewed(receiver, trust) {
    const list = await receiver.bytesOf("keys.json"), offered = Trust.read(list, this.#verify);
    // A development key is made anew at every start of a service and vouches for nothing: what follows it is a first installation again.
    if (!trust || (trust.development && !this.#pins && JSON.stringify(offered.list) !== JSON.stringify(trust.list))) {
      return Trust.first(list, await receiver.seal("keys.seal.json"), this.#verify);
    }
    return offered.serial > trust.serial ? trust.succeeding(list, await receiver.seal("keys.seal.json")) : trust;
  }

  #kept(trust) {
    return { keys: trust.list, revoked: [...trust.revoked], pinned: Boolean(this.#pins) };
  }

  /** The installed bundle is the latest one: keep its newest seal and what is said of its retirement. */
  async #confirmed(receiver, state, latest, trust, renewed) {
    const active = this.#active, entry = { ...active.entry, notice: latest.notice };
    if (renewed) {
      entry.seal = await receiver.seal(latest.seal);
      await trust.check(active.ruleSet.bytes, entry.seal);
    }
    if (renewed || state.alone || JSON.stringify(entry) !== JSON.stringify(state.current)) {
      state = await this.#save(state, { current: entry, ...this.#kept(trust) });
    }
    this.#active = { ...active, entry, trust };
    await this.#sweep(state);
  }

  /** Fetch, write, verify, prove and only then install; false where the server says that there is nothing else than what is installed. */
  async #installed(receiver, state, latest, trust) {
    const active = this.#active, seal = await receiver.seal(latest.seal), bytes = await receiver.bundle(latest, active?.entry.digest);
    if (!bytes) return false;
    const ruleSet = await openBundle(bytes, { seal, trust, digest: latest.digest });
    const { version, checkNames, blocked } = ruleSet;
    if (version !== latest.version) throw new BundleRefused("wrong-version", `version ${latest.version} was announced; the bundle is ${version}`);
    await this.#put(nameOf(latest.digest), bytes);
    const written = await this.#store.get(nameOf(latest.digest));
    if (!written || (await digestOf(written)) !== latest.digest) throw new Error("it does not give back what was written");
    const proof = await provedWhole(ruleSet);
    if (proof.wrong.length && (active || checkNames.every((check) => blocked.has(check)))) {
      const [{ id, check }] = proof.wrong;
      throw new BundleRefused("disagrees", `${proof.agree} of ${proof.of} worked cases of rule set ${version} agree on this device; ` +
        `the first that does not is ${id} of ${check}`);
    }
    const entry = { version, digest: ruleSet.digest, seal, notice: latest.notice };
    const next = await this.#save(state, { current: entry, previous: active?.entry, ...this.#kept(trust) });
    this.#active = { entry, ruleSet, trust, proof };
    if (!proof.wrong.length) await this.#remember(ruleSet.digest).catch(() => {});
    await this.#sweep(next);
    return true;
  }

  /** A newer key list came, and no bundle that it vouches for: it is kept where the installed one stands, or is revoked. */
  async #revoke(state, trust) {
    const active = this.#active, refusal = active && (await refusalOf(active, trust));
    if (!state.keys || (refusal && refusal.code !== "revoked-key")) return;
    const next = await this.#save(state, this.#kept(trust));
    if (active) this.#active = { ...active, trust };
    if (!refusal) return;
    await this.#open(next).catch(() => {});     // the one before it, where its seal stands
    throw refusal;
  }
}

const refusalOf = ({ entry, ruleSet }, trust) => trust.check(ruleSet.bytes, entry.seal).then(() => null, asRefused);

/** Prove all cases, with pauses. */
async function provedWhole(ruleSet) {
  const whole = { agree: 0, of: 0, wrong: [] };
  let since = performance.now();
  for (const one of ruleSet.data.cases) {
    const { agree, of, wrong } = prove(ruleSet, [one.check], [one]);
    whole.agree += agree;
    whole.of += of;
    whole.wrong.push(...wrong);
    if (performance.now() - since < PAUSED_AFTER_MILLISECONDS) continue;
    await pause();
    since = performance.now();
  }
  return whole;
}

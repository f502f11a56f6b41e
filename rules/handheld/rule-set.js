/** A rule set that answers: bundle in, request in, answer out. */
import { answerWriter } from "./answer.js";
import { digest, digestOf } from "./canonical.js";
import { compileIntake } from "./intake.js";
import { give, take } from "./machine.js";
import { modelOf } from "./model.js";
import { planOf } from "./plan.js";
import { POINTS, PointSet, SCORE_LIMIT } from "./points.js";
import { InputProblems, refuse } from "./problems.js";

export const LANGUAGE = 1;      // the rule-language version this engine speaks
const PLANS_KEPT = 128;         // compiled signatures kept per check, 0.2 MB each; the oldest goes first
const EDGE = 1 - 1 / POINTS;    // the outermost sample of a rectangular input, as a share of its half-width
const NOTHING = [];

/** The bundle was written for another version of the rule language. */
export class UnknownLanguage extends Error {}

/** The rule set has no check of this name. */
export class UnknownCheck extends Error {}

/** The check gave another answer than its rule set records for a worked case: it must not be used on this device. */
export class CheckBlocked extends Error {}

const isSpread = (value) => value !== null && typeof value === "object";

/** One check of one rule set: validates, samples, runs, and hands the numbers to the answer writer. */
class Question {
  constructor(ruleSet, name) {
    this.model = modelOf(ruleSet.data, name);
    this.intake = compileIntake(ruleSet.data, name);
    this.write = answerWriter(ruleSet, this.model);
    this.points = ruleSet.points;
    this.plans = new Map();
    this.ranges = this.model.slots.map((slot) => range(slot, ruleSet.data.units));
  }

  plan(intake) {
    const filled = [];
    intake.sizes.forEach((size, axis) => { if (size) filled.push(axis); });
    const key = `${intake.states.join()};${filled.join()}`;
    let plan = this.plans.get(key);
    if (!plan) {
      if (this.plans.size >= PLANS_KEPT) this.plans.delete(this.plans.keys().next().value);
      this.plans.set(key, (plan = planOf(this.model, intake.states, new Set(filled))));
    }
    return plan;
  }

  answer(body, language) {
    const intake = this.intake(body), plan = this.plan(intake);
    let results, intervals = null, beyond = NOTHING, lent = NOTHING;
    if (plan.exact) {
      results = plan.run(intake);
    } else {
      this.requireDimensions(intake, plan);
      const { values, sampled, forms, outside } = this.sample(intake, plan);
      const uniforms = plan.uniforms.map((_, k) => this.points.coordinates("u", forms.length + k));
      const drawn = this.points.drawn(forms + "r".repeat(uniforms.length));
      results = plan.run({ values, sampled, uniforms, drawn, sizes: intake.sizes });
      intervals = plan.intervals(results, drawn);
      beyond = outside;
      lent = sampled;
    }
    const answer = this.write(intake, plan, results, intervals, beyond, digest(body), language);
    for (const array of lent) if (array) give(array);
    return answer;
  }

  /** Throw InputProblems naming the first uncertain number for which the point set has no dimension left. */
  requireDimensions({ values }, { sampled, uniforms }) {
    const left = this.points.components.length - uniforms.length;
    const spreads = sampled.flatMap((index) => [values[index]].flat().flatMap((value, item) => (isSpread(value) ? [[index, item]] : [])));
    if (spreads.length <= left) return;
    const [index, item] = spreads[left], pointer = this.model.slots[index].pointer.replace("*", item);
    const problems = [];
    refuse(problems, pointer, "too-many-uncertain", `${spreads.length} numbers are given with a spread; at most ${left} can be weighed together here: give some of them alone`);
    throw new InputProblems(problems);
  }

  /** Best estimates, sampled arrays, forms of the dimensions used, slots beyond their range; dimensions are handed out in slot order, then item order. */
  sample(intake, plan) {
    const values = intake.values.slice(), sampled = new Array(values.length).fill(null), outside = [];
    let forms = "";
    const drawnFrom = (spread, index, into) => {
      const { form, value, size } = spread, points = this.points.coordinates(form, forms.length);
      for (let i = 0; i < POINTS; i++) into[i] = points[i] * size + value;
      forms += form;
      if (this.leavesRange(spread, index) && !outside.includes(index)) outside.push(index);
      return into;
    };
    for (const index of plan.sampled) {
      const given = values[index];
      if (!Array.isArray(given)) {
        sampled[index] = drawnFrom(given, index, take(POINTS));
        values[index] = given.value;
        continue;
      }
      const { kind } = this.model.slots[index];
      if (kind === "text") continue;
      if (kind === "switch") {
        values[index] = Uint8Array.from(given, (v) => (v ? 1 : 0));
        continue;
      }
      values[index] = Float64Array.from(given, (v) => (v === null ? NaN : isSpread(v) ? v.value : v));
      if (!given.some(isSpread)) continue;
      const rows = (sampled[index] = take(given.length * POINTS));
      given.forEach((v, k) => {
        const row = rows.subarray(k * POINTS, (k + 1) * POINTS);
        if (isSpread(v)) drawnFrom(v, index, row);
        else row.fill(v ?? NaN);
      });
    }
    return { values, sampled, forms, outside };
  }

  leavesRange({ form, value, size }, index) {
    const reach = size * (form === "n" ? SCORE_LIMIT : EDGE), least = value - reach, most = value + reach;
    const [low, high, lowExcluded, highExcluded] = this.ranges[index];
    return least < low || most > high || (lowExcluded && least === low) || (highExcluded && most === high);
  }
}

/** Bounds in SI: [least allowed, most allowed, lower bound excluded, upper bound excluded]. */
function range({ kind, field }, units) {
  if (kind !== "number") return null;
  const { factor } = units[field.unit], low = field.least ?? field.above, high = field.most ?? field.below;
  return [low === undefined ? -Infinity : low * factor, high === undefined ? Infinity : high * factor, "above" in field, "below" in field];
}

/** A released rule set. */
export class RuleSet {
  /** @param {Uint8Array} bytes the exact bytes of a bundle @param {string} [known] their digest, where it was found already */
  constructor(bytes, known) {
    this.bytes = bytes;
    this.digest = known ?? digestOf(bytes);
    this.data = JSON.parse(new TextDecoder("utf-8", { fatal: true }).decode(bytes));
    if (this.data.language !== LANGUAGE) {
      throw new UnknownLanguage(`this bundle is written in rule language ${this.data.language}; this engine speaks ${LANGUAGE}`);
    }
    this.version = this.data.version;
    this.points = new PointSet(this.data.tables.lattice.data.component);
    this.blocked = new Map();
    this.questions = new Map();
  }

  /** Names of the checks, sorted. */
  get checkNames() {
    return Object.keys(this.data.checks).sort();
  }

  /** Give back the memory of what was compiled for earlier questions; the next ones take a little longer. */
  forget() {
    this.questions.clear();
  }

  /**
   * Answer one check.
   * @param {string} check @param {object} body the request's JSON object, not changed @param {"en" | "es"} [language]
   * @returns {object} the answer document: to be read, not changed; numbers are in the units their keys name
   * @throws {InputProblems} for a body that is not valid @throws {UnknownCheck} @throws {CheckBlocked}
   */
  answer(check, body, language = "en") {
    if (this.blocked.has(check)) throw new CheckBlocked(`${check}: ${this.blocked.get(check)}`);
    let question = this.questions.get(check);
    if (!question) {
      if (!Object.hasOwn(this.data.checks, check)) throw new UnknownCheck(`rule set ${this.version} has no check ${check}; it has ${this.checkNames.join(", ")}`);
      this.questions.set(check, (question = new Question(this, check)));
    }
    return question.answer(body, language);
  }
}

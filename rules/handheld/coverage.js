/**
 * Coverage intervals and probabilities from samples, with a control variate: the same estimates in the same order of operations as
 * `precontact_rules/coverage.py`, which says why.
 */
import { cos, exp, foldSum, normalScore, sin } from "./exact-math.js";
import { cholesky, solved } from "./least-squares.js";
import { POINTS } from "./points.js";
import { TAIL, tails } from "./tails.js";

const ENDS = [0.025, 0.975];
const NEAR = 25, NODE_COUNT = 64, NORMAL_REACH = 6, BEND = 1.7, TINY = 1e-30;
const ABOUT = [-1, -0.5, 0, 0.5, 1];
const LOW_PLACE = POINTS * ENDS[0] - 0.5, HIGH_PLACE = POINTS * ENDS[1] - 0.5;
const LOW_AT = Math.trunc(LOW_PLACE), HIGH_AT = Math.trunc(HIGH_PLACE), TOP = POINTS - 1;
const NO_ENDS = [NaN, NaN];
const NODES = Float64Array.from({ length: NODE_COUNT }, (_, i) => i + 0.5);

/** Weights of the outer order statistics whose sum is the fitted cubic at 2.5 %. */
const TAIL_WEIGHTS = (() => {
  const middle = normalScore(ENDS[0]);
  const scores = Float64Array.from({ length: TAIL }, (_, i) => normalScore((i + 0.5) / POINTS) - middle);
  const powers = [scores.map(() => 1), scores, scores.map((s) => s * s), scores.map((s) => s * s * s)];
  const c = solved(cholesky(powers.map((a) => powers.map((b) => foldSum(a.map((x, i) => x * b[i]))))), [1, 0, 0, 0]);
  return scores.map((_, i) => powers[0][i] * c[0] + powers[1][i] * c[1] + powers[2][i] * c[2] + powers[3][i] * c[3]);
})();

const low = new Float64Array(TAIL), high = new Float64Array(TAIL), weighted = new Float64Array(TAIL);
const stand = new Float64Array(POINTS), bend = new Float64Array(POINTS);
const weights = new Float64Array(NODE_COUNT), terms = new Float64Array(NODE_COUNT), about = new Float64Array(ABOUT.length);

/** [low, high] of a result that rests on one uncertain input alone: on its own the points are even, so plain ends are exact. */
export function evenEnds(x) {
  if (!tails(x, low, high)) return NO_ENDS;
  return [low[LOW_AT] + (low[LOW_AT + 1] - low[LOW_AT]) * (LOW_PLACE - LOW_AT),
    high[TOP - HIGH_AT] + (high[TOP - HIGH_AT - 1] - high[TOP - HIGH_AT]) * (HIGH_PLACE - HIGH_AT)];
}

/** [low, high] of the probabilistically symmetric 95 % interval of 1-d samples; NaN where a sample has no value. */
export function coverageEnds(x, drawn) {
  if (drawn.forms.length < 2) return evenEnds(x);
  if (!tails(x, low, high)) return NO_ENDS;
  const least = low[0], most = high[0], ends = smoothEnds(), line = new Line(x, drawn);
  if (line.usable) correct(ends, line, drawn);
  return ends.map((end) => between(end, least, most));
}

/** Kept within two bounds; of two equal ones the value itself, whatever the sign of its zero. */
function between(value, least, most) {
  const raised = least > value ? least : value;
  return most < raised ? most : raised;
}

/** A cubic in the normal score fitted to the tails in `low` and `high`, kept near the plain order statistics. */
function smoothEnds() {
  return [low, high].map((tail, upper) => {
    for (let i = 0; i < TAIL; i++) weighted[i] = tail[i] * TAIL_WEIGHTS[i];
    const outer = tail[LOW_AT - NEAR], inner = tail[LOW_AT + NEAR], fitted = foldSum(weighted);
    return upper ? between(fitted, inner, outer) : between(fitted, outer, inner);
  });
}

/** Move the ends by what the same estimate of the linear stand-in is wrong by. */
function correct(ends, line, drawn) {
  line.values(drawn);
  tails(stand, low, high);
  const near = smoothEnds(), step = Math.PI / line.reach, guess = 0.5 * (near[1] - near[0]), at = guess * step;
  characteristic(line, step);
  for (let i = 0; i < NODE_COUNT; i++) terms[i] = sin(at * NODES[i]) * weights[i];
  const below = foldSum(terms);
  for (let i = 0; i < NODE_COUNT; i++) terms[i] = cos(at * NODES[i]) * (weights[i] * NODES[i]);
  const slope = foldSum(terms) * step;
  if (!(slope > 0)) return;
  // Newton's step to the upper quantile, with the curvature of a normal density as the second-order term
  let move = ((ENDS[1] - 0.5) * Math.PI - below) / slope;
  move += move * move * guess / (2 * line.variance);
  const end = guess + move;
  ends[0] += -end - near[0];
  ends[1] += end - near[1];
}

/**
 * Probability of a comparison from its truth per sample and the difference of its two sides; `positive`: it holds where the
 * difference is above 0. NaN where a side has no value.
 */
export function share(holds, difference, positive, drawn) {
  let count = 0, finite = 0;
  for (let i = 0; i < POINTS; i++) {
    count += holds[i];
    finite += difference[i] - difference[i];
  }
  if (finite !== 0) return NaN;
  const plain = count / POINTS;
  if (count === 0 || count === POINTS || drawn.forms.length < 2) return plain;
  const line = new Line(difference, drawn);
  if (!line.usable) return plain;
  line.values(drawn);
  for (let i = 0; i < POINTS; i++) {
    const b = difference[i] - stand[i] - line.origin;
    bend[i] = b * b;
  }
  const width = BEND * Math.sqrt(foldSum(bend) / POINTS);
  if (!(width < Infinity)) return plain;
  const step = Math.PI / line.reach;
  characteristic(line, step);
  let counted = 0;
  ABOUT.forEach((a, k) => {
    const place = between(width * a - line.origin, -line.reach, line.reach), at = place * step;
    for (let i = 0; i < NODE_COUNT; i++) terms[i] = sin(at * NODES[i]) * weights[i];
    about[k] = 0.5 + foldSum(terms) / Math.PI;
    for (let i = 0; i < POINTS; i++) if (stand[i] <= place) counted++;
  });
  const correction = foldSum(about) / ABOUT.length - counted / (POINTS * ABOUT.length);
  return between(positive ? plain - correction : plain + correction, 0, 1);
}

/** A linear stand-in, centred on 0: slopes, variance, and how far it reaches. */
class Line {
  constructor(x, drawn) {
    const [origin, slopes] = drawn.slopes(x);
    this.origin = origin;
    this.slopes = slopes;
    this.flat = [];
    this.normal = this.variance = this.reach = 0;
    slopes.forEach((slope, d) => {
      if (drawn.forms[d] === "n") {
        this.normal += slope * slope;
      } else {
        this.variance += slope * slope / 3;
        this.flat.push(slope);
        this.reach += Math.abs(slope);
      }
    });
    this.variance += this.normal;
    this.reach += NORMAL_REACH * Math.sqrt(this.normal);
    // It spreads at all, by amounts whose squares a double can hold.
    this.usable = this.variance > 0 && this.variance < Infinity && this.reach < Infinity;
  }

  /** Leaves the stand-in on the points in `stand`. */
  values(drawn) {
    this.slopes.forEach((slope, d) => {
      const c = drawn.coordinates[d];
      if (d) for (let i = 0; i < POINTS; i++) stand[i] += c[i] * slope;
      else for (let i = 0; i < POINTS; i++) stand[i] = c[i] * slope;
    });
  }
}

/** Leaves the characteristic function at the nodes, divided by the node number, in `weights`. */
function characteristic(line, step) {
  const normal = -0.5 * line.normal;
  for (let i = 0; i < NODE_COUNT; i++) {
    const frequency = step * NODES[i];
    let weight = normal ? exp(normal * (frequency * frequency)) / NODES[i] : 1 / NODES[i];
    for (const slope of line.flat) {
      if (slope === 0) continue;
      const angle = slope * frequency || TINY;      // sin x / x is exactly 1 there
      weight *= sin(angle) / angle;
    }
    weights[i] = weight;
  }
}

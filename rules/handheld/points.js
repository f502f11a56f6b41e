/**
 * The fixed point set on which uncertain inputs are propagated: point i of dimension j of a rank-1 lattice of N points is
 * ((i * z_j) mod N + 1/2) / N.
 */
import { foldSum, normalScore } from "./exact-math.js";
import { cholesky, solved } from "./least-squares.js";

export const POINTS = 4096;
export const SCORE_LIMIT = normalScore((POINTS - 0.5) / POINTS);
const SUBSET = 512;      // slopes are fitted on so many of the points

// Triangular numbers visit the points without the lattice's own regularity.
const CHOSEN = Uint16Array.from({ length: SUBSET }, (_, k) => (k * (k + 1) / 2) % POINTS);

/** Uniform, symmetric and normal coordinates per dimension, made when first used. */
export class PointSet {
  /** @param {number[]} components of the lattice, one for each dimension */
  constructor(components) {
    this.components = components;
    this.made = new Map();
    this.scores = null;
  }

  /** Coordinates of a dimension: "u" between 0 and 1, "r" between -1 and 1, "n" standard normal. */
  coordinates(form, dimension) {
    return this.kept(form + dimension, () => {
      const z = this.components[dimension], scores = form === "n" && this.normalScores();
      return Float64Array.from({ length: POINTS }, (_, i) => {
        const place = (i * z) % POINTS, u = (place + 0.5) / POINTS;
        return scores ? scores[place] : form === "u" ? u : 2 * u - 1;
      });
    });
  }

  /** The Drawn for dimensions 0, 1, ... of these forms, made once for each tuple of forms. @param {string} forms */
  drawn(forms) {
    return this.kept(forms + "!", () => new Drawn([...forms].map((form, d) => this.coordinates(form, d)), forms));
  }

  normalScores() {
    return (this.scores ??= Float64Array.from({ length: POINTS }, (_, i) => normalScore((i + 0.5) / POINTS)));
  }

  kept(key, make) {
    let found = this.made.get(key);
    if (!found) this.made.set(key, (found = make()));
    return found;
  }
}

/** The coordinates on which one request's uncertain quantities were drawn, ready for fitting slopes by least squares. */
export class Drawn {
  constructor(coordinates, forms) {
    this.coordinates = coordinates;
    this.forms = forms;
    this.chosen = new Float64Array(SUBSET);
    this.product = new Float64Array(SUBSET);
    if (forms.length < 2) return;
    this.means = [];
    this.subset = coordinates.map((all) => {
      const column = Float64Array.from(CHOSEN, (i) => all[i]), mean = foldSum(column) / SUBSET;
      this.means.push(mean);
      return column.map((c) => c - mean);
    });
    this.factor = cholesky(this.subset.map((a) => this.subset.map((b) => foldSum(a.map((x, i) => x * b[i])))));
  }

  /**
   * [value at the origin, slopes] of the linear function of the coordinates that fits the samples best on the subset.
   * @param {Float64Array} x @returns {[number, number[]]}
   */
  slopes(x) {
    const { chosen, product, subset, means } = this;
    for (let i = 0; i < SUBSET; i++) chosen[i] = x[CHOSEN[i]];
    let centre = foldSum(chosen) / SUBSET;
    for (let i = 0; i < SUBSET; i++) chosen[i] -= centre;
    const slopes = solved(this.factor, subset.map((column) => {
      for (let i = 0; i < SUBSET; i++) product[i] = column[i] * chosen[i];
      return foldSum(product);
    }));
    slopes.forEach((slope, d) => {
      centre -= means[d] * slope;
    });
    return [centre, slopes];
  }
}

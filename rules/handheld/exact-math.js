/**
 * Arithmetic that gives the same bits in every runtime: the other half of `precontact_rules/exact_math.py`, with the same constants in the same
 * order. IEEE 754 fixes + - * / and sqrt; exp, ln, sin, cos are built from those alone.
 *
 * Sources: range reduction and series are textbook (Abramowitz & Stegun 4.2.1, 4.1.29, 4.3.65-66); the normal score is Wichura,
 * Algorithm AS 241, Applied Statistics 37 (1988) 477-484.
 */

// ln 2 and pi / 2 in parts whose first ones have trailing zero bits, so that a whole multiple of them is exact.
const LN2_HIGH = 0.6931471803691238, LN2_LOW = 1.9082149292705877e-10, INVERSE_LN2 = 1.4426950408889634;
const HALF_PI_1 = 1.5707963267341256, HALF_PI_2 = 6.077100506303966e-11, HALF_PI_3 = 2.0222662487959506e-21;
const TWO_OVER_PI = 0.6366197723675814, ANGLE_LIMIT = 1048576, SQRT_HALF = 0.7071067811865476;

const factorial = (n) => (n < 2 ? 1 : n * factorial(n - 1));
const series = (count, term) => Float64Array.from({ length: count }, (_, n) => term(n));
const sign = (n) => (n % 2 ? -1 : 1);
const EXP_SERIES = series(14, (n) => 1 / factorial(n));
const LN_SERIES = series(11, (n) => 1 / (2 * n + 1));
const SIN_SERIES = series(9, (n) => sign(n) / factorial(2 * n + 1));
const COS_SERIES = series(9, (n) => sign(n) / factorial(2 * n));

// 2 to the power i - 1023
const POWERS = new Float64Array(2047);
POWERS[1023] = 1;
for (let i = 1024; i < 2047; i++) POWERS[i] = POWERS[i - 1] * 2;
for (let i = 1022; i > 0; i--) POWERS[i] = POWERS[i + 1] / 2;

const word = new Float64Array(1);
const halves = new Uint32Array(word.buffer);     // the second half holds sign and exponent: every engine in use is little-endian

function horner(coefficients, z) {
  let i = coefficients.length - 1, total = coefficients[i];
  while (--i >= 0) total = total * z + coefficients[i];
  return total;
}

/** e to the x. Overflow gives infinity, underflow 0, NaN gives NaN. @param {number} x @returns {number} */
export function exp(x) {
  if (x !== x) return x;
  x = x > 800 ? 800 : x < -800 ? -800 : x;
  const k = Math.floor(x * INVERSE_LN2 + 0.5), y = horner(EXP_SERIES, (x - k * LN2_HIGH) - k * LN2_LOW);
  if (k > 1000) return y * POWERS[2023] * POWERS[k + 23];
  return k < -1000 ? y * POWERS[k + 1223] * POWERS[823] : y * POWERS[k + 1023];     // below the normal range: rounded once, at the end
}

/** Natural logarithm. 0 gives minus infinity, negative gives NaN. @param {number} x @returns {number} */
export function ln(x) {
  if (!(x > 0 && x < Infinity)) return x === 0 ? -Infinity : x === Infinity ? Infinity : NaN;
  let e = -1022;
  if (x < 2.2250738585072014e-308) {      // below the normal range
    x *= 18014398509481984;
    e -= 54;
  }
  word[0] = x;
  e += halves[1] >>> 20;
  halves[1] = (halves[1] & 0xfffff) | 0x3fe00000;
  let m = word[0];
  if (m < SQRT_HALF) {
    m *= 2;
    e -= 1;
  }
  const s = (m - 1) / (m + 1);
  return e * LN2_HIGH + (2 * s * horner(LN_SERIES, s * s) + e * LN2_LOW);
}

let sine = 0, cosine = 0;

/** Leaves sine and cosine of x in `sine` and `cosine`. */
function turn(x) {
  const k = Math.floor(x * TWO_OVER_PI + 0.5), r = ((x - k * HALF_PI_1) - k * HALF_PI_2) - k * HALF_PI_3, z = r * r;
  const q = k - 4 * Math.floor(k * 0.25), s = r * horner(SIN_SERIES, z), c = horner(COS_SERIES, z);
  sine = q === 0 ? s : q === 1 ? c : q === 2 ? -s : -c;
  cosine = q === 0 ? c : q === 1 ? -s : q === 2 ? -c : s;
}

const inside = (x) => x >= -ANGLE_LIMIT && x <= ANGLE_LIMIT;

/** Sine of x in radian; beyond 2^20 rad there is no value. @param {number} x @returns {number} */
export function sin(x) {
  if (!inside(x)) return NaN;
  turn(x);
  return sine;
}

/** Cosine of x in radian; beyond 2^20 rad there is no value. @param {number} x @returns {number} */
export function cos(x) {
  if (!inside(x)) return NaN;
  turn(x);
  return cosine;
}

let scratch = new Float64Array(4096);

/**
 * The sum of n numbers from `start` on, in the stated order: the upper half is added onto the lower until one is left; nothing sums to 0.
 * @param {Float64Array} x @param {number} [start] @param {number} [n] @returns {number}
 */
export function foldSum(x, start = 0, n = x.length) {
  if (n < 2) return n ? x[start] : 0;
  let half = (n + 1) >> 1;
  if (scratch.length < half) scratch = new Float64Array(half);
  const s = scratch, rest = n - half;
  for (let i = 0; i < rest; i++) s[i] = x[start + i] + x[start + half + i];
  if (rest < half) s[rest] = x[start + rest];
  for (n = half; n > 1; n = half) {
    half = (n + 1) >> 1;
    for (let i = 0, most = n - half; i < most; i++) s[i] += s[half + i];
  }
  return s[0];
}

const CENTRE_TOP = [3.3871328727963666080, 1.3314166789178437745e2, 1.9715909503065514427e3, 1.3731693765509461125e4,
  4.5921953931549871457e4, 6.7265770927008700853e4, 3.3430575583588128105e4, 2.5090809287301226727e3];
const CENTRE_BOTTOM = [1, 4.2313330701600911252e1, 6.8718700749205790830e2, 5.3941960214247511077e3,
  2.1213794301586595867e4, 3.9307895800092710610e4, 2.8729085735721942674e4, 5.2264952788528545610e3];
const NEAR_TOP = [1.42343711074968357734, 4.63033784615654529590, 5.76949722146069140550, 3.64784832476320460504,
  1.27045825245236838258, 2.41780725177450611770e-1, 2.27238449892691845833e-2, 7.74545014278341407640e-4];
const NEAR_BOTTOM = [1, 2.05319162663775882187, 1.67638483018380384940, 6.89767334985100004550e-1,
  1.48103976427480074590e-1, 1.51986665636164571966e-2, 5.47593808499534494600e-4, 1.05075007164441684324e-9];
const FAR_TOP = [6.65790464350110377720, 5.46378491116411436990, 1.78482653991729133580, 2.96560571828504891230e-1,
  2.65321895265761230930e-2, 1.24266094738807843860e-3, 2.71155556874348757815e-5, 2.01033439929228813265e-7];
const FAR_BOTTOM = [1, 5.99832206555887937690e-1, 1.36929880922735805310e-1, 1.48753612908506148525e-2,
  7.86869131145613259100e-4, 1.84631831751005468180e-5, 1.42151175831644588870e-7, 2.04426310338993978564e-15];

/** The standard normal quantile at 0 < p < 1. @param {number} p @returns {number} */
export function normalScore(p) {
  const q = p - 0.5;
  if (Math.abs(q) <= 0.425) {
    const r = 0.180625 - q * q;
    return q * horner(CENTRE_TOP, r) / horner(CENTRE_BOTTOM, r);
  }
  const r = Math.sqrt(-ln(q < 0 ? p : 1 - p));
  const score = r <= 5 ? horner(NEAR_TOP, r - 1.6) / horner(NEAR_BOTTOM, r - 1.6) : horner(FAR_TOP, r - 5) / horner(FAR_BOTTOM, r - 5);
  return q < 0 ? -score : score;
}

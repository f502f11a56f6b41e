"""Arithmetic that gives the same bits on every machine and in every runtime.

IEEE 754 fixes + - * / and sqrt; it does not fix exp, ln, sin, cos, whose library versions differ in the last place.  Here they are built
from the exact operations alone, in one stated order, twice: for one float and for arrays.  The JavaScript runtime repeats them with
the same constants.  Errors are below 4 units in the last place (tests/rules/test_exact_math.py measures them against mpmath-grade references).

Sources: range reduction and series are textbook (Abramowitz & Stegun 4.2.1, 4.1.29, 4.3.65-66); the normal score is
Wichura, Algorithm AS 241, Applied Statistics 37 (1988) 477-484.
"""
import math

import numpy as np

INF = math.inf
NAN = math.nan

# ln 2 in two parts: the first has 33 trailing zero bits, so that k * LN2_HIGH is exact for every |k| < 2**20.
LN2_HIGH = 0.6931471803691238
LN2_LOW = 1.9082149292705877e-10
INVERSE_LN2 = 1.4426950408889634

# pi / 2 in three parts of 33 bits each, for the same reason.
HALF_PI_1 = 1.5707963267341256
HALF_PI_2 = 6.077100506303966e-11
HALF_PI_3 = 2.0222662487959506e-21
TWO_OVER_PI = 0.6366197723675814
ANGLE_LIMIT = 1048576.0  # beyond 2**20 rad the reduction above loses bits: no value

EXP_SERIES = tuple(1.0 / math.factorial(n) for n in range(14))
LN_SERIES = tuple(1.0 / (2 * n + 1) for n in range(11))
SIN_SERIES = tuple((-1.0) ** n / math.factorial(2 * n + 1) for n in range(9))
COS_SERIES = tuple((-1.0) ** n / math.factorial(2 * n) for n in range(9))
SQRT_HALF = 0.7071067811865476


def _horner(coefficients, z):
    total = coefficients[-1]
    for c in coefficients[-2::-1]:
        total = total * z + c
    return total


# ---- one float -------------------------------------------------------------------------------------------------------------------

def exp(x):
    """e to the x; x and result pure numbers.  Overflow gives infinity, underflow 0, NaN gives NaN."""
    if x != x:
        return x
    x = 800.0 if x > 800.0 else -800.0 if x < -800.0 else x
    k = float(math.floor(x * INVERSE_LN2 + 0.5))
    r = (x - k * LN2_HIGH) - k * LN2_LOW
    try:
        return math.ldexp(_horner(EXP_SERIES, r), int(k))
    except OverflowError:
        return INF


def ln(x):
    """Natural logarithm; x and result pure numbers.  0 gives minus infinity, negative gives NaN."""
    if not 0.0 < x < INF:
        return -INF if x == 0.0 else INF if x == INF else NAN
    m, e = math.frexp(x)
    if m < SQRT_HALF:
        m, e = m * 2.0, e - 1
    s = (m - 1.0) / (m + 1.0)
    return e * LN2_HIGH + (2.0 * s * _horner(LN_SERIES, s * s) + e * LN2_LOW)


def _quadrant(x):
    k = float(math.floor(x * TWO_OVER_PI + 0.5))
    r = ((x - k * HALF_PI_1) - k * HALF_PI_2) - k * HALF_PI_3
    z = r * r
    return k - 4.0 * math.floor(k * 0.25), r * _horner(SIN_SERIES, z), _horner(COS_SERIES, z)


def sin(x):
    """Sine of x in radian; beyond 2**20 rad there is no value."""
    if not -ANGLE_LIMIT <= x <= ANGLE_LIMIT:
        return NAN
    q, s, c = _quadrant(x)
    return s if q == 0.0 else c if q == 1.0 else -s if q == 2.0 else -c


def cos(x):
    """Cosine of x in radian; beyond 2**20 rad there is no value."""
    if not -ANGLE_LIMIT <= x <= ANGLE_LIMIT:
        return NAN
    q, s, c = _quadrant(x)
    return c if q == 0.0 else -s if q == 1.0 else -c if q == 2.0 else s


def div(a, b):
    """a / b as IEEE 754 has it, where Python would raise."""
    try:
        return a / b
    except ZeroDivisionError:
        return NAN if a == 0.0 or a != a else math.copysign(INF, a) * math.copysign(1.0, b)


def sqrt(x):
    """Square root; negative gives NaN where Python would raise."""
    return math.sqrt(x) if x >= 0.0 else NAN


def floor(x):
    """Largest whole number not above x, as a float."""
    return float(math.floor(x)) if -INF < x < INF else x


# ---- arrays ----------------------------------------------------------------------------------------------------------------------

def exp_array(x):
    """exp of every element, the same bits as exp()."""
    x = np.minimum(np.maximum(x, -800.0), 800.0)
    k = np.floor(x * INVERSE_LN2 + 0.5)
    r = (x - k * LN2_HIGH) - k * LN2_LOW
    whole = np.where(k == k, k, 0.0).astype(np.int32)
    return np.ldexp(_horner(EXP_SERIES, r), whole)


def ln_array(x):
    """ln of every element, the same bits as ln()."""
    m, e = np.frexp(x)
    small = m < SQRT_HALF
    m = np.where(small, m * 2.0, m)
    e = np.where(small, e - 1, e).astype(np.float64)
    s = (m - 1.0) / (m + 1.0)
    y = e * LN2_HIGH + (2.0 * s * _horner(LN_SERIES, s * s) + e * LN2_LOW)
    inside = (x > 0.0) & (x < INF)
    if inside.all():
        return y
    return np.where(inside, y, np.where(x == 0.0, -INF, np.where(x == INF, INF, NAN)))


def _quadrant_array(x):
    x = np.where(np.abs(x) <= ANGLE_LIMIT, x, NAN)
    k = np.floor(x * TWO_OVER_PI + 0.5)
    r = ((x - k * HALF_PI_1) - k * HALF_PI_2) - k * HALF_PI_3
    z = r * r
    return k - 4.0 * np.floor(k * 0.25), r * _horner(SIN_SERIES, z), _horner(COS_SERIES, z)


def sin_array(x):
    """sin of every element, the same bits as sin()."""
    return sin_cos_array(x)[0]


def cos_array(x):
    """cos of every element, the same bits as cos()."""
    return sin_cos_array(x)[1]


def sin_cos_array(x):
    """(sin, cos) of every element at the cost of one."""
    q, s, c = _quadrant_array(x)
    sine = np.where(q == 0.0, s, np.where(q == 1.0, c, np.where(q == 2.0, -s, -c)))
    return sine, np.where(q == 0.0, c, np.where(q == 1.0, -s, np.where(q == 2.0, -c, s)))


def fold_sum(x, axis):
    """Sum along an axis in the stated order: the upper half is added onto the lower until one is left; nothing sums to 0."""
    if x.ndim == 2 and axis:
        x = x.T              # moveaxis says the same and takes longer to
    elif x.ndim > 1:
        x = np.moveaxis(x, axis, 0)
    n = x.shape[0]
    if n == 0:
        return np.zeros(x.shape[1:])
    while n > 1:
        half = (n + 1) // 2
        if n - half == half:
            x = x[:half] + x[half:n]
        else:
            x = np.concatenate((x[:n - half] + x[half:n], x[n - half:half]))
        n = half
    return x[0]


# ---- normal score ----------------------------------------------------------------------------------------------------------------

_CENTRE_TOP = (3.3871328727963666080, 1.3314166789178437745e2, 1.9715909503065514427e3, 1.3731693765509461125e4,
               4.5921953931549871457e4, 6.7265770927008700853e4, 3.3430575583588128105e4, 2.5090809287301226727e3)
_CENTRE_BOTTOM = (1.0, 4.2313330701600911252e1, 6.8718700749205790830e2, 5.3941960214247511077e3,
                  2.1213794301586595867e4, 3.9307895800092710610e4, 2.8729085735721942674e4, 5.2264952788528545610e3)
_NEAR_TOP = (1.42343711074968357734, 4.63033784615654529590, 5.76949722146069140550, 3.64784832476320460504,
             1.27045825245236838258, 2.41780725177450611770e-1, 2.27238449892691845833e-2, 7.74545014278341407640e-4)
_NEAR_BOTTOM = (1.0, 2.05319162663775882187, 1.67638483018380384940, 6.89767334985100004550e-1,
                1.48103976427480074590e-1, 1.51986665636164571966e-2, 5.47593808499534494600e-4, 1.05075007164441684324e-9)
_FAR_TOP = (6.65790464350110377720, 5.46378491116411436990, 1.78482653991729133580, 2.96560571828504891230e-1,
            2.65321895265761230930e-2, 1.24266094738807843860e-3, 2.71155556874348757815e-5, 2.01033439929228813265e-7)
_FAR_BOTTOM = (1.0, 5.99832206555887937690e-1, 1.36929880922735805310e-1, 1.48753612908506148525e-2,
               7.86869131145613259100e-4, 1.84631831751005468180e-5, 1.42151175831644588870e-7, 2.04426310338993978564e-15)


def normal_score(p):
    """The standard normal quantile at 0 < p < 1 (AS 241, relative accuracy about 1e-16)."""
    q = p - 0.5
    if abs(q) <= 0.425:
        r = 0.180625 - q * q
        return q * _horner(_CENTRE_TOP, r) / _horner(_CENTRE_BOTTOM, r)
    r = math.sqrt(-ln(p if q < 0.0 else 1.0 - p))
    if r <= 5.0:
        r -= 1.6
        score = _horner(_NEAR_TOP, r) / _horner(_NEAR_BOTTOM, r)
    else:
        r -= 5.0
        score = _horner(_FAR_TOP, r) / _horner(_FAR_BOTTOM, r)
    return -score if q < 0.0 else score

"""Coverage intervals and probabilities from samples, with a control variate.

4 096 points alone leave about 2 % in the ends of an interval when several inputs are uncertain.  Most results are nearly linear in their inputs, and
for a linear result the same ends can be had far more exactly.  So: fit slopes b_j, form L = sum b_j s_j on the same points, and
add to the plain estimate what the plain estimate is known to be wrong by on L (control variates: Asmussen & Glynn, Stochastic
Simulation (2007), V.2).  L is a sum of independent rectangular and normal terms: its characteristic function is a product of sinc and Gauss
terms, and its distribution function follows by the Gil-Pelaez integral on the midpoint rule (Davies, Biometrika 60 (1973) 415-417).

Whatever the slopes, the added term is a difference of two estimates of one number: it cannot bias the result, only fail to help.
"""
import math

import numpy as np

from .exact_math import NAN, exp_array, fold_sum, normal_score, sin_array, sin_cos_array
from .least_squares import cholesky, solved
from .points import POINTS

# The 95 % coverage interval (JCGM 101 cl. 7.7) is linear between order statistics at N p - 1/2, counted from 0.
_ENDS = (0.025, 0.975)
_PLACES = tuple((int(POINTS * p - 0.5), POINTS * p - 0.5 - int(POINTS * p - 0.5)) for p in _ENDS)

# The outer tenth of the order statistics, fitted by a cubic; a fitted end stays within so many places of the plain one.
_TAIL, _NEAR = POINTS // 10, 25
_LOW_AT = _PLACES[0][0]

# Midpoints of the inversion integral; a normal term counts as ending at 6 standard deviations (2e-9 lies beyond).
_NODES = np.arange(64) + 0.5
_NORMAL_REACH = 6.0

# A probability is corrected by the mean error of the linear stand-in at several places about its threshold, as wide as the samples bend away from
# it: at one place the stand-in's boundary can run along a plane of the lattice where the bent one does not.
_BEND = 1.7
_ABOUT = np.array([-1.0, -0.5, 0.0, 0.5, 1.0])

NO_ENDS = (NAN, NAN)


def even_ends(x):
    """(low, high) of a result that rests on one uncertain input alone: on its own the points are even, so plain ends are exact."""
    ordered = np.sort(x)                                     # sorts NaN to the end
    return _plain_ends(ordered) if ordered[-1] - ordered[0] < math.inf else NO_ENDS


def coverage_ends(arrays, drawn):
    """[(low, high), ...] of the probabilistically symmetric 95 % interval of each 1-d array of samples; NaN where a sample has no value."""
    if len(drawn.forms) < 2:
        return [even_ends(x) for x in arrays]
    found = [NO_ENDS] * len(arrays)
    ordered = [np.sort(x) for x in arrays]                   # sorts NaN to the end
    usable = [k for k, row in enumerate(ordered) if row[-1] - row[0] < math.inf]
    if usable:
        ends = _smooth_ends([ordered[k] for k in usable])
        lines = [_Line(origin, slopes, drawn) for origin, slopes in drawn.slopes([arrays[k] for k in usable])]
        _correct(ends, [(i, line) for i, line in enumerate(lines) if line.usable], drawn)
        for k, (low, high) in zip(usable, ends):
            least, most = float(ordered[k][0]), float(ordered[k][-1])
            found[k] = (min(max(low, least), most), min(max(high, least), most))
    return found


def ends_of(x, drawn):
    """(low, high) along the last axis of `x`, which may have axes before it."""
    if x.ndim == 1:
        return coverage_ends([x], drawn)[0]
    pairs = coverage_ends(list(x.reshape(-1, x.shape[-1])), drawn)
    return tuple(np.array(part).reshape(x.shape[:-1]) for part in zip(*pairs))


def _plain_ends(ordered):
    return tuple(float(ordered[at] + (ordered[at + 1] - ordered[at]) * part) for at, part in _PLACES)


def _smooth_ends(rows):
    """[[low, high], ...] of sorted rows: a cubic in the normal score, fitted to the outer tenth of the order statistics.

    It averages the unevenness of single order statistics away; it is kept within _NEAR of them, for results whose distribution has a step.
    """
    tails = np.array([row[:_TAIL] for row in rows] + [row[:-_TAIL - 1:-1] for row in rows])
    fitted = fold_sum(tails * _TAIL_WEIGHTS, 1).tolist()
    ends = []
    for k, row in enumerate(rows):
        low = min(max(fitted[k], float(row[_LOW_AT - _NEAR])), float(row[_LOW_AT + _NEAR]))
        high = min(max(fitted[len(rows) + k], float(row[-1 - _LOW_AT - _NEAR])), float(row[-1 - _LOW_AT + _NEAR]))
        ends.append([low, high])
    return ends


def _tail_weights():
    """Weights of the outer order statistics whose sum is the fitted cubic at 2.5 %."""
    scores = np.array([normal_score((i + 0.5) / POINTS) for i in range(_TAIL)]) - normal_score(_ENDS[0])
    powers = [np.ones(_TAIL), scores, scores * scores, scores * scores * scores]
    gram = [[float(fold_sum(a * b, 0)) for b in powers] for a in powers]
    coefficients = solved(cholesky(gram), [1.0, 0.0, 0.0, 0.0])
    return powers[0] * coefficients[0] + powers[1] * coefficients[1] + powers[2] * coefficients[2] + powers[3] * coefficients[3]


def _correct(ends, lines, drawn):
    """Move the ends by what the same estimate of the linear stand-ins is wrong by."""
    if not lines:
        return
    near = _smooth_ends([np.sort(line.values(drawn)) for _, line in lines])
    steps = np.array([math.pi / line.reach for _, line in lines])
    weights = _characteristic([line for _, line in lines], steps)
    guess = [0.5 * (high - low) for low, high in near]
    sines, cosines = sin_cos_array((np.array(guess) * steps)[:, None] * _NODES)
    below = fold_sum(sines * weights, 1).tolist()
    density = fold_sum(cosines * (weights * _NODES), 1).tolist()
    for i, (k, line) in enumerate(lines):
        slope = density[i] * float(steps[i])
        if not slope > 0.0:
            continue
        # Newton's step to the upper quantile of L, with the curvature of a normal density as the second-order term
        step = ((_ENDS[1] - 0.5) * math.pi - below[i]) / slope
        step += step * step * guess[i] / (2.0 * line.variance)
        end = guess[i] + step
        ends[k][0] += -end - near[i][0]
        ends[k][1] += end - near[i][1]


def plain_share(holds, known):
    """Share of the samples for which a condition holds, along the last axis; NaN where `known` is not true throughout."""
    count = np.count_nonzero(holds, axis=-1) / POINTS
    everywhere = np.all(known, axis=-1)
    if holds.ndim == 1:
        return float(count) if everywhere else NAN
    return np.where(everywhere, count, NAN)


def share(holds, difference, positive, drawn):
    """Probability of a comparison, from its truth per sample and the difference of its two sides.

    `positive` says whether it holds where the difference is above 0 (else where below). NaN where a side has no value.
    """
    if holds.ndim > 1:
        flat = zip(holds.reshape(-1, holds.shape[-1]), difference.reshape(-1, difference.shape[-1]))
        return np.array([share(h, d, positive, drawn) for h, d in flat]).reshape(holds.shape[:-1])
    if not np.isfinite(difference).all():
        return NAN
    count = int(np.count_nonzero(holds))
    plain = count / POINTS
    if count in (0, POINTS) or len(drawn.forms) < 2:      # certain on every point: no correction may unsettle that
        return plain
    line = _Line(*drawn.slopes([difference])[0], drawn)
    if not line.usable:
        return plain
    values = line.values(drawn)
    bend = difference - values
    bend -= line.origin
    width = _BEND * math.sqrt(float(fold_sum(bend * bend, 0)) / POINTS)
    if not width < math.inf:
        return plain
    places = np.minimum(np.maximum(width * _ABOUT - line.origin, -line.reach), line.reach)     # all of the stand-in lies within its reach
    step = math.pi / line.reach
    weights = _characteristic([line], np.array([step]))[0]
    below = 0.5 + fold_sum(sin_array((places * step)[:, None] * _NODES) * weights, 1) / math.pi
    counted = [int(np.count_nonzero(values <= place)) for place in places.tolist()]
    correction = float(fold_sum(below, 0)) / len(counted) - sum(counted) / (POINTS * len(counted))
    return min(max(plain - correction if positive else plain + correction, 0.0), 1.0)


class _Line:
    """A linear stand-in, centred on 0: slopes, variance, and how far it reaches."""

    __slots__ = ("origin", "slopes", "flat", "normal", "variance", "reach")

    def __init__(self, origin, slopes, drawn):
        self.origin, self.slopes, self.flat, self.normal, self.reach = origin, slopes, [], 0.0, 0.0
        self.variance = 0.0
        for slope, form in zip(slopes, drawn.forms):
            if form == "n":
                self.normal += slope * slope
                self.flat.append(0.0)
            else:
                self.variance += slope * slope / 3.0
                self.flat.append(slope)
                self.reach += abs(slope)
        self.variance += self.normal
        self.reach += _NORMAL_REACH * math.sqrt(self.normal)

    @property
    def usable(self):
        """Whether it spreads at all, by amounts whose squares a float can hold."""
        return 0.0 < self.variance < math.inf and self.reach < math.inf

    def values(self, drawn):
        """The stand-in on the points."""
        total = np.multiply(drawn.coordinates[0], self.slopes[0])
        scratch = np.empty(POINTS)
        for coordinates, slope in zip(drawn.coordinates[1:], self.slopes[1:]):
            total += np.multiply(coordinates, slope, out=scratch)
        return total


def _characteristic(lines, steps):
    """Characteristic function at the nodes divided by the node number: one row per line."""
    frequency = steps[:, None] * _NODES
    normal = np.array([-0.5 * line.normal for line in lines])
    weights = exp_array(normal[:, None] * (frequency * frequency)) / _NODES if normal.any() else np.tile(1.0 / _NODES, (len(lines), 1))
    flat = np.array([line.flat for line in lines]).T
    flat = flat[flat.any(axis=1)]
    if len(flat):
        angles = flat[:, :, None] * frequency
        angles[angles == 0.0] = _TINY
        for term in sin_array(angles) / angles:
            weights *= term
    return weights


_TINY = 1e-30       # sin x / x is exactly 1 here


_TAIL_WEIGHTS = _tail_weights()

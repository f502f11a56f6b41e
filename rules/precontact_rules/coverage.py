"""Coverage intervals and probabilities from samples, with a control variate.

4 096 points alone leave about 2 % in the ends of an interval when several inputs are uncertain.  Most results are nearly linear in their inputs, and
for a linear result the same ends can be had far more exactly.  So: fit slopes b_j, form L = sum b_j s_j on the same points, and
add to the plain estimate what the plain estimate is known to be wrong by on L (control variates: Asmussen & Glynn, Stochastic
Simulation (2007), V.2).

Whatever the slopes, the added term is a difference of two estimates of one number: it cannot bias the result, only fail to help.
"""
import math

import numpy as np

from .exact_math import NAN, cos_array, exp_array, fold_sum, sin_array
from .points import POINTS

# The 95 % coverage interval (JCGM 101 cl. 7.7) is linear between order statistics at N p - 1/2, counted from 0.
_ENDS = (0.025, 0.975)
_PLACES = tuple((int(POINTS * p - 0.5), POINTS * p - 0.5 - int(POINTS * p - 0.5)) for p in _ENDS)

# Midpoints for the inversion integral; a normal term counts as ending at 8 standard deviations.
_NODES = np.arange(256) + 0.5
_NORMAL_REACH = 8.0
_NEWTON_STEPS = 2


def coverage_ends(x, drawn):
    """(low, high) ends of the probabilistically symmetric 95 % interval along the last axis of `x`; NaN where a sample has no value."""
    if x.ndim > 1:
        rows = [coverage_ends(row, drawn) for row in x.reshape(-1, x.shape[-1])]
        return tuple(np.array(part).reshape(x.shape[:-1]) for part in zip(*rows))
    ordered = np.sort(x)                     # sorts NaN to the end
    if not ordered[-1] - ordered[0] < math.inf:
        return NAN, NAN
    ends = _plain_ends(ordered)
    surrogate = _Surrogate.fit(x, drawn)
    if surrogate is None:
        return ends
    linear = _plain_ends(np.sort(surrogate.values))
    exact = surrogate.ends(0.5 * (linear[1] - linear[0]) + surrogate.centre)
    corrected = [end + (true - plain) for end, true, plain in zip(ends, exact, linear)]
    return min(max(corrected[0], float(ordered[0])), float(ordered[-1])), min(max(corrected[1], float(ordered[0])), float(ordered[-1]))


def _plain_ends(ordered):
    return [float(ordered[at] + (ordered[at + 1] - ordered[at]) * part) for at, part in _PLACES]


def share(holds, difference, positive, drawn):
    """Probability of a comparison, from its truth per sample and the difference of its two sides.

    `positive` says whether it holds where the difference is above 0 (else where below).
    """
    if holds.ndim > 1:
        flat = zip(holds.reshape(-1, holds.shape[-1]), difference.reshape(-1, difference.shape[-1]))
        return np.array([share(h, d, positive, drawn) for h, d in flat]).reshape(holds.shape[:-1])
    count = int(np.count_nonzero(holds))
    plain = count / POINTS
    if count in (0, POINTS):                 # certain on every point: no correction may unsettle that
        return plain
    surrogate = _Surrogate.fit(difference, drawn)
    if surrogate is None:
        return plain
    below = surrogate.below(0.0) - np.count_nonzero(surrogate.values <= 0.0) / POINTS
    return min(max(plain - below if positive else plain + below, 0.0), 1.0)


class _Surrogate:
    """The linear stand-in for a result: its values on the points, and its exact distribution.

    A sum of independent rectangular and normal terms has the characteristic function of a product of sinc and Gauss terms; the distribution
    function follows by the Gil-Pelaez integral on the midpoint rule (Davies, Biometrika 60 (1973) 415-417).
    """

    __slots__ = ("values", "centre", "_step", "_weights")

    @classmethod
    def fit(cls, x, drawn):
        """The surrogate of x, or None where it cannot help: one uncertain input (the points are already even), no slope, a gap."""
        if len(drawn.forms) < 2:
            return None
        centre, slopes = drawn.slopes(x)
        reach, variance, flat = 0.0, 0.0, []
        for slope, form in zip(slopes, drawn.forms):
            if form == "n":
                variance += slope * slope
            elif slope != 0.0:
                flat.append(slope)
                reach += abs(slope)
        reach += _NORMAL_REACH * math.sqrt(variance)
        if not 0.0 < reach < math.inf:
            return None
        made = cls()
        made.centre, made._step = centre, math.pi / reach
        made._weights = made._characteristic(flat, variance)
        made.values = np.full(POINTS, centre)
        scratch = np.empty(POINTS)
        for coordinates, slope in zip(drawn.coordinates, slopes):
            if slope != 0.0:
                made.values += np.multiply(coordinates, slope, out=scratch)
        return made

    def _characteristic(self, flat, variance):
        frequency = _NODES * self._step
        weights = exp_array((-0.5 * variance) * (frequency * frequency)) / _NODES
        if flat:
            angles = np.multiply.outer(np.array(flat), frequency)
            for row in sin_array(angles) / angles:
                weights *= row
        return weights

    def below(self, at):
        """P(L <= at)."""
        return 0.5 + float(fold_sum(sin_array((at - self.centre) * self._step * _NODES) * self._weights, 0)) / math.pi

    def _density(self, at):
        return float(fold_sum(cos_array((at - self.centre) * self._step * _NODES) * self._weights * _NODES, 0)) * self._step / math.pi

    def ends(self, near):
        """The 2.5 % and 97.5 % quantiles of L, by Newton steps from an estimate of the upper one; L is symmetric about its centre."""
        at = near
        for _ in range(_NEWTON_STEPS):
            density = self._density(at)
            if not density > 0.0:
                break
            at += (_ENDS[1] - self.below(at)) / density
        return self.centre - (at - self.centre), at

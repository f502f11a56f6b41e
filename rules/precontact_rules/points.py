"""The fixed point set on which uncertain inputs are propagated (JCGM 101 without random numbers).

Point i of dimension j of a rank-1 lattice of N points is ((i * z_j) mod N + 1/2) / N: whole-number arithmetic and one exact division, so it is the same
everywhere.  Every dimension holds the same N values in another order; the normal scores are therefore computed once.
"""
import numpy as np

from . import exact_math

POINTS = 4096
SCORE_LIMIT = exact_math.normal_score((POINTS - 0.5) / POINTS)   # the largest normal score in the set

# The 95 % coverage interval is linear between order statistics at N p - 1/2 (counted from 0).
_LOW_AT, _LOW_PART = divmod(POINTS * 0.025 - 0.5, 1.0)
_HIGH_AT, _HIGH_PART = divmod(POINTS * 0.975 - 0.5, 1.0)
_LOW_AT, _HIGH_AT = int(_LOW_AT), int(_HIGH_AT)


class PointSet:
    """Uniform, symmetric and normal coordinates per dimension, each an array of POINTS floats, made when first used."""

    def __init__(self, components):
        self._components = [int(z) for z in components]
        self._uniform, self._symmetric, self._normal = {}, {}, {}
        self._scores = None

    @property
    def dimensions(self):
        """How many uncertain quantities one request may have."""
        return len(self._components)

    def _order(self, dimension):
        return (np.arange(POINTS, dtype=np.int64) * self._components[dimension]) % POINTS

    def uniform(self, dimension):
        """Coordinates between 0 and 1."""
        found = self._uniform.get(dimension)
        if found is None:
            found = self._uniform[dimension] = (self._order(dimension) + 0.5) / POINTS
        return found

    def symmetric(self, dimension):
        """Coordinates between -1 and 1: 2 u - 1."""
        found = self._symmetric.get(dimension)
        if found is None:
            found = self._symmetric[dimension] = 2.0 * self.uniform(dimension) - 1.0
        return found

    def normal(self, dimension):
        """Standard normal coordinates."""
        if self._scores is None:
            self._scores = np.array([exact_math.normal_score((i + 0.5) / POINTS) for i in range(POINTS)])
        found = self._normal.get(dimension)
        if found is None:
            found = self._normal[dimension] = self._scores[self._order(dimension)]
        return found


def coverage_ends(x):
    """Ends of the probabilistically symmetric 95 % coverage interval (JCGM 101 cl. 7.7) along the last axis.

    Returns two arrays (or floats for a 1-d `x`); NaN where any sample is not a number.
    """
    ordered = np.sort(x, axis=-1)      # sorts NaN to the end
    lows, highs = ordered[..., _LOW_AT], ordered[..., _HIGH_AT]
    low = lows + (ordered[..., _LOW_AT + 1] - lows) * _LOW_PART
    high = highs + (ordered[..., _HIGH_AT + 1] - highs) * _HIGH_PART
    last = ordered[..., -1]
    if x.ndim == 1:
        return (float(low), float(high)) if last == last else (exact_math.NAN, exact_math.NAN)
    gap = np.isnan(last)
    return np.where(gap, exact_math.NAN, low), np.where(gap, exact_math.NAN, high)

"""The fixed point set on which uncertain inputs are propagated (JCGM 101 without random numbers).

Point i of dimension j of a rank-1 lattice of N points is ((i * z_j) mod N + 1/2) / N: whole-number arithmetic and one exact division, so it is the same
everywhere.  Every dimension holds the same N values in another order; the normal scores are therefore computed once.
"""
import numpy as np

from . import exact_math
from .least_squares import cholesky, solved

POINTS = 4096
SCORE_LIMIT = exact_math.normal_score((POINTS - 0.5) / POINTS)   # the largest normal score in the set
SUBSET = 512               # slopes are fitted on so many of the points


class PointSet:
    """Uniform, symmetric and normal coordinates per dimension, each an array of POINTS floats, made when first used."""

    def __init__(self, components):
        self._components = [int(z) for z in components]
        self._uniform, self._symmetric, self._normal = {}, {}, {}
        self._scores = None
        self._drawn = {}

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

    def drawn(self, forms):
        """The Drawn for dimensions 0, 1, ... of these forms ("r" rectangular, "n" normal); made once for each tuple of forms."""
        found = self._drawn.get(forms)
        if found is None:
            found = self._drawn[forms] = Drawn([self.normal(d) if f == "n" else self.symmetric(d) for d, f in enumerate(forms)], forms)
        return found


class Drawn:
    """The coordinates on which one request's uncertain quantities were drawn, ready for fitting slopes by least squares."""

    __slots__ = ("coordinates", "forms", "_means", "_subset", "_factor")

    # Triangular numbers visit the points without the lattice's own regularity, under which a subset of it may collapse.
    _CHOSEN = np.array([k * (k + 1) // 2 % POINTS for k in range(SUBSET)])

    def __init__(self, coordinates, forms):
        self.coordinates, self.forms = coordinates, forms
        if len(forms) > 1:
            columns = [c[self._CHOSEN] for c in coordinates]
            self._means = [float(exact_math.fold_sum(c, 0)) / SUBSET for c in columns]
            self._subset = np.array([c - mean for c, mean in zip(columns, self._means)]).T.copy()
            self._factor = cholesky([[float(exact_math.fold_sum(a * b, 0)) for b in self._subset.T] for a in self._subset.T])

    def slopes(self, arrays):
        """[(value at the origin, slopes), ...] of the linear functions of the coordinates that fit each array of samples best on the subset."""
        chosen = np.array([x[self._CHOSEN] for x in arrays]).T
        centres = exact_math.fold_sum(chosen, 0) / SUBSET
        sums = exact_math.fold_sum(self._subset[:, None, :] * (chosen - centres)[:, :, None], 0).tolist()
        fitted = []
        for centre, right in zip(centres.tolist(), sums):
            slopes = solved(self._factor, right)
            for mean, slope in zip(self._means, slopes):
                centre -= mean * slope
            fitted.append((centre, slopes))
        return fitted

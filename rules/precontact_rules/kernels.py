"""Operations along axes and table look-ups, in a stated order so that every runtime gives the same bits."""
from bisect import bisect_right

import numpy as np

from .exact_math import NAN


def at_least(key, x, axis, rank):
    """x at the first place along `axis` where key is least, absent keys passed over; NaN where every key is absent."""
    return _at(key, x, axis, rank, np.inf, np.argmin)


def at_greatest(key, x, axis, rank):
    """x at the first place along `axis` where key is greatest, absent keys passed over; NaN where every key is absent."""
    return _at(key, x, axis, rank, -np.inf, np.argmax)


def _at(key, x, axis, rank, filler, choose):
    key, x = np.broadcast_arrays(_ranked(key, rank), _ranked(x, rank))
    known = key == key
    place = np.expand_dims(choose(np.where(known, key, filler), axis=axis), axis)
    found = np.take_along_axis(x, place, axis).squeeze(axis)
    found = np.where(known.any(axis=axis), found, NAN)
    return float(found) if found.ndim == 0 else found


def _ranked(x, rank):
    x = np.asarray(x)
    return x.reshape((1,) * (rank - x.ndim) + x.shape)


def weighted_quantile(x, weight, share, axes, rank):
    """The value below which `share` of the weight lies, over `axes` of arrays of `rank` dimensions.

    Values are sorted (equal ones keep their order), weights added one after another; the answer is the first value at which the running
    weight reaches share times the total.  Absent or weightless: NaN.
    """
    x, weight = np.broadcast_arrays(_ranked(x, rank), _ranked(weight, rank))
    kept = [a for a in range(rank) if a not in axes]
    shape = tuple(x.shape[a] for a in kept)
    order = kept + list(axes)
    rows = x.transpose(order).reshape(shape + (-1,)).reshape(-1, int(np.prod([x.shape[a] for a in axes])))
    weights = weight.transpose(order).reshape(rows.shape)
    found = np.array([_quantile_of_row(r, w, share) for r, w in zip(rows, weights)])
    return float(found[0]) if not shape else found.reshape(shape)


def _quantile_of_row(x, weight, share):
    order = np.argsort(x, kind="stable")
    running = np.add.accumulate(weight[order])
    total = running[-1]
    if not total > 0.0 or x[order[-1]] != x[order[-1]]:
        return NAN
    return x[order[min(int(np.searchsorted(running, share * total, side="left")), len(order) - 1)]]


def spread_along(x, position, size):
    """x repeated `size` times along a new axis at `position`."""
    return np.repeat(np.expand_dims(np.asarray(x), position), size, axis=position)


class Lookup:
    """A table or curve read by its own rule: `between` linear or step; `below` and `above` absent or hold."""

    def __init__(self, between, below, above, xs=None, ys=None):
        self.step, self.hold_below, self.hold_above = between == "step", below == "hold", above == "hold"
        self.data = None if xs is None else (list(xs), list(ys))

    def one(self, x, data=None):
        """The value at one float; NaN where the table has none."""
        xs, ys = data or self.data
        if x != x or x < xs[0]:
            return ys[0] if x < xs[0] and self.hold_below else NAN
        if x >= xs[-1]:
            return ys[-1] if x == xs[-1] or self.hold_above else NAN
        i = bisect_right(xs, x) - 1
        if self.step:
            return ys[i]
        return ys[i] + (ys[i + 1] - ys[i]) * ((x - xs[i]) / (xs[i + 1] - xs[i]))

    def many(self, x, data=None):
        """The values at an array of floats, the same bits as `one`."""
        xs, ys = (np.asarray(c, dtype=float) for c in (data or self.data))
        i = np.clip(np.searchsorted(xs, x, side="right") - 1, 0, max(len(xs) - 2, 0))
        if self.step or len(xs) == 1:
            found = ys[i]
        else:
            found = ys[i] + (ys[i + 1] - ys[i]) * ((x - xs[i]) / (xs[i + 1] - xs[i]))
        found = np.where(x < xs[0], ys[0] if self.hold_below else NAN, found)
        found = np.where(x > xs[-1], ys[-1] if self.hold_above else NAN, found)
        return np.where(x == xs[-1], ys[-1], np.where(x == x, found, NAN))

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
    if rank == 1 and isinstance(key, np.ndarray) and isinstance(x, np.ndarray):      # short, no other axis: quicker number by number
        best, found = None, NAN
        for k, value in zip(key.tolist(), x.tolist()):
            if k == k and (best is None or (k < best if filler > 0.0 else k > best)):
                best, found = k, value
        return float(found)
    key, x = np.broadcast_arrays(_ranked(key, rank), _ranked(x, rank))
    known = key == key
    place = np.expand_dims(choose(np.where(known, key, filler), axis=axis), axis)
    found = np.take_along_axis(x, place, axis).squeeze(axis)
    found = np.where(known.any(axis=axis), found, NAN)
    return float(found) if found.ndim == 0 else found


def _ranked(x, rank):
    x = np.asarray(x)
    return x.reshape((1,) * (rank - x.ndim) + x.shape)


def _laid_out(x, reduced, sizes):
    """x with the axes that are kept first (as long as they are in x) and those reduced flattened into the last, in the order written."""
    x = _ranked(x, len(sizes))
    kept = [a for a in range(len(sizes)) if a not in reduced]
    x = np.broadcast_to(x, [sizes[a] if a in reduced else x.shape[a] for a in range(len(sizes))]).transpose(kept + list(reduced))
    return x.reshape(x.shape[:len(kept)] + (-1,))


def _free_of(x, reduced, rank):
    """x, which does not run along the reduced axes, without them."""
    x = _ranked(x, rank)
    return x.reshape([x.shape[a] for a in range(rank) if a not in reduced])


def _places(weight, share):
    """Along the last axis of weight: the first place at which the running weight reaches share times the total; -1 without weight.

    Weights are added one after another.
    """
    running = np.add.accumulate(weight, axis=-1)
    rows, last = running.shape[:-1], running.shape[-1] - 1
    wanted = share * running[..., -1]
    places = np.empty(wanted.shape, dtype=np.intp)
    for row in np.ndindex(rows):
        of_row = tuple(slice(None) if size == 1 else place for place, size in zip(row, rows))
        found = np.minimum(np.searchsorted(running[row], wanted[of_row], side="left"), last)
        places[of_row] = found if running[row][-1] > 0.0 else -1
    return places


def _read(x, places):
    """x at places along its last axis; NaN at -1."""
    shape = np.broadcast_shapes(x.shape[:-1], places.shape)
    at = np.broadcast_to(places, shape)
    found = np.take_along_axis(np.broadcast_to(x, shape + x.shape[-1:]), at[..., None], -1)[..., 0]
    found = np.where(at < 0, NAN, found)
    return float(found) if found.ndim == 0 else found


def share_place(weight, share, reduced, sizes):
    """Places, in the order of the reduced axes as written (the last runs fastest), at which the running weight reaches a share of its total."""
    return _places(_laid_out(weight, reduced, sizes), _free_of(share, reduced, len(sizes)))


def at_place(x, place, reduced, sizes):
    """x at the places that share_place found."""
    return _read(_laid_out(x, reduced, sizes), _free_of(place, reduced, len(sizes)))


def ranking(x, weight, reduced, sizes):
    """(x, weight) over the reduced axes, sorted by x; equal ones keep their order."""
    x, weight = np.broadcast_arrays(_laid_out(x, reduced, sizes), _laid_out(weight, reduced, sizes))
    order = np.argsort(x, axis=-1, kind="stable")
    return np.take_along_axis(x, order, -1), np.take_along_axis(weight, order, -1)


def quantile(ranked, share, kept, rank):
    """The first of the sorted values at which the running weight reaches share times the total. Absent or weightless: NaN."""
    x, weight = ranked
    shape = [1] * rank
    for axis, size in zip(kept, x.shape):
        shape[axis] = size
    x, weight = x.reshape(shape + [-1]), weight.reshape(shape + [-1])
    found = _read(x, _places(weight, _ranked(share, rank)))
    known = x[..., -1] == x[..., -1]      # an absent value sorts last
    found = np.where(known, found, NAN)
    return float(found) if found.ndim == 0 else found


def spread_onto(position, weight, reduced, sizes, onto, target):
    """Weights set down along a new axis of `onto` places, put at `target`: each shared between the two places nearest its position.

    A position beyond an end counts as the end. All the lower shares are added first, one after another, then all the upper ones, then
    the two sums. Where a position or a weight is absent the whole row is NaN.
    """
    position, weight = np.broadcast_arrays(_laid_out(position, reduced, sizes), _laid_out(weight, reduced, sizes))
    known = ((position == position) & (weight == weight)).all(axis=-1)
    at = np.minimum(np.maximum(np.where(position == position, position, 0.0), 0.0), onto - 1.0)
    low = np.floor(at)
    part = at - low
    rows = np.arange(known.size).reshape(known.shape + (1,)) * onto
    low = low.astype(np.intp) + rows
    high = np.minimum(low + 1, rows + onto - 1)
    lower = np.bincount(low.ravel(), (weight * (1.0 - part)).ravel(), known.size * onto)
    upper = np.bincount(high.ravel(), (weight * part).ravel(), known.size * onto)
    found = (lower + upper).reshape(known.shape + (onto,))
    return np.moveaxis(np.where(known[..., None], found, NAN), -1, target)


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

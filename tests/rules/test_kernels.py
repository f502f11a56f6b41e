"""The kernels over several axes against plain loops that follow the words of rules/README.md section 3."""
import itertools
import math

import numpy as np
import pytest

from precontact_rules import kernels

SIZES = (3, 4, 5, 2)                 # axes a, b, c, d
LAYOUTS = (((1, 2), (0, 3)), ((2, 1), (0, 3)), ((0,), (1, 2, 3)), ((3, 0, 2), (1,)), ((0, 1, 2, 3), ()))    # reduced in the order written, kept


def elements(reduced):
    """Index tuples over the reduced axes; the last one written runs fastest."""
    return itertools.product(*(range(SIZES[a]) for a in reduced))


def at(array, kept_axes, kept, reduced_axes, reduced):
    """The element of a full-rank array (some axes of length 1) at a place on every axis."""
    place = dict(zip(kept_axes, kept)) | dict(zip(reduced_axes, reduced))
    return array[tuple(place[a] if array.shape[a] > 1 else 0 for a in range(len(SIZES)))]


def first_at_share(pairs, share):
    """x at the first pair where the running weight reaches share times the total."""
    total = sum((w for _, w in pairs[1:]), pairs[0][1])
    running = 0.0
    for place, (x, weight) in enumerate(pairs):
        running = weight if place == 0 else running + weight
        if running >= share * total:
            return x
    return pairs[-1][0]


def thinned(generator, keep, low=0.0):
    """Random numbers that run along the axes in `keep` only."""
    return low + generator.random([size if axis in keep else 1 for axis, size in enumerate(SIZES)])


@pytest.mark.parametrize("reduced, kept", LAYOUTS)
@pytest.mark.parametrize("seed", range(4))
def test_at_share_reads_x_where_the_running_weight_reaches_the_share(reduced, kept, seed):
    generator = np.random.default_rng(seed)
    x = thinned(generator, set(generator.permutation(4)[:3].tolist()))
    weight = thinned(generator, set(reduced) | set(generator.permutation(4)[:1].tolist()))
    share = thinned(generator, set(kept[:1]))
    place = kernels.share_place(weight, share, reduced, SIZES)
    lined = np.asarray(place).reshape([place.shape[kept.index(a)] if a in kept else 1 for a in range(4)])
    found = np.broadcast_to(kernels.at_place(x, lined, reduced, SIZES), [SIZES[a] for a in kept])
    for index in np.ndindex(*(SIZES[a] for a in kept)):
        pairs = [(at(x, kept, index, reduced, e), at(weight, kept, index, reduced, e)) for e in elements(reduced)]
        assert found[index] == first_at_share(pairs, at(share, kept, index, reduced, [0] * len(reduced)))


@pytest.mark.parametrize("reduced, kept", LAYOUTS)
@pytest.mark.parametrize("share", (0.0, 0.025, 0.5, 1.0))
def test_weighted_quantile_sorts_then_reads_at_the_share(reduced, kept, share):
    generator = np.random.default_rng(11)
    x, weight = np.round(thinned(generator, {0, 1, 2, 3}), 1), thinned(generator, {0, 1, 2, 3})     # rounded: ties keep their order
    found = kernels.quantile(kernels.ranking(x, weight, reduced, SIZES), share, tuple(range(len(kept))), len(kept))
    found = np.asarray(found)
    for index in np.ndindex(*(SIZES[a] for a in kept)):
        pairs = [(at(x, kept, index, reduced, e), at(weight, kept, index, reduced, e)) for e in elements(reduced)]
        assert found[index] == first_at_share(sorted(pairs, key=lambda p: p[0]), share)


def test_several_shares_from_one_ranking_run_along_their_own_axis():
    x, weight = np.array([3.0, 1.0, 2.0]), np.array([0.5, 0.25, 0.25])
    found = kernels.quantile(kernels.ranking(x, weight, (0,), (3,)), np.array([0.25, 0.5, 0.75, 1.0]), (), 1)
    assert found.tolist() == [1.0, 2.0, 3.0, 3.0]


@pytest.mark.parametrize("reduced, kept", LAYOUTS[:4])
def test_spread_onto_shares_each_weight_between_the_two_nearest_places(reduced, kept):
    generator = np.random.default_rng(5)
    position, weight = thinned(generator, {0, 1, 2, 3}) * 9.0 - 1.0, thinned(generator, set(reduced))
    onto, target = 6, 1
    found = np.moveaxis(kernels.spread_onto(position, weight, reduced, SIZES, onto, target), target, -1)
    for index in np.ndindex(*(SIZES[a] for a in kept)):
        wanted = [0.0] * onto
        for e in elements(reduced):
            p, w = min(max(at(position, kept, index, reduced, e), 0.0), onto - 1.0), at(weight, kept, index, reduced, e)
            for place in range(onto):
                wanted[place] += w * max(0.0, 1.0 - abs(p - place))
        assert found[index] == pytest.approx(wanted, rel=1e-13, abs=1e-15)


def test_spread_onto_keeps_the_total_and_the_centre():
    generator = np.random.default_rng(8)
    position, weight = generator.random(500) * 30, generator.random(500)
    found = kernels.spread_onto(position, weight, (0,), (500,), 31, 0)
    assert found.sum() == pytest.approx(weight.sum(), rel=1e-13)
    assert (found * np.arange(31)).sum() == pytest.approx((position * weight).sum(), rel=1e-13)


def test_without_weight_or_value_there_is_no_answer():
    nothing = np.zeros(4)
    place = kernels.share_place(nothing, 0.5, (0,), (4,))
    assert math.isnan(kernels.at_place(np.arange(4.0), place, (0,), (4,)))
    assert math.isnan(kernels.quantile(kernels.ranking(np.arange(4.0), nothing, (0,), (4,)), 0.5, (), 0))
    assert math.isnan(kernels.quantile(kernels.ranking(np.array([1.0, np.nan]), np.ones(2), (0,), (2,)), 0.5, (), 0))
    assert np.isnan(kernels.spread_onto(np.array([0.5, np.nan]), np.ones(2), (0,), (2,), 3, 0)).all()

"""Propagation of distributions on the fixed point set, against JCGM 101:2008 and against exact distributions."""
import numpy as np
import pytest
from precontact_rules.authoring.lattice import generating_vector
from precontact_rules.coverage import ends_of, share
from precontact_rules.points import POINTS, PointSet

VECTOR = generating_vector()
POINT_SET = PointSet(VECTOR)


def test_every_dimension_is_the_same_even_grid():
    even = (np.arange(POINTS) + 0.5) / POINTS
    for dimension in range(POINT_SET.dimensions):
        assert np.array_equal(np.sort(POINT_SET.uniform(dimension)), even)
    assert len(set(VECTOR)) == len(VECTOR)


def test_four_normals_match_jcgm_101_table_2():
    # JCGM 101:2008 9.2.2, table 2: sum of four N(0, 1): 95 % interval [-3.92, 3.92]
    drawn = POINT_SET.drawn("nnnn")
    assert ends_of(sum(drawn.coordinates), drawn) == pytest.approx((-3.92, 3.92), abs=0.005)


def test_four_rectangles_match_jcgm_101_table_3():
    # JCGM 101:2008 9.2.3, table 3: sum of four rectangular of unit standard deviation: [-3.88, 3.88]
    drawn = POINT_SET.drawn("rrrr")
    assert ends_of(3.0 ** 0.5 * sum(drawn.coordinates), drawn) == pytest.approx((-3.88, 3.88), abs=0.005)


def test_one_rectangle_is_exact():
    # 95 % of a rectangle of half-width 1 is 0.95; JCGM 100 G.1.3
    drawn = POINT_SET.drawn("r")
    assert ends_of(drawn.coordinates[0], drawn) == pytest.approx((-0.95, 0.95), abs=1e-12)


def test_two_equal_rectangles_are_a_triangle():
    # 2.5 % in each tail of a triangle of half-width 2: 2 - sqrt(8 * 0.025)
    drawn = POINT_SET.drawn("rr")
    end = 2.0 - (8 * 0.025) ** 0.5
    assert ends_of(sum(drawn.coordinates), drawn) == pytest.approx((-end, end), rel=1e-3)


@pytest.mark.parametrize("forms", ["rn", "rrr", "nrnr", "rrrrrr", "nnnnnnnn"])
def test_probability_and_ends_of_linear_sums_against_a_million_draws(forms):
    random = np.random.default_rng(len(forms))
    weights = random.uniform(0.2, 1.0, len(forms))
    drawn = POINT_SET.drawn(forms)
    many = sum(w * (random.uniform(-1, 1, 10 ** 6) if f == "r" else random.standard_normal(10 ** 6)) for w, f in zip(weights, forms))
    few = sum(w * c for w, c in zip(weights, drawn.coordinates))
    low, high = np.quantile(many, [0.025, 0.975])
    # 1 % of the half-width is the requirement; the reference's own standard error is about 0.15 %
    assert ends_of(few, drawn) == pytest.approx((low, high), abs=0.01 * (high - low) / 2)
    for p in (0.05, 0.3, 0.95):
        limit = np.quantile(many, p)
        assert share(few <= limit, few - limit, False, drawn) == pytest.approx(p, abs=0.005)
        assert share(few > limit, few - limit, True, drawn) == pytest.approx(1 - p, abs=0.005)


def test_a_gap_in_the_samples_gives_no_interval():
    drawn = POINT_SET.drawn("rr")
    x = sum(drawn.coordinates)
    x[7] = np.nan
    assert all(np.isnan(ends_of(x, drawn)))


def test_a_certain_comparison_stays_certain():
    drawn = POINT_SET.drawn("rrr")
    x = sum(drawn.coordinates)
    assert share(x < 4.0, x - 4.0, False, drawn) == 1.0 and share(x > 4.0, x - 4.0, True, drawn) == 0.0

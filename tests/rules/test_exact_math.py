"""The portable functions against 60-digit decimal arithmetic, and scalar against array, bit for bit."""
import math
from decimal import Decimal, localcontext

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from precontact_rules import exact_math as m

EPSILON = 2.0 ** -52
_random = np.random.default_rng(20261201)
ARGUMENTS = {
    "exp": np.concatenate([_random.uniform(-700, 700, 3000), _random.uniform(-1, 1, 3000), [0.0, -745.0, 709.7, 1e-300]]),
    "ln": np.concatenate([np.exp(_random.uniform(-700, 700, 3000)), _random.uniform(0.5, 2, 3000), [1.0, 5e-324, 1.7e308]]),
    "sin": np.concatenate([_random.uniform(-1e5, 1e5, 3000), _random.uniform(-4, 4, 3000), [0.0]]),
    "cos": np.concatenate([_random.uniform(-1e5, 1e5, 3000), _random.uniform(-4, 4, 3000), [0.0]]),
}
SPECIAL = [math.inf, -math.inf, math.nan, 0.0, -1.0, 1e300, -1e300]


@pytest.mark.parametrize("name", ARGUMENTS)
def test_array_and_scalar_give_the_same_bits(name):
    x = np.concatenate([ARGUMENTS[name], SPECIAL])
    with np.errstate(all="ignore"):
        many = getattr(m, name + "_array")(x)
    one = np.array([getattr(m, name)(float(v)) for v in x])
    assert many.tobytes() == one.tobytes() or np.array_equal(many, one, equal_nan=True)


@pytest.mark.parametrize("name", ["exp", "ln"])
def test_exp_and_ln_within_two_units_in_the_last_place(name):
    with localcontext() as context:
        context.prec = 60
        for x in ARGUMENTS[name][::11]:
            true = getattr(Decimal(float(x)), name)()
            if true and abs(true) > Decimal("1e-300"):     # subnormal results have fewer digits by nature
                error = abs((Decimal(getattr(m, name)(float(x))) - true) / true)
                assert error < 2 * EPSILON, x


@pytest.mark.parametrize("name", ["sin", "cos"])
def test_sin_and_cos_within_one_unit_of_one(name):
    # Up to 1e5 rad the C library's own results are good to half a unit in the last place (glibc manual, Errors in Math Functions).
    for x in ARGUMENTS[name]:
        assert abs(getattr(m, name)(float(x)) - getattr(math, name)(float(x))) <= EPSILON


def test_limiting_cases():
    assert m.exp(0.0) == 1.0 and m.exp(1e4) == math.inf and m.exp(-1e4) == 0.0
    assert m.ln(1.0) == 0.0 and m.ln(0.0) == -math.inf and math.isnan(m.ln(-1.0))
    assert m.sin(0.0) == 0.0 and m.cos(0.0) == 1.0 and math.isnan(m.sin(2e6))
    assert m.div(1.0, 0.0) == math.inf and m.div(-1.0, 0.0) == -math.inf and math.isnan(m.div(0.0, 0.0))
    assert math.isnan(m.sqrt(-1.0)) and m.floor(-1.5) == -2.0 and m.floor(math.inf) == math.inf


@given(st.lists(st.floats(-1e6, 1e6), max_size=40))
def test_fold_sum_is_the_stated_order(values):
    expected = list(values)
    while len(expected) > 1:
        half = (len(expected) + 1) // 2
        expected = [expected[i] + expected[i + half] if i + half < len(expected) else expected[i] for i in range(half)]
    assert m.fold_sum(np.array(values), 0) == (expected[0] if expected else 0.0)


# z at the two-sided 80, 95, 99 and 99.9 % points: Abramowitz & Stegun table 26.5 (ten decimals where printed).
@pytest.mark.parametrize("p, z", [(0.9, 1.2815515655), (0.975, 1.9599639845), (0.995, 2.5758293035), (0.9995, 3.2905267315), (0.5, 0.0)])
def test_normal_score_against_the_printed_table(p, z):
    assert m.normal_score(p) == pytest.approx(z, abs=5e-10)
    assert m.normal_score(1.0 - p) == pytest.approx(-z, abs=5e-10)

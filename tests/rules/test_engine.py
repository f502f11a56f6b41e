"""The engine on the demonstration rule set: every feature of the language, absence, samples, and answers that repeat byte for byte."""
import json
import math
import subprocess
import sys
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from precontact_rules import InputProblems, RuleSet
from precontact_rules.authoring.build import build, canonical

DEMO = Path(__file__).parent / "example"


@pytest.fixture(scope="module")
def demo():
    bundle, faults, _ = build(DEMO)
    assert not faults
    return RuleSet(canonical(bundle))


def asked(**changes):
    body = {"circuit": "plain", "source": {"voltage_volt": 12, "resistance_ohm": 1000}, "instrument": "digital"}
    return {**body, **changes}


def results(demo, **changes):
    return demo.answer("demo", asked(**changes))["results"]


def test_exact_numbers_are_the_plain_formula(demo):
    found = results(demo)
    factor = 1.0 + 1000.0 / 1e7
    assert found["loaded_volt"] == {"value": 12.0 / math.sqrt(factor * factor)}
    assert found["within_ratio"] == {"value": 1.0}


def test_complex_impedance(demo):
    found = results(demo, source={"voltage_volt": 12, "resistance_ohm": 3e6, "reactance_ohm": 4e6})
    assert found["loaded_volt"]["value"] == pytest.approx(12 / abs(1 + (3e6 + 4e6j) / 1e7), rel=1e-15)


def test_an_axis_of_a_count_and_a_weighted_quantile(demo):
    found = results(demo)
    # midpoint rule of exp(-x) on 64 points: error below h^2 / 24 = 1.1e-5; the weighted median of exp(-x) on (0, 1) is -ln((1 + 1/e) / 2)
    assert found["exponential_mean_ratio"]["value"] == pytest.approx(1 - math.exp(-1), abs=1.1e-5)
    assert found["middle_ratio"]["value"] == pytest.approx(-math.log((1 + math.exp(-1)) / 2), abs=1 / 64)


def test_an_unknown_quantity_is_sampled(demo):
    # the sum of two equal phasors at an angle rectangular over half a turn: 2 V cos(phase / 2); 95 % between 2 V cos(0.4875 pi) and 2 V cos(0.0125 pi)
    found = results(demo)["phasor_sum_volt"]
    loaded = results(demo)["loaded_volt"]["value"]
    assert found["value"] == pytest.approx(2 * loaded * math.cos(math.pi / 4), rel=1e-12)
    assert found["low"] == pytest.approx(2 * loaded * math.cos(0.4875 * math.pi), rel=1e-3)
    assert found["high"] == pytest.approx(2 * loaded * math.cos(0.0125 * math.pi), rel=1e-6)


def test_lists_are_an_axis(demo):
    levels = [{"label": "low", "voltage_volt": 5, "acts": "rising"}, {"label": "near", "voltage_volt": 11.5}, {"voltage_volt": {"value": 40, "half_width": 1}}]
    found = results(demo, source={"voltage_volt": 12, "resistance_ohm": 1e6}, levels=levels)
    assert found["crossed"] == [{"value": False}, {"value": True}, {"value": False}]
    assert found["rising_levels_count"] == {"value": 1.0}
    assert found["nearest"] == {"value": 1, "title": "near"}
    answer = demo.answer("demo", asked(source={"voltage_volt": 12, "resistance_ohm": 1e6}, levels=levels))
    assert answer["verdict"] == "unacceptable" and answer["findings"][0]["sentence"] == "Crosses near at 10.91\u00a0V."


def test_an_empty_list_reduces_as_written_down(demo):
    found = results(demo, levels=[])
    assert found["rising_levels_count"] == {"value": 0.0}
    assert demo.answer("demo", asked(levels=[])) ["results"] == results(demo)


def test_what_does_not_exist_is_null_with_a_reason(demo):
    found = results(demo, source={"voltage_volt": 1, "resistance_ohm": 10})
    assert found["root_volt"] == {"value": None, "reason": "no value"}
    assert results(demo, source={"voltage_volt": 0, "resistance_ohm": 10})["error_percent"] == {"value": None, "reason": "no value"}
    partly = results(demo, source={"voltage_volt": {"value": 2.5, "half_width": 1}, "resistance_ohm": 10})["root_volt"]
    assert partly["low"] is None and partly["high"] is None and partly["reason"] == "partly no value" and partly["value"] > 0


def test_a_finding_never_fires_on_missing_data(demo):
    assert demo.answer("demo", asked(source={"voltage_volt": 0, "resistance_ohm": 10}))["verdict"] == "undetermined"


def test_an_unverified_number_makes_no_verdict_milder(demo):
    answer = demo.answer("demo", asked(source={"voltage_volt": 12, "resistance_ohm": 10}, instrument="remembered"))
    assert answer["verdict"] == "conditional"
    assert [w["name"] for w in answer["unverified"]] == ["instrument.sensitivity"]
    own = demo.answer("demo", asked(source={"voltage_volt": 12, "resistance_ohm": 10}, instrument={"id": "remembered", "input_resistance_ohm": 2e5}))
    assert own["verdict"] == "acceptable" and own["unverified"] == []


def test_a_spread_that_reaches_the_impossible_decides_nothing(demo):
    answer = demo.answer("demo", asked(source={"voltage_volt": 12, "resistance_ohm": {"value": 5, "half_width": 10}}))
    assert answer["verdict"] == "undetermined" and answer["findings"][0]["code"] == "spread-leaves-range"


def test_samples_agree_with_the_scalar_back_end(demo):
    """Each of the 4 096 samples, computed alone by the scalar back end, gives the same bits."""
    question = demo.question("demo")
    body = asked(source={"voltage_volt": {"value": 12, "half_width": 2}, "resistance_ohm": {"value": 1e6, "standard_uncertainty": 1e5}, "reactance_ohm": 3e5})
    plan, found, _, _ = question.compute(question.intake(body))
    samples = found[plan.outputs["loaded"].samples].copy()      # the buffers serve the next question
    points = demo.points
    for i in range(0, 4096, 97):
        v, r = 12.0 + 2.0 * points.symmetric(0)[i], 1e6 + 1e5 * points.normal(1)[i]
        alone = results(demo, source={"voltage_volt": float(v), "resistance_ohm": float(r), "reactance_ohm": 3e5})
        assert alone["loaded_volt"]["value"] == samples[i]


FINITE = st.floats(0, 1000)


@settings(max_examples=150, deadline=None)
@given(FINITE, st.floats(0, 1e12), st.one_of(st.none(), st.floats(-1e9, 1e9)), st.floats(0, 400), st.lists(FINITE, max_size=3))
def test_answers_hold_no_nan_and_repeat(demo, voltage, resistance, reactance, spread, levels):
    body = asked(source={"voltage_volt": {"value": voltage, "half_width": spread}, "resistance_ohm": resistance, "reactance_ohm": reactance},
                 levels=[{"voltage_volt": v} for v in levels])
    first = json.dumps(demo.answer("demo", body), allow_nan=False)
    assert first == json.dumps(demo.answer("demo", json.loads(json.dumps(body))), allow_nan=False)


def test_another_process_gives_the_same_bytes(demo):
    body = asked(source={"voltage_volt": {"value": 12, "half_width": 1}, "resistance_ohm": {"between": [1e5, 3e5]}})
    script = ("import json, sys; from precontact_rules import RuleSet; from precontact_rules.authoring.build import build, canonical;"
              f"r = RuleSet(canonical(build({str(DEMO)!r})[0])); print(json.dumps(r.answer('demo', json.loads(sys.argv[1]))))")
    other = subprocess.run([sys.executable, "-c", script, json.dumps(body)], capture_output=True, text=True, check=True, env={"PYTHONPATH": ":".join(sys.path)}).stdout
    assert other.strip() == json.dumps(demo.answer("demo", body))


def test_spanish(demo):
    answer = demo.answer("demo", asked(), "es")
    assert answer["findings"][0]["sentence"] == "Lee 12\u00a0V." and answer["assumptions"][0]["because"] == "habitual"


@pytest.mark.parametrize("changes, pointer, code", [
    ({"circuit": "ring"}, "/circuit", "unknown-choice"),
    ({"circuit": None}, "/circuit", "missing"),
    ({"source": {"voltage_volt": "12", "resistance_ohm": 1}}, "/source/voltage_volt", "wrong-type"),
    ({"source": {"voltage_volt": True, "resistance_ohm": 1}}, "/source/voltage_volt", "wrong-type"),
    ({"source": {"voltage_volt": 12, "resistance_ohm": -1}}, "/source/resistance_ohm", "out-of-range"),
    ({"source": {"voltage_volt": math.nan, "resistance_ohm": 1}}, "/source/voltage_volt", "not-finite"),
    ({"source": {"voltage_volt": math.inf, "resistance_ohm": 1}}, "/source/voltage_volt", "not-finite"),
    ({"source": {"voltage_volt": 12}}, "/source/resistance_ohm", "missing"),
    ({"source": {"voltage_volt": {"value": 1, "half_width": 1, "standard_uncertainty": 1}, "resistance_ohm": 1}}, "/source/voltage_volt", "two-spreads"),
    ({"source": {"voltage_volt": {"value": 1, "half_width": -1}, "resistance_ohm": 1}}, "/source/voltage_volt/half_width", "out-of-range"),
    ({"source": {"voltage_volt": {"between": [1, 2, 3]}, "resistance_ohm": 1}}, "/source/voltage_volt/between", "wrong-type"),
    ({"limit_percent": {"value": 1, "half_width": 1}}, "/limit_percent", "not-uncertain"),
    ({"lower_resistance_ohm": 5}, "/lower_resistance_ohm", "not-applicable"),
    ({"circuit": "divider"}, "/lower_resistance_ohm", "missing"),
    ({"instrument": "nothing"}, "/instrument", "unknown-id"),
    ({"instrument": {"id": "digital", "input_resistence_ohm": 1}}, "/instrument/input_resistence_ohm", "unknown-field"),
    ({"instrument": 7}, "/instrument", "wrong-type"),
    ({"levels": [{"voltage_volt": 1}] * 5}, "/levels", "too-many-items"),
    ({"levels": [{"voltage_volt": 1}, {"acts": "rising"}]}, "/levels/1/voltage_volt", "missing"),
    ({"levels": [{"voltage_volt": 1, "acts": "sideways"}]}, "/levels/0/acts", "unknown-choice"),
    ({"levels": [{"voltage_volt": 1, "label": "x" * 21}]}, "/levels/0/label", "too-long"),
    ({"levels": [{"voltage_volt": 1, "label": "a\nb"}]}, "/levels/0/label", "bad-characters"),
    ({"extra": 1}, "/extra", "unknown-field"),
])
def test_every_problem_names_its_place(demo, changes, pointer, code):
    with pytest.raises(InputProblems) as raised:
        demo.answer("demo", asked(**changes))
    assert (pointer, code) in [(p.pointer, p.code) for p in raised.value.problems]
    assert all(p.detail for p in raised.value.problems)


def test_all_problems_at_once(demo):
    with pytest.raises(InputProblems) as raised:
        demo.answer("demo", {"circuit": "plain", "source": {"voltage_volt": -1, "resistance_ohm": -1}, "extra": 1})
    assert [p.pointer for p in raised.value.problems] == ["/source/voltage_volt", "/source/resistance_ohm", "/instrument", "/extra"]


@pytest.mark.parametrize("spread, low, high", [
    ({"value": 100, "half_width": 10}, 90.5, 109.5), ({"value": 100, "half_width_percent": 10}, 90.5, 109.5), ({"between": [110, 90]}, 90.5, 109.5),
    ({"value": 100, "standard_uncertainty": 10}, 100 - 19.6, 100 + 19.6),
])
def test_spreads_are_the_terms_of_jcgm_100(demo, spread, low, high):
    # rectangular: 95 % of the width (JCGM 100 4.3.7); normal: 1.96 standard uncertainties (JCGM 100 table G.1)
    body = asked(source={"voltage_volt": spread, "resistance_ohm": 0})
    found = demo.answer("demo", body)["results"]["loaded_volt"]
    assert (found["low"], found["high"]) == pytest.approx((low, high), abs=0.01)


def test_many_signatures_do_not_grow_without_end(demo):
    from precontact_rules import engine
    question = demo.question("demo")
    for i in range(3):
        question.answer(asked(levels=[{"voltage_volt": 1}] * i), "en")
    assert len(question._plans) <= engine.PLANS_KEPT


def test_fast_and_safe_code_agree(demo):
    question = demo.question("demo")
    intake = question.intake(asked())
    plan, found, _, _ = question.compute(intake)
    assert plan._fast.text.count("\n") == plan._safe.text.count("\n")
    assert isinstance(found, tuple) and not any(isinstance(v, np.floating) for v in found)

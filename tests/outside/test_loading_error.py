"""The loading error check against ngspice, root finding, a plain Monte Carlo, and the properties that physics demands."""
import json
import math

import numpy as np
import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st
from scipy.optimize import brentq

from precontact_rules import InputProblems

from .circuits import generate
from .monte_carlo import DRAWS, draws
from .ngspice import Netlist


def value(answer, name):
    """A result's value."""
    return answer["results"][name]["value"]


def interval(answer, name):
    """A result's coverage interval; a result without one is as wide as nothing."""
    result = answer["results"][name]
    return result.get("low", result["value"]), result.get("high", result["value"])


# ---- ngspice ---------------------------------------------------------------------------------------------------------------------------

KEYS = {"voltage": "_volt", "current": "_ampere"}


def key_of(name):
    """voltage results are in volt, current results in ampere."""
    return name + next(unit for kind, unit in KEYS.items() if kind in name)


@pytest.fixture(scope="module")
def simulated():
    """(request bodies by circuit, ngspice's values)"""
    netlist = Netlist()
    bodies = generate(netlist)
    found = netlist.run()
    return {name: make(found) for name, make in bodies.items()}, found


def test_ngspice_agrees_on_every_circuit(rule_set, simulated):
    bodies, found = simulated
    assert len(bodies) >= 200
    worst = 0.0
    for name, body in bodies.items():
        answer = rule_set.answer("loading-error", body)
        for (circuit, wanted), expected in found.items():
            if circuit != name:
                continue
            if wanted[:5] in ("befor", "after"):
                got = answer["results"][f"element_voltage_{wanted.rstrip('0123456789')}_volt"][int(wanted.lstrip("abcdefort"))]["value"]
            else:
                got = value(answer, key_of(wanted))
            worst = max(worst, abs(got / expected - 1))
            assert got == pytest.approx(expected, rel=1e-6), (name, wanted, body)
        kind = "current" if body["circuit"] == "series-ammeter" else "voltage"
        loss = found[name, f"loaded_{kind}"] / found[name, f"undisturbed_{kind}"] - 1
        assert value(answer, "loading_error_percent") == pytest.approx(100 * loss, rel=1e-6, abs=1e-7), name   # abs: ngspice's digits
    assert worst < 1e-6


def test_the_instrument_current_is_what_ngspice_sees_at_the_terminals(rule_set):
    """In a string the current that leaves the node for the instrument is the difference of the currents beside it."""
    netlist = Netlist()
    netlist.source("s", "a", 230.0, 50.0)
    netlist.impedance("z", "a", "b", 1e6)
    netlist.impedance("m", "b", "c", 1e7)
    netlist.add("cm1 b c 150e-12", "vsense c 0 dc 0 ac 0")
    netlist.measure("x", 50.0, current="i:sense")
    expected = netlist.run()["x", "current"]
    answer = rule_set.answer("loading-error", {
        "circuit": "thevenin", "frequency_hertz": 50, "source": {"voltage_volt": 230, "resistance_ohm": 1e6},
        "instrument": {"function": "voltage", "input_resistance_ohm": 1e7, "input_capacitance_farad": 150e-12}})
    assert value(answer, "instrument_current_ampere") == pytest.approx(expected, rel=1e-6)


# ---- the smallest sufficient resistance, by root finding -----------------------------------------------------------------------------

def factor(impedance, conductance, susceptance):
    """|1 + Z Y|, in plain complex arithmetic."""
    return abs(1 + impedance * complex(conductance, susceptance))


@pytest.mark.parametrize("seed", range(40))
def test_smallest_sufficient_resistance_is_the_root(rule_set, seed):
    rng = np.random.default_rng(seed)
    resistance, limit = float(10 ** rng.uniform(0, 7)), float(10 ** rng.uniform(-2, 1.5))
    body = {"circuit": "thevenin", "limit_percent": limit, "source": {"resistance_ohm": resistance},
            "instrument": {"function": "voltage", "input_resistance_ohm": 1e7}}
    impedance, susceptance = complex(resistance, 0), 0.0
    if seed % 2:
        frequency, capacitance = float(10 ** rng.uniform(1, 4)), float(10 ** rng.uniform(-11, -9))
        reactance = float(rng.uniform(-3, 3)) * resistance
        body["frequency_hertz"] = frequency
        body["instrument"]["input_capacitance_farad"] = capacitance
        body["source"]["reactance_ohm"] = reactance
        impedance, susceptance = complex(resistance, reactance), 2 * math.pi * frequency * capacitance
    answer = rule_set.answer("loading-error", body)
    low, high = 1 / (1 - limit / 100), 1 / (1 + limit / 100)
    got = value(answer, "smallest_sufficient_resistance_ohm")
    if factor(impedance, 0, susceptance) >= low:
        assert got is None
        assert "reason" in answer["results"]["smallest_sufficient_resistance_ohm"]
        assert "capacitance-alone-breaks-limit" in [f["code"] for f in answer["findings"]]
    else:
        root = brentq(lambda g: factor(impedance, g, susceptance) - low, 0, 1e6, xtol=1e-30, rtol=8.9e-16)
        assert got == pytest.approx(1 / root, rel=1e-9)
        if seed % 2 == 0:
            assert got == pytest.approx(resistance * (100 - limit) / limit, rel=1e-9)
    raised = value(answer, "largest_sufficient_resistance_ohm")
    if factor(impedance, 0, susceptance) < high:
        root = brentq(lambda g: factor(impedance, g, susceptance) - high, 0, 1e6, xtol=1e-30, rtol=8.9e-16)
        assert raised == pytest.approx(1 / root, rel=1e-9)
    else:
        assert raised is None


@pytest.mark.parametrize("resistance,reactance,limit", [(10, 0, 1), (1000, 500, 5), (3, -40, 0.1), (1e6, 1e6, 20)])
def test_largest_sufficient_burden_is_the_root(rule_set, resistance, reactance, limit):
    body = {"circuit": "series-ammeter", "limit_percent": limit, "source": {"resistance_ohm": resistance},
            "instrument": {"function": "current", "burden_resistance_ohm": 1}}
    if reactance:
        body["frequency_hertz"], body["source"]["reactance_ohm"] = 50, reactance
    impedance = complex(resistance, reactance)
    root = brentq(lambda b: abs(impedance) / abs(impedance + b) - (1 - limit / 100), 0, 1e9, xtol=1e-30, rtol=8.9e-16)
    assert value(rule_set.answer("loading-error", body), "largest_sufficient_burden_ohm") == pytest.approx(root, rel=1e-9)


def test_largest_sufficient_capacitance_is_the_root(rule_set):
    body = {"circuit": "thevenin", "frequency_hertz": 400, "limit_percent": 3, "source": {"resistance_ohm": 2e5},
            "instrument": {"function": "voltage", "input_resistance_ohm": 1e7, "input_capacitance_farad": 50e-12}}
    omega = 2 * math.pi * 400
    root = brentq(lambda c: factor(2e5, 1e-7, omega * c) - 1 / 0.97, 0, 1e-6, xtol=1e-30, rtol=8.9e-16)
    assert value(rule_set.answer("loading-error", body), "largest_sufficient_capacitance_farad") == pytest.approx(root, rel=1e-9)


# ---- Monte Carlo ---------------------------------------------------------------------------------------------------------------------------

def uncertain_cases():
    """Thevenin sources whose error lies about the limit, over the three kinds of spread, dc and ac."""
    rng = np.random.default_rng(7)
    cases = []
    for number in range(24):
        resistance = float(10 ** rng.uniform(4, 5.5))
        forms = [{"value": resistance, "half_width_percent": float(rng.uniform(5, 60))},
                 {"value": resistance, "standard_uncertainty": resistance * float(rng.uniform(0.02, 0.15))},
                 {"between": [resistance * float(rng.uniform(0.3, 0.9)), resistance * float(rng.uniform(1.1, 2))]}]
        source = {"resistance_ohm": forms[number % 3], "voltage_volt": {"value": 24, "half_width_percent": 5}}
        instrument = {"function": "voltage", "input_resistance_ohm": {"value": 1e7, "half_width_percent": float(rng.uniform(0.5, 10))}}
        body = {"circuit": "thevenin", "source": source, "instrument": instrument}
        if number % 2:
            body["frequency_hertz"] = 400
            instrument["input_capacitance_farad"] = {"value": 100e-12, "half_width_percent": 30}
            source["inductance_henry"] = {"value": 1.0, "standard_uncertainty": 0.1}
        impedance = complex(resistance, 2 * math.pi * 400 if number % 2 else 0)
        error = 1 - 1 / abs(1 + impedance * complex(1e-7, 2 * math.pi * 400 * 1e-10 if number % 2 else 0))
        body["limit_percent"] = min(100 * abs(error) * float(rng.uniform(0.8, 1.25)), 99)
        cases.append(body)
    return cases


@pytest.mark.parametrize("number,body", list(enumerate(uncertain_cases())))
def test_monte_carlo_agrees(rule_set, number, body):
    rng = np.random.default_rng(100 + number)
    source, instrument = body["source"], body["instrument"]
    omega = 2 * math.pi * body.get("frequency_hertz", 0)
    impedance = draws(rng, source["resistance_ohm"]) + 1j * omega * draws(rng, source.get("inductance_henry", 0))
    admittance = 1 / draws(rng, instrument["input_resistance_ohm"]) + 1j * omega * draws(rng, instrument.get("input_capacitance_farad", 0))
    size = np.abs(1 + impedance * admittance)
    error = 100 * (1 / size - 1)
    loaded = draws(rng, source["voltage_volt"]) / size
    answer = rule_set.answer("loading-error", body)
    expected = float(np.mean(np.abs(error) <= body["limit_percent"]))
    assert value(answer, "within_limit_probability_ratio") == pytest.approx(expected, abs=0.005)
    for name, sample in (("loading_error_percent", error), ("loaded_voltage_volt", loaded)):
        low, high = np.quantile(sample, [0.025, 0.975])
        got = interval(answer, name)
        assert got == pytest.approx((low, high), abs=0.01 * (high - low) / 2), name
    verdict = "acceptable" if expected > 0.955 else "unacceptable" if expected < 0.045 else "conditional" if 0.055 < expected < 0.945 else None
    if verdict is not None:
        assert answer["verdict"] == verdict


def test_monte_carlo_of_the_undisturbed_value(rule_set):
    """Reading, its own spread, the instrument's accuracy and the source's resistance, all at once."""
    body = {"circuit": "thevenin", "source": {"resistance_ohm": {"value": 2e5, "half_width_percent": 20}},
            "reading": {"voltage_volt": {"value": 100, "standard_uncertainty": 0.3}},
            "instrument": {"function": "voltage", "input_resistance_ohm": {"value": 1e7, "half_width_percent": 2}, **ACCURACY}}
    rng = np.random.default_rng(5)
    reading = rng.normal(100, 0.3, DRAWS)
    reading = reading + rng.uniform(-1, 1, DRAWS) * (0.01 * reading + 0.2)
    sample = reading * (1 + rng.uniform(1.6e5, 2.4e5, DRAWS) / rng.uniform(9.8e6, 1.02e7, DRAWS))
    low, high = np.quantile(sample, [0.025, 0.975])
    answer = rule_set.answer("loading-error", body)
    assert interval(answer, "undisturbed_voltage_read_volt") == pytest.approx((low, high), abs=0.01 * (high - low) / 2)


def test_monte_carlo_of_a_level_crossed(rule_set):
    """A logic input's level about the loaded voltage, both uncertain."""
    body = {"circuit": "thevenin", "source": {"voltage_volt": {"value": 12, "standard_uncertainty": 0.4}, "resistance_ohm": {"between": [8e4, 1.6e5]}},
            "instrument": {"function": "voltage", "input_resistance_ohm": 1e6},
            "thresholds": [{"label": "logic high", "voltage_volt": {"between": [10.6, 11.4]}}]}
    rng = np.random.default_rng(6)
    volts, ohms, level = rng.normal(12, 0.4, DRAWS), rng.uniform(8e4, 1.6e5, DRAWS), rng.uniform(10.6, 11.4, DRAWS)
    expected = float(np.mean((level <= volts) & (level > volts / (1 + ohms / 1e6))))
    answer = rule_set.answer("loading-error", body)
    assert answer["results"]["falls_through_probability_ratio"][0]["value"] == pytest.approx(expected, abs=0.005)
    assert "state-may-be-lost" in [f["code"] for f in answer["findings"]]


ACCURACY = {"percent_of_reading_percent": 1, "digits_count": 2, "resolution_voltage_volt": 0.1}


# ---- properties ----------------------------------------------------------------------------------------------------------------------------

OFTEN = settings(max_examples=150, deadline=None, suppress_health_check=[HealthCheck.function_scoped_fixture])
ohms = st.floats(1e-3, 1e12)
volts = st.floats(1e-3, 1e5)


def plain(resistance, input_resistance, voltage=None, **more):
    """A dc source behind a resistance, read by a voltage input."""
    source = {"resistance_ohm": resistance, **({} if voltage is None else {"voltage_volt": voltage})}
    return {"circuit": "thevenin", "source": source, "instrument": {"function": "voltage", "input_resistance_ohm": input_resistance}, **more}


@OFTEN
@given(resistance=ohms, first=ohms, second=ohms)
def test_error_falls_as_the_input_resistance_rises(rule_set, resistance, first, second):
    low, high = sorted((first, second))
    errors = [abs(value(rule_set.answer("loading-error", plain(resistance, r)), "loading_error_percent")) for r in (low, high)]
    assert errors[1] <= errors[0] * (1 + 1e-12)


@OFTEN
@given(resistance=ohms, input_resistance=ohms, voltage=volts, scale=st.integers(-8, 3))
def test_voltage_scales_and_the_error_does_not(rule_set, resistance, input_resistance, voltage, scale):
    one = rule_set.answer("loading-error", plain(resistance, input_resistance, voltage))
    two = rule_set.answer("loading-error", plain(resistance, input_resistance, voltage * 2.0 ** scale))
    assert value(one, "loading_error_percent") == value(two, "loading_error_percent")
    for name in ("loaded_voltage_volt", "instrument_current_ampere"):
        assert value(two, name) == value(one, name) * 2.0 ** scale       # a power of two scales without rounding


@OFTEN
@given(resistance=ohms, input_resistance=ohms, scale=st.integers(-10, 9))
def test_impedance_scales_and_the_error_does_not(rule_set, resistance, input_resistance, scale):
    one = rule_set.answer("loading-error", plain(resistance, input_resistance))
    two = rule_set.answer("loading-error", plain(resistance * 2.0 ** scale, input_resistance * 2.0 ** scale))
    assert value(one, "loading_error_percent") == value(two, "loading_error_percent")


@OFTEN
@given(resistance=st.floats(1, 1e8), input_resistance=st.floats(1, 1e8), narrow=st.floats(0, 40), wide=st.floats(0, 40))
def test_a_wider_spread_never_narrows_the_interval(rule_set, resistance, input_resistance, narrow, wide):
    narrow, wide = sorted((narrow, wide))
    ends = []
    for percent in (narrow, wide):
        spread = {"value": resistance, "half_width_percent": percent}
        ends.append(interval(rule_set.answer("loading-error", plain(spread, input_resistance, 100.0)), "loaded_voltage_volt"))
    slack = 1e-12 * abs(ends[0][1])
    assert ends[1][0] <= ends[0][0] + slack and ends[1][1] >= ends[0][1] - slack


def spread_of(value_strategy):
    """A number as a request may state it: plain or with one of its spreads."""
    return st.one_of(value_strategy, st.builds(lambda v, p: {"value": v, "half_width_percent": p}, value_strategy, st.floats(0, 100)),
                     st.builds(lambda v, p: {"value": v, "standard_uncertainty": v * p}, value_strategy, st.floats(0, 0.2)),
                     st.builds(lambda a, b: {"between": [a, b]}, value_strategy, value_strategy))


any_ohms = st.one_of(st.floats(0, 1e15), st.just(0.0), st.floats(1e-300, 1e-200))
any_volts = st.one_of(st.floats(0, 1e6), st.just(0.0), st.floats(1e-300, 1e-200))


@st.composite
def any_body(draw):
    """Bodies of the right shape with unreasonable numbers."""
    circuit = draw(st.sampled_from(["thevenin", "divider", "series-string", "series-ammeter"]))
    body = {"circuit": circuit}
    voltage = {"voltage_volt": draw(spread_of(any_volts))} if draw(st.booleans()) else {}
    if circuit in ("thevenin", "series-ammeter"):
        body["source"] = {"resistance_ohm": draw(spread_of(any_ohms)), **voltage}
        if draw(st.booleans()):
            body["source"]["reactance_ohm"] = draw(st.floats(-1e15, 1e15))
    else:
        body["supply"] = {**voltage}
    if circuit == "divider":
        body["measured"] = draw(st.sampled_from(["upper", "lower"]))
        for which in ("upper", "lower"):
            body[which] = {"resistance_ohm": draw(spread_of(any_ohms))} if draw(st.booleans()) else {"capacitance_farad": draw(st.floats(0, 1e3))}
    if circuit == "series-string":
        body["elements"] = [{"resistance_ohm": draw(any_ohms), "measured": draw(st.booleans())} for _ in range(draw(st.integers(1, 4)))]
    if draw(st.booleans()):
        body["frequency_hertz"] = draw(st.floats(1e-300, 1e7))
    function = draw(st.sampled_from(["voltage", "current", "clamp"]))
    body["instrument"] = {"function": function}
    if function == "voltage":
        body["instrument"] |= {"input_resistance_ohm": draw(spread_of(st.floats(1e-300, 1e15))), "input_capacitance_farad": draw(st.floats(0, 1))}
    if function == "current":
        body["instrument"] |= {"burden_resistance_ohm": draw(spread_of(any_ohms))}
    kind = "current_ampere" if circuit == "series-ammeter" else "voltage_volt"
    if draw(st.booleans()):
        body["reading"] = {kind: draw(st.floats(0, 1e5))}
    if draw(st.booleans()):
        body["thresholds"] = [{"label": "x", kind: draw(st.floats(0, 1e5))} for _ in range(draw(st.integers(0, 3)))]
    return body


@settings(max_examples=400, deadline=None, suppress_health_check=[HealthCheck.function_scoped_fixture, HealthCheck.too_slow])
@given(body=any_body())
def test_the_answer_never_holds_what_json_cannot_say(rule_set, body):
    try:
        answer = rule_set.answer("loading-error", body)
    except InputProblems:
        return
    json.dumps(answer, allow_nan=False)
    assert answer["verdict"] in ("acceptable", "conditional", "unacceptable", "undetermined")
    assert answer["findings"]


# ---- what must be refused ------------------------------------------------------------------------------------------------------------------

def test_a_negative_resistance_is_refused(rule_set):
    """College Physics section 21.4, 'Unreasonable Results': a 40 ohm, 25 uA movement made to read 10 uA would need -66.7 ohm."""
    needed = 40.0 * 25e-6 / (10e-6 - 25e-6)
    assert needed == pytest.approx(-66.7, abs=0.05)
    for body, place in ((plain(1000, needed), "/instrument/input_resistance_ohm"), (plain(needed, 1e7), "/source/resistance_ohm")):
        with pytest.raises(InputProblems) as refused:
            rule_set.answer("loading-error", body)
        assert [(p.pointer, p.code) for p in refused.value.problems] == [(place, "out-of-range")]

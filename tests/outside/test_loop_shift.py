"""The loop shift check against ngspice, a plain Monte Carlo, the levels of NAMUR NE 43, and the properties that physics demands."""
import json
import math

import numpy as np
import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st
from scipy.optimize import brentq

from precontact_rules import InputProblems

from .loop_bodies import any_body, milliammeter, two_wire, voltmeter
from .loops import CONNECTIONS, SLOPE, TOP, simulate
from .monte_carlo import DRAWS, draws

CHECK = "loop-shift"


def ask(rule_set, body):
    """The answer to a request body."""
    return rule_set.answer(CHECK, body)


def value(answer, name):
    """A result's value."""
    return answer["results"][name]["value"]


def interval(answer, name):
    """A result's coverage interval; a result without one is as wide as nothing."""
    result = answer["results"][name]
    return result.get("low", result["value"]), result.get("high", result["value"])


def codes(answer):
    """The codes of an answer's findings."""
    return [finding["code"] for finding in answer["findings"]]


# ---- ngspice ---------------------------------------------------------------------------------------------------------------------------

@pytest.fixture(scope="module")
def simulated():
    """(loops, ngspice's values)"""
    return simulate()


def states(loop, found):
    """[(before or after, what is real then)]"""
    return [("before", loop.state(found, "f")), ("after", loop.state(found, "w"))]


def test_ngspice_agrees_on_every_loop(rule_set, simulated):
    loops, found = simulated
    assert len(loops) >= 200
    checked = 0
    for loop in loops:
        answer = ask(rule_set, loop.body())
        current_loop = answer["results"].get("receiver_current_before_ampere") is not None
        for name, real in states(loop, found):
            if real is None:      # the transmitter has no operating point
                assert value(answer, f"receiver_voltage_{name}_volt") is None, loop.body()
                continue
            checked += 1
            assert value(answer, f"receiver_voltage_{name}_volt") == pytest.approx(real[0], rel=1e-6), loop.body()
            if current_loop:
                assert value(answer, f"receiver_current_{name}_ampere") == pytest.approx(real[0] / loop.receiver, rel=1e-6)
                assert value(answer, f"transmitter_voltage_{name}_volt") == pytest.approx(real[1], rel=1e-6), loop.body()
    assert checked >= 400


def test_ngspice_agrees_on_the_shift_itself(rule_set, simulated):
    loops, found = simulated
    moved = 0
    for loop in loops:
        (_, before), (_, after) = states(loop, found)
        if before is None or after is None:
            continue
        shift = after[0] - before[0]
        answer = ask(rule_set, loop.body())
        assert value(answer, "shift_voltage_volt") == pytest.approx(shift, rel=1e-6, abs=1e-12 * abs(before[0])), loop.body()
        moved += abs(shift) > 1e-6 * abs(before[0])
    assert moved >= 80


def test_the_circuits_reach_every_state_of_a_transmitter(simulated):
    """Every kind of loop with a current limit is met while it suffices and at its limit; two-wire loops also without any operating point."""
    loops, found = simulated
    seen = set()
    for loop in loops:
        for _, real in states(loop, found):
            kind = type(loop).__name__
            at_limit = real is not None and hasattr(loop, "suffices") and not math.isclose(real[0] / loop.receiver, loop.current, rel_tol=1e-9)
            seen.add((kind, "none" if real is None else "limit" if at_limit else "set"))
    assert {("TwoWire", "none"), ("TwoWire", "limit"), ("TwoWire", "set"), ("FourWire", "limit"), ("FourWire", "set")} <= seen
    assert {type(loop).__name__ for loop in loops} == {"TwoWire", "FourWire", "VoltageSignal"} and len(CONNECTIONS) == 3


def test_ngspice_agrees_on_the_current_left_in_the_test_diode(rule_set, simulated):
    loops, found = simulated
    checked = 0
    for loop in loops:
        if loop.connection != "across-test-diode":
            continue
        left = loop.current - found["loops", f"{loop.name}wi_meter"] / loop.meter
        answer = ask(rule_set, loop.body())
        # what is left is a difference in ngspice's own digits: its error is a part of the whole current
        assert value(answer, "diode_current_ampere") == pytest.approx(left, rel=1e-6, abs=1e-11 * loop.current), loop.body()
        checked += 1
    assert checked >= 40


# ---- the rest of the numbers, by root finding ------------------------------------------------------------------------------------------

@pytest.mark.parametrize("seed", range(30))
def test_current_left_in_the_test_diode_is_the_root(rule_set, seed):
    rng = np.random.default_rng(seed)
    ohms, current, forward = float(10 ** rng.uniform(-2, 4)), float(rng.uniform(0.001, 0.023)), float(rng.uniform(0.3, 1.0))
    body = two_wire("across-test-diode", milliammeter(ohms), current * 1000, test_diode={"forward_voltage_volt": forward})
    saturation = TOP / math.expm1(forward / SLOPE)
    current = body["transmitter"]["output_current_ampere"]
    root = brentq(lambda v: v / ohms + saturation * math.expm1(v / SLOPE) - current, 0, min(ohms * current, forward + 1), xtol=1e-18, rtol=8.9e-16)
    answer = ask(rule_set, body)
    assert value(answer, "diode_drop_volt") == pytest.approx(root, rel=1e-9)
    assert value(answer, "diode_current_ampere") == pytest.approx(saturation * math.expm1(root / SLOPE), rel=1e-9)


@pytest.mark.parametrize("connection", ["across-receiver", "across-transmitter"])
@pytest.mark.parametrize("loop", ["two-wire", "four-wire", "voltage-signal"])
def test_the_smallest_sufficient_resistance_just_keeps_the_limit(rule_set, loop, connection):
    rng = np.random.default_rng(3)
    for _ in range(10):
        body = two_wire(connection, voltmeter(100.0), float(rng.uniform(5, 19)), limit_percent=float(rng.uniform(0.05, 5)), loop=loop)
        if loop != "two-wire":
            del body["supply"], body["liftoff"]
        if loop == "voltage-signal":
            body |= {"signal": "1-5-v", "receiver": {"resistance_ohm": 1e5},
                     "transmitter": {"output_voltage_volt": float(rng.uniform(1, 5)), "output_resistance_ohm": float(rng.uniform(10, 1e4))}}
        needed = value(ask(rule_set, body), "smallest_sufficient_resistance_ohm")
        if loop == "four-wire" and connection == "across-transmitter":
            body["wire"] = {"resistance_ohm": 80}
            needed = value(ask(rule_set, body), "smallest_sufficient_resistance_ohm")
        assert needed > 0
        shift = value(ask(rule_set, {**body, "instrument": voltmeter(needed)}), "shift_percent")
        assert abs(shift) == pytest.approx(body["limit_percent"], rel=1e-9), body


@pytest.mark.parametrize("seed", range(20))
def test_the_largest_sufficient_burden_just_leaves_enough_voltage(rule_set, seed):
    rng = np.random.default_rng(seed)
    corners = {"low_current_ampere": 0.004, "low_voltage_volt": float(rng.uniform(8, 16)),
               "high_current_ampere": 0.022, "high_voltage_volt": float(rng.uniform(8, 14))}
    body = two_wire("in-series", milliammeter(1.0), bridged=True, liftoff=corners, supply={"voltage_volt": float(rng.uniform(22, 40))})
    burden = value(ask(rule_set, body), "largest_sufficient_burden_ohm")
    left = ask(rule_set, {**body, "instrument": milliammeter(burden)})["results"]
    assert min(left["headroom_low_after_volt"]["value"], left["headroom_top_after_volt"]["value"]) == pytest.approx(0, abs=1e-9)
    assert left["supply_needed_after_volt"]["value"] == pytest.approx(body["supply"]["voltage_volt"], rel=1e-9)


@pytest.mark.parametrize("connection", CONNECTIONS["two-wire"][:4])
def test_points_of_the_span_are_what_asking_there_gives(rule_set, connection):
    instrument = milliammeter(300.0) if connection == "in-series" else voltmeter(2000.0)
    profile = ask(rule_set, two_wire(connection, instrument, 12))
    points = {**{name: [item["value"] for item in result] for name, result in profile["results"].items() if name.startswith("point_")},
              **{step["name"]: step["value"] for step in profile["working"] if step["name"].startswith("point_current")}}
    for place, milliamps in enumerate((4, 8, 12, 16, 20)):
        answer = ask(rule_set, two_wire(connection, instrument, milliamps))
        for point, name in (("point_current_before", "receiver_current_before_ampere"), ("point_current_after", "receiver_current_after_ampere"),
                            ("point_voltage_before_volt", "transmitter_voltage_before_volt"), ("point_voltage_after_volt", "transmitter_voltage_after_volt"),
                            ("point_signal_after_percent", "signal_after_percent")):
            assert points[point][place] == pytest.approx(value(answer, name), rel=1e-12, abs=1e-12), (connection, milliamps, point)


# ---- NAMUR NE 43 -----------------------------------------------------------------------------------------------------------------------

def ne_43(milliamps):
    """NE 43: measuring information 3.8 to 20.5 mA, failure information at or below 3.6 mA and at or above 21.0 mA."""
    if milliamps <= 3.6:
        return "failure-low"
    if milliamps >= 21.0:
        return "failure-high"
    if 3.8 <= milliamps <= 20.5:
        return "measuring"
    return "below-measuring" if milliamps < 3.8 else "above-measuring"


@pytest.mark.parametrize("milliamps", [0, 1, 3.5, 3.59, 3.6, 3.61, 3.7, 3.79, 3.8, 3.81, 4, 12, 20, 20.49, 20.5, 20.51, 20.99, 21.0, 21.01, 22, 23.6])
def test_ne_43_levels(rule_set, milliamps):
    answer = ask(rule_set, two_wire("clamp", {"function": "clamp"}, milliamps))
    assert answer["results"]["state_before"]["value"] == answer["results"]["state_after"]["value"] == ne_43(milliamps)


@settings(max_examples=200, deadline=None, suppress_health_check=[HealthCheck.function_scoped_fixture])
@given(milliamps=st.floats(3.0, 23.0), ohms=st.floats(10, 1e5))
def test_ne_43_state_after_is_the_state_of_the_current_after(rule_set, milliamps, ohms):
    answer = ask(rule_set, two_wire("across-receiver", voltmeter(ohms), milliamps))
    after = value(answer, "receiver_current_after_ampere")
    edges = np.array([0.0036, 0.0038, 0.0205, 0.021])
    if np.min(np.abs(after - edges)) > 1e-12:
        assert answer["results"]["state_after"]["value"] == ne_43(after * 1000)
    failed = ne_43(after * 1000).startswith("failure") and not ne_43(milliamps).startswith("failure")
    assert ("signal-becomes-failure" in codes(answer)) == failed


# ---- alarms, trips, safety ---------------------------------------------------------------------------------------------------------------

@settings(max_examples=200, deadline=None, suppress_health_check=[HealthCheck.function_scoped_fixture])
@given(milliamps=st.floats(4.0, 20.0), ohms=st.floats(500, 1e6), level=st.floats(-10, 110), rising=st.booleans(), trip=st.booleans(), safety=st.booleans(),
       connection=st.sampled_from(["across-receiver", "across-transmitter"]))
def test_a_level_between_before_and_after_is_reported(rule_set, milliamps, ohms, level, rising, trip, safety, connection):
    setpoint = {"label": "L", "level_percent": level, "direction": "rising" if rising else "falling", "action": "trip" if trip else "alarm"}
    answer = ask(rule_set, two_wire(connection, voltmeter(ohms), milliamps, setpoints=[setpoint], safety_function=safety))
    before, after = value(answer, "signal_before_percent"), value(answer, "signal_after_percent")
    if min(abs(before - level), abs(after - level)) < 1e-9:
        return
    crossed = before < level <= after if rising else before > level >= after
    assert (answer["results"]["crossing_probability_ratio"][0]["value"] == 1) == crossed
    assert (("trip-reached" if trip else "alarm-reached") in codes(answer)) == crossed
    assert ("safety-trip-reached" in codes(answer)) == (crossed and trip and safety)
    if crossed:
        assert answer["verdict"] == ("unacceptable" if trip or abs(after - before) > 1 else "conditional")


@pytest.mark.parametrize("loop", ["two-wire", "four-wire"])
def test_a_safety_loop_may_never_be_opened(rule_set, loop):
    body = two_wire("in-series", milliammeter(1.0), safety_function=True, loop=loop)
    if loop == "four-wire":
        del body["supply"], body["liftoff"]
        body["transmitter"]["compliance_voltage_volt"] = 20
    assert ask(rule_set, body)["verdict"] == "unacceptable"
    assert "safety-loop-opened" in codes(ask(rule_set, body))
    assert ask(rule_set, {**body, "bridged": True})["verdict"] == "acceptable"
    assert "opening-loop" in [c["id"] for c in ask(rule_set, body)["cautions"]]


# ---- Monte Carlo ---------------------------------------------------------------------------------------------------------------------------

def uncertain_loops():
    """Two-wire loops with a burden in series or a voltmeter across the receiver or the transmitter, about their limits."""
    rng = np.random.default_rng(11)
    cases = []
    for number in range(18):
        connection = ("in-series", "across-receiver", "across-transmitter")[number % 3]
        current = {"value": float(rng.uniform(0.010, 0.018)), "standard_uncertainty": 0.0002}
        volts = {"value": 24, "half_width_percent": float(rng.uniform(2, 8))}
        if connection == "in-series":
            spare = 12 / current["value"] - 250
            meter = {"between": [0.9 * spare, 1.05 * spare]}
        else:
            meter = {"value": float(10 ** rng.uniform(3.6, 4.4)), "half_width_percent": 20}
        body = two_wire(connection, milliammeter(meter) if connection == "in-series" else voltmeter(meter), bridged=True)
        body["transmitter"], body["supply"] = {"output_current_ampere": current}, {"voltage_volt": volts}
        body["receiver"] = {"resistance_ohm": {"value": 250, "half_width_percent": 1}}
        cases.append(body)
    return cases


def by_hand(body, current, volts, receiver, meter):
    """Currents before and after of one loop with a 12 V transmitter, from the node equations of each connection."""
    free = np.minimum(current, (volts - 12) / receiver)
    if body["connection"] == "in-series":
        return free, np.minimum(current, (volts - 12) / (receiver + meter))
    if body["connection"] == "across-receiver":
        both = 1 / (1 / receiver + 1 / meter)
        return free, np.minimum(current, (volts - 12) / both) * both / receiver
    # across the transmitter: (U - V)/R = I + V/m while V >= 12, else V = 12
    at = (volts / receiver - current) / (1 / receiver + 1 / meter)
    return free, (volts - np.maximum(at, 12)) / receiver


@pytest.mark.parametrize("number,body", list(enumerate(uncertain_loops())))
def test_monte_carlo_agrees(rule_set, number, body):
    rng = np.random.default_rng(200 + number)
    meter = body["instrument"].get("input_resistance_ohm", body["instrument"].get("burden_resistance_ohm"))
    sampled = [draws(rng, x) + np.zeros(DRAWS) for x in (body["transmitter"]["output_current_ampere"], body["supply"]["voltage_volt"], body["receiver"]["resistance_ohm"], meter)]
    before, after = by_hand(body, *sampled)
    shift = (after - before) / 0.016 * 100
    limit = float(np.quantile(np.abs(shift), 0.6)) or 1.0
    level = float(np.quantile((after - 0.004) / 0.016 * 100, 0.3))
    body = {**body, "limit_percent": limit, "setpoints": [{"label": "L", "level_percent": level, "direction": "falling", "action": "alarm"}]}
    answer = ask(rule_set, body)
    assert value(answer, "within_limit_probability_ratio") == pytest.approx(np.mean(np.abs(shift) <= limit), abs=0.005)
    crossed = np.mean(((before - 0.004) / 0.016 * 100 > level) & ((after - 0.004) / 0.016 * 100 <= level))
    assert answer["results"]["crossing_probability_ratio"][0]["value"] == pytest.approx(crossed, abs=0.005)
    for name, sample in (("receiver_current_after_ampere", after), ("shift_percent", shift)):
        low, high = np.quantile(sample, [0.025, 0.975])
        assert interval(answer, name) == pytest.approx((low, high), abs=0.01 * (high - low) / 2), name


# ---- properties ----------------------------------------------------------------------------------------------------------------------------

ACROSS = CONNECTIONS["two-wire"][:3]
OFTEN = settings(max_examples=150, deadline=None, suppress_health_check=[HealthCheck.function_scoped_fixture])


@OFTEN
@given(milliamps=st.floats(4, 20), first=st.floats(1, 1e12), second=st.floats(1, 1e12))
def test_the_shift_falls_as_the_resistance_across_the_receiver_rises(rule_set, milliamps, first, second):
    low, high = sorted((first, second))
    shifts = [abs(value(ask(rule_set, two_wire("across-receiver", voltmeter(r), milliamps)), "shift_percent")) for r in (low, high)]
    assert shifts[1] <= shifts[0] * (1 + 1e-12)


@OFTEN
@given(milliamps=st.floats(4, 20), first=st.floats(0, 1e4), second=st.floats(0, 1e4))
def test_more_burden_never_leaves_more_headroom(rule_set, milliamps, first, second):
    low, high = sorted((first, second))
    answers = [ask(rule_set, two_wire("in-series", milliammeter(r), milliamps, bridged=True)) for r in (low, high)]
    for name in ("headroom_top_after_volt", "receiver_current_after_ampere", "highest_current_after_ampere"):
        assert value(answers[1], name) <= value(answers[0], name)


@OFTEN
@given(milliamps=st.floats(4, 20), ohms=st.floats(100, 1e9), scale=st.integers(-3, 5), connection=st.sampled_from(ACROSS))
def test_voltages_and_resistances_scale_together(rule_set, milliamps, ohms, scale, connection):
    """All voltages and resistances doubled leave every current as it was, to the last bit."""
    factor = 2.0 ** scale
    one = two_wire(connection, voltmeter(ohms), milliamps)
    two = {**one, "instrument": voltmeter(ohms * factor), "supply": {"voltage_volt": 24 * factor}, "liftoff": {"voltage_volt": 12 * factor},
           "receiver": {"resistance_ohm": 250 * factor}}
    one, two = ask(rule_set, one), ask(rule_set, two)
    for name in ("shift_current_ampere", "receiver_current_after_ampere", "shift_percent"):
        assert value(one, name) == value(two, name)
    at = value(one, "transmitter_voltage_after_volt")
    assert value(two, "transmitter_voltage_after_volt") == (None if at is None else at * factor)


@OFTEN
@given(milliamps=st.floats(4, 20), ohms=st.floats(500, 1e7), low=st.floats(-1000, 1000), span=st.floats(1e-3, 1e5), factor=st.integers(-8, 8))
def test_the_process_unit_scales(rule_set, milliamps, ohms, low, span, factor):
    ranges = [{"low_process_unit": low * k, "high_process_unit": (low + span) * k} for k in (1.0, 2.0 ** factor)]
    answers = [ask(rule_set, two_wire("across-receiver", voltmeter(ohms), milliamps, process=process)) for process in ranges]
    first, second = (value(a, "process_value_shift_process_unit") for a in answers)
    assert second == first * 2.0 ** factor
    assert value(answers[0], "shift_percent") == value(answers[1], "shift_percent")


@OFTEN
@given(milliamps=st.floats(4, 20), ohms=st.floats(300, 1e6), narrow=st.floats(0, 40), wide=st.floats(0, 40), connection=st.sampled_from(ACROSS))
def test_a_wider_spread_never_narrows_the_interval(rule_set, milliamps, ohms, narrow, wide, connection):
    narrow, wide = sorted((narrow, wide))
    ends = []
    for percent in (narrow, wide):
        body = two_wire(connection, voltmeter({"value": ohms, "half_width_percent": percent}), milliamps, liftoff={"voltage_volt": 1})
        ends.append(interval(ask(rule_set, body), "receiver_current_after_ampere"))
    slack = 1e-12 * abs(ends[0][1])
    assert ends[1][0] <= ends[0][0] + slack and ends[1][1] >= ends[0][1] - slack


@settings(max_examples=300, deadline=None, suppress_health_check=[HealthCheck.function_scoped_fixture, HealthCheck.too_slow])
@given(body=any_body())
def test_the_answer_never_holds_what_json_cannot_say(rule_set, body):
    try:
        answer = ask(rule_set, body)
    except InputProblems:
        return
    json.dumps(answer, allow_nan=False)
    assert answer["verdict"] in ("acceptable", "conditional", "unacceptable", "undetermined")
    assert answer["findings"]
    opened = body["connection"] == "in-series" and not body.get("bridged")
    if opened and body.get("safety_function"):
        assert answer["verdict"] in ("unacceptable", "undetermined")


# ---- what must be refused ------------------------------------------------------------------------------------------------------------------

@pytest.mark.parametrize("change,place,code", [
    ({"loop": "four-wire", "connection": "across-supply"}, "/connection", "not-applicable"),
    ({"connection": "across"}, "/connection", "unknown-choice"),
    ({"signal": "4-20"}, "/signal", "unknown-id"),
    ({"receiver": {"resistance_ohm": -250}}, "/receiver/resistance_ohm", "out-of-range"),
    ({"receiver": {}}, "/receiver/resistance_ohm", "missing"),
    ({"setpoints": [{"label": "x", "level_percent": 5, "direction": "up", "action": "trip"}]}, "/setpoints/0/direction", "unknown-choice"),
])
def test_what_is_refused(rule_set, change, place, code):
    with pytest.raises(InputProblems) as refused:
        ask(rule_set, {**two_wire("across-receiver", voltmeter(1e7)), **change})
    assert (place, code) in [(p.pointer, p.code) for p in refused.value.problems]

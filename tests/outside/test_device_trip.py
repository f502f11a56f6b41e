"""The device trip check against the standards' points, Monte Carlo, ngspice, sampled waves, and the properties that physics demands."""
import json
import math

import numpy as np
import pytest
from hypothesis import HealthCheck, assume, given, settings
from hypothesis import strategies as st

from precontact_rules import InputProblems

from .ngspice import Netlist
from .trips import BANDS, detector_case, monitor_case, relay_case, residual_cases, residual_draws, sampled_rms

REJECT, ACCEPT = 0.05, 0.95       # decision rule after JCGM 106, as limits.yaml states it


def value(answer, name):
    """A result's value."""
    return answer["results"][name]["value"]


def codes(answer):
    """Codes of the findings."""
    return [f["code"] for f in answer["findings"]]


def voltage_input(resistance, **more):
    """A voltage input that is rated for everything asked here."""
    return {"function": "voltage", "input_resistance_ohm": resistance, "rated_voltage_volt": 1000, **more}


def bridged(device, voltage, resistance, frequency=50, **more):
    """A line bridged to earth behind a device."""
    body = {"protection": "residual-current", "connection": "line-to-earth", "device": device,
            "circuit": {"voltage_volt": voltage}, "instrument": voltage_input(resistance), **more}
    return body if frequency is None else {"frequency_hertz": frequency, **body}


# ---- the standards' points -----------------------------------------------------------------------------------------------------------

@pytest.mark.parametrize("milliampere,seconds", [(6, 5.594), (10, 2.694), (20, 1.000), (30, 0.560), (50, 0.270), (100, 0.100), (264, 0.0250), (400, 0.0250)])
def test_class_a_time_limit(rule_set, milliampere, seconds):
    """UL 943: T = (20/I)^1.43 from 6 to 264 mA, above that the time of 264 mA."""
    answer = rule_set.answer("device-trip", bridged("class-a-ground-fault", milliampere, 1000, 60))
    assert value(answer, "longest_time_second") == pytest.approx(seconds, abs=0.0006)      # the printed digits
    assert value(answer, "longest_time_second") == pytest.approx((20 / min(milliampere, 264)) ** 1.43, rel=1e-12)


@pytest.mark.parametrize("milliampere,probability", [(3.9, 0), (4, 0), (4.5, 0.25), (5, 0.5), (6, 1), (7, 1)])
def test_class_a_band(rule_set, milliampere, probability):
    """NEC article 100: class A does not trip below 4 mA and trips at 6 mA or more; there is no time below 6 mA."""
    answer = rule_set.answer("device-trip", bridged("class-a-ground-fault", milliampere, 1000, 60))
    assert value(answer, "trip_probability_ratio") == pytest.approx(probability, abs=1e-9)
    assert (value(answer, "longest_time_second") is None) == (milliampere < 6)


@pytest.mark.parametrize("device,rated", [("iec-general-ac-30ma", 30), ("iec-general-ac-300ma", 300), ("iec-general-a-10ma", 10), ("iec-general-a-30ma", 30),
                                          ("iec-general-a-100ma", 100), ("iec-general-a-300ma", 300), ("iec-general-f-30ma", 30), ("iec-general-b-30ma", 30)])
@pytest.mark.parametrize("multiple,longest", [(0.5, None), (0.99, None), (1, 0.3), (1.9, 0.3), (2, 0.15), (5, 0.04), (20, 0.04)])
def test_general_time_limit(rule_set, device, rated, multiple, longest):
    """IEC 61008-1 Table 1, general type; nothing is demanded below the rated residual current."""
    answer = rule_set.answer("device-trip", bridged(device, multiple * rated * (1 + 1e-12), 1000))
    assert value(answer, "longest_time_second") == longest
    assert value(answer, "shortest_time_second") is None
    assert value(answer, "trip_probability_ratio") == pytest.approx(min(max(2 * multiple - 1, 0), 1), abs=1e-9)


@pytest.mark.parametrize("rated,device", [(100, "iec-selective-a-100ma"), (300, "iec-selective-a-300ma"), (300, "iec-selective-b-300ma")])
@pytest.mark.parametrize("multiple,longest,shortest", [(1, 0.5, 0.13), (2, 0.2, 0.06), (5, 0.15, 0.05)])
def test_selective_time_limits(rule_set, rated, device, multiple, longest, shortest):
    """IEC 61008-1 Table 1, type S."""
    answer = rule_set.answer("device-trip", bridged(device, multiple * rated * (1 + 1e-12), 1000))
    assert (value(answer, "longest_time_second"), value(answer, "shortest_time_second")) == (longest, shortest)


@pytest.mark.parametrize("device,level", [("iec-general-a-30ma", 6), ("iec-selective-a-300ma", 6), ("iec-general-f-30ma", 10), ("iec-general-b-30ma", 12), ("iec-general-b-300ma", 120)])
def test_smooth_dc_levels(rule_set, device, level):
    """BS 7671 regulation 531.3.3 notes 1 to 3: type A 6 mA, type F 10 mA, type B the greater of 0.4 times the rating and 10 mA."""
    for milliampere, blinded in ((level * 0.999, False), (level * 1.001, True)):
        answer = rule_set.answer("device-trip", bridged(device, milliampere, 1000, None))
        assert ("blinds-the-device" in codes(answer)) == blinded


# ---- Monte Carlo ---------------------------------------------------------------------------------------------------------------------

@pytest.mark.parametrize("number,body", list(enumerate(residual_cases(60))))
def test_trip_probability(rule_set, number, body):
    """Uncertain leakage, unknown angle, uncertain voltage and impedance; the threshold is drawn, not integrated."""
    rng = np.random.default_rng(1000 + number)
    residual = residual_draws(rng, body)
    expected = float(np.mean(residual >= rng.uniform(*BANDS[body["device"]], residual.size if np.ndim(residual) else 1_000_000)))
    answer = rule_set.answer("device-trip", body)
    assert value(answer, "trip_probability_ratio") == pytest.approx(expected, abs=0.005)
    if np.ndim(residual):
        low, high = np.quantile(residual, [0.025, 0.975])
        got = answer["results"]["residual_current_ampere"]
        assert (got["low"], got["high"]) == pytest.approx((low, high), abs=0.01 * (high - low) / 2)
    verdict = "unacceptable" if expected > ACCEPT + 0.005 else "acceptable" if expected < REJECT - 0.005 else "conditional" if 0.055 < expected < 0.945 else None
    if verdict == "acceptable" and body["device"] == "special-purpose-ground-fault":
        verdict = "conditional"       # its band is remembered, not read
    if verdict is not None:
        assert answer["verdict"] == verdict


@pytest.mark.parametrize("number", range(20))
def test_alarm_probability(rule_set, number):
    body, expected = monitor_case(np.random.default_rng(2000 + number), number)
    assert value(rule_set.answer("device-trip", body), "alarm_probability_ratio") == pytest.approx(expected, abs=0.005)


@pytest.mark.parametrize("number", range(20))
def test_detector_probability(rule_set, number):
    body, expected = detector_case(np.random.default_rng(3000 + number), number)
    assert value(rule_set.answer("device-trip", body), "detector_probability_ratio") == pytest.approx(expected, abs=0.005)


@pytest.mark.parametrize("number", range(20))
def test_relay_probabilities(rule_set, number):
    body, operates, holds = relay_case(np.random.default_rng(4000 + number), number)
    answer = rule_set.answer("device-trip", body)
    assert value(answer, "operate_probability_ratio") == pytest.approx(operates, abs=0.005)
    assert value(answer, "hold_probability_ratio") == pytest.approx(holds, abs=0.005)


# ---- sampled waves -------------------------------------------------------------------------------------------------------------------

@pytest.mark.parametrize("seed", range(30))
def test_residual_current_is_the_rms_of_the_summed_wave(rule_set, seed):
    rng = np.random.default_rng(seed)
    waveform = ("sinusoidal", "half-wave", "smooth-dc")[seed % 3]
    voltage, resistance, leakage, angle = (float(rng.uniform(*r)) for r in ((100, 400), (2e3, 5e4), (0, 0.03), (-180, 180)))
    answer = rule_set.answer("device-trip", bridged("iec-general-a-30ma", voltage, resistance, waveform=waveform, leakage={"current_ampere": leakage, "angle_degree": angle}))
    assert value(answer, "residual_current_ampere") == pytest.approx(sampled_rms(voltage, resistance, waveform, leakage, angle), rel=1e-8)


# ---- ngspice: supplies and relay paths -------------------------------------------------------------------------------------------------

def _supply(rng, netlist, name):
    """Draws an unearthed supply with detector and faults, adds it to the deck, and returns it as a request states it."""
    volts, positive, negative = float(rng.uniform(20, 300)), float(10 ** rng.uniform(3, 6)), float(10 ** rng.uniform(3, 6))
    fault = {k: float(10 ** rng.uniform(2, 6)) for k in ("positive_resistance_ohm", "negative_resistance_ohm") if rng.random() < 0.4}
    netlist.add(f"v{name} p{name} n{name} dc {volts!r}", f"rp{name} p{name} 0 {positive!r}", f"rn{name} n{name} 0 {negative!r}")
    for pole, key in (("p", "positive_resistance_ohm"), ("n", "negative_resistance_ohm")):
        if key in fault:
            netlist.add(f"rf{pole}{name} {pole}{name} 0 {fault[key]!r}")
    return {"voltage_volt": volts, "positive_resistance_ohm": positive, "negative_resistance_ohm": negative}, fault


def test_ngspice_agrees_on_supplies_and_relay_paths(rule_set):
    rng, netlist, asked = np.random.default_rng(21), Netlist(), []
    for number in range(120):
        name, kind = f"x{number}", ("positive-to-earth", "negative-to-earth", "leg-to-earth", "across-contact")[number % 4]
        ohms = float(10 ** rng.uniform(3, 7))
        if kind == "across-contact":       # an ac coil, an input with capacitance
            volts, coil, reactance, farad = float(rng.uniform(24, 240)), float(rng.uniform(50, 5e3)), float(rng.uniform(0, 1e4)), float(10 ** rng.uniform(-11, -7))
            netlist.source(name, f"s{name}", volts, 50.0)
            netlist.add(f"ri{name} s{name} l{name} {ohms!r}", f"ci{name} s{name} l{name} {farad!r}")
            netlist.impedance(f"k{name}", f"l{name}", "0", coil, reactance / (2 * math.pi * 50))
            netlist.measure(name, 50.0, coil_voltage_volt=f"l{name}")
            body = {"connection": kind, "frequency_hertz": 50, "coil": {"supply_voltage_volt": volts, "resistance_ohm": coil, "reactance_ohm": reactance},
                    "instrument": voltage_input(ohms, input_capacitance_farad=farad), "protection": "relay-path"}
        else:
            supply, fault = _supply(rng, netlist, name)
            body = {"connection": kind, "earth_fault": fault, "instrument": voltage_input(ohms)}
            if kind == "leg-to-earth":
                coil, pole = float(10 ** rng.uniform(2, 5)), ("positive", "negative")[int(rng.integers(2))]
                other = f"{'n' if pole == 'positive' else 'p'}{name}"
                netlist.add(f"ri{name} l{name} 0 {ohms!r}", f"rk{name} l{name} {other} {coil!r}")
                netlist.measure(name, None, coil_voltage_volt=(f"l{name}", other))
                body |= {"protection": "relay-path", "control_supply": supply, "coil": {"resistance_ohm": coil, "fed_from": pole}}
            else:
                netlist.add(f"ri{name} {kind[0]}{name} 0 {ohms!r}")
                netlist.measure(name, None, positive_voltage_volt=f"p{name}", negative_voltage_volt=f"n{name}")
                body |= {"protection": "earth-fault-detector", "dc_supply": supply}
        asked.append((name, body))
    found = netlist.run()
    for name, body in asked:
        answer = rule_set.answer("device-trip", body)
        for (circuit, wanted), expected in found.items():
            if circuit == name:
                assert value(answer, wanted) == pytest.approx(expected, rel=1e-6), (name, wanted, body)
    assert len(found) == 180


# ---- properties ------------------------------------------------------------------------------------------------------------------------

OFTEN = settings(max_examples=120, deadline=None, suppress_health_check=[HealthCheck.function_scoped_fixture])
ohms = st.floats(100, 1e8)
amperes = st.floats(0, 0.05)
mild_angle = st.one_of(st.none(), st.floats(-90, 90))      # beyond a right angle a larger test current can lower the sum


def leaking(current, angle, **more):
    """A leakage as a request states it."""
    return {"current_ampere": current, **({} if angle is None else {"angle_degree": angle}), **more}


@OFTEN
@given(device=st.sampled_from(list(BANDS)), first=ohms, second=ohms, current=amperes, angle=mild_angle)
def test_trip_probability_falls_as_impedance_rises(rule_set, device, first, second, current, angle):
    low, high = sorted((first, second))
    found = [value(rule_set.answer("device-trip", bridged(device, 230, r, leakage=leaking(current, angle))), "trip_probability_ratio") for r in (low, high)]
    assert found[1] <= found[0] + 1e-12


@OFTEN
@given(first=ohms, second=ohms)
def test_other_reactions_fall_as_impedance_rises(rule_set, first, second):
    low, high = sorted((first, second))
    supply = {"voltage_volt": 125, "positive_resistance_ohm": 5e4, "negative_resistance_ohm": 5e4, "alarm_imbalance_volt": {"value": 25, "half_width": 10}}
    monitor = {"response_resistance_ohm": 5e4, "response_tolerance_percent": 15}
    for key, body in (("detector_probability_ratio", {"protection": "earth-fault-detector", "connection": "negative-to-earth", "dc_supply": supply}),
                      ("alarm_probability_ratio", {"protection": "insulation-monitor", "connection": "pole-to-earth", "monitor": monitor,
                                                   "system": {"voltage_volt": 230, "insulation_resistance_ohm": 1e5}}),
                      ("operate_probability_ratio", {"protection": "relay-path", "connection": "across-contact", "relay": "auxiliary-dc",
                                                     "coil": {"supply_voltage_volt": 125, "rated_voltage_volt": 125, "resistance_ohm": 5e3}})):
        found = [value(rule_set.answer("device-trip", body | {"instrument": voltage_input(r)}), key) for r in (low, high)]
        assert found[1] <= found[0] + 1e-12, key


@OFTEN
@given(resistance=ohms, current=amperes, angle=mild_angle, scale=st.integers(-6, 6))
def test_units_scale(rule_set, resistance, current, angle, scale):
    """Twice the voltage on twice the impedance is the same current; all currents and the band doubled is the same probability."""
    factor = 2.0 ** scale
    band = {"no_trip_current_ampere": 0.015, "must_trip_current_ampere": 0.03}
    scaled = {key: ampere * factor for key, ampere in band.items()}
    one = rule_set.answer("device-trip", bridged(band, 100, resistance, leakage=leaking(current, angle)))
    two = rule_set.answer("device-trip", bridged(band, 100 * factor, resistance * factor, leakage=leaking(current, angle)))
    three = rule_set.answer("device-trip", bridged(scaled, 100 * factor, resistance, leakage=leaking(current * factor, angle)))
    assert value(one, "trip_probability_ratio") == value(two, "trip_probability_ratio")
    assert value(one, "trip_probability_ratio") == value(three, "trip_probability_ratio")
    assert value(three, "residual_current_ampere") == value(one, "residual_current_ampere") * factor


@OFTEN
@given(device=st.sampled_from(list(BANDS)), current=amperes, angle=st.floats(-180, 180), waveform=st.sampled_from(["sinusoidal", "half-wave"]))
def test_the_floor_is_sharp_where_everything_is_known(rule_set, device, current, angle, waveform):
    assume(not (waveform == "half-wave" and device in ("class-a-ground-fault", "special-purpose-ground-fault")))
    ask = lambda r: rule_set.answer("device-trip", bridged(device, 230, r, waveform=waveform, leakage=leaking(current, angle)))
    floor = value(ask(1e6), "least_impedance_ohm")
    assume(floor is not None)
    assert value(ask(floor * (1 + 1e-9)), "trip_probability_ratio") <= REJECT + 1e-9
    assert value(ask(floor * 0.999), "trip_probability_ratio") > REJECT


@OFTEN
@given(device=st.sampled_from(list(BANDS)), current=amperes, phases=st.sampled_from(["one", "several"]), volts=st.floats(0, 15), amount=st.floats(0, 40))
def test_the_floor_holds_where_something_is_not_known(rule_set, device, current, phases, volts, amount):
    leakage = {"current_ampere": {"value": current, "half_width_percent": amount}, "phases": phases}
    ask = lambda r: rule_set.answer("device-trip", bridged(device, {"value": 230, "half_width_percent": volts}, r, leakage=leakage))
    floor = value(ask(1e6), "least_impedance_ohm")
    assume(floor is not None)
    assert value(ask(floor), "trip_probability_ratio") <= REJECT + 1e-9


@OFTEN
@given(leg=st.floats(1e3, 1e6), ratio=st.floats(0.5, 2), alarm=st.floats(1, 120), state=st.sampled_from(["released", "operated"]), reactance=st.floats(0, 1e4))
def test_the_other_floors_are_sharp(rule_set, leg, ratio, alarm, state, reactance):
    supply = {"voltage_volt": 125, "positive_resistance_ohm": leg, "negative_resistance_ohm": leg * ratio, "alarm_imbalance_volt": alarm}
    monitor = {"response_resistance_ohm": leg, "response_tolerance_percent": 15}
    coil = {"supply_voltage_volt": 125, "rated_voltage_volt": 125, "resistance_ohm": leg, "reactance_ohm": reactance, "state": state}
    for key, body in (("detector_probability_ratio", {"protection": "earth-fault-detector", "connection": "positive-to-earth", "dc_supply": supply}),
                      ("alarm_probability_ratio", {"protection": "insulation-monitor", "connection": "pole-to-earth", "monitor": monitor,
                                                   "system": {"voltage_volt": 230, "insulation_resistance_ohm": leg * (1 + ratio)}}),
                      ("operate_probability_ratio" if state == "released" else "hold_probability_ratio",
                       {"protection": "relay-path", "connection": "across-contact", "relay": "contactor-ac", "frequency_hertz": 50, "coil": coil})):
        floor = value(rule_set.answer("device-trip", body | {"instrument": voltage_input(1e6)}), "least_impedance_ohm")
        if not floor:       # nothing helps, or nothing is needed
            continue
        above, below = (value(rule_set.answer("device-trip", body | {"instrument": voltage_input(floor * share)}), key) for share in (1 + 1e-9, 0.999))
        assert above <= REJECT + 1e-7 < below, key


@OFTEN
@given(resistance=ohms, current=amperes, narrow=st.floats(0, 40), wide=st.floats(0, 40))
def test_a_wider_spread_never_narrows_the_interval(rule_set, resistance, current, narrow, wide):
    ends = []
    for percent in sorted((narrow, wide)):
        found = rule_set.answer("device-trip", bridged("iec-general-a-30ma", {"value": 230, "half_width_percent": percent}, resistance, leakage=leaking(current, 30)))
        result = found["results"]["residual_current_ampere"]
        ends.append((result.get("low", result["value"]), result.get("high", result["value"])))
    slack = 1e-9 * ends[0][1]
    assert ends[1][0] <= ends[0][0] + slack and ends[1][1] >= ends[0][1] - slack


SEVERITY = ["undetermined", "acceptable", "conditional", "unacceptable"]


@OFTEN
@given(device=st.sampled_from(list(BANDS)), resistance=ohms, current=amperes)
def test_an_essential_load_never_softens_the_verdict(rule_set, device, resistance, current):
    plain = rule_set.answer("device-trip", bridged(device, 230, resistance, leakage=leaking(current, None)))
    grave = rule_set.answer("device-trip", bridged(device, 230, resistance, leakage=leaking(current, None), loads=[{"label": "ventilator", "essential": True}]))
    assert SEVERITY.index(grave["verdict"]) >= SEVERITY.index(plain["verdict"])
    if value(grave, "trip_probability_ratio") > REJECT:
        assert grave["verdict"] == "unacceptable" and "essential-load-may-be-lost" in codes(grave)


# ---- whatever is asked -------------------------------------------------------------------------------------------------------------------

def spread_of(values):
    """A number as a request may state it."""
    return st.one_of(values, st.builds(lambda v, p: {"value": v, "half_width_percent": p}, values, st.floats(0, 100)),
                     st.builds(lambda a, b: {"between": [a, b]}, values, values))


wild = st.one_of(st.floats(0, 1e9), st.just(0.0), st.floats(1e-300, 1e-200), st.floats(1e-3, 1e3))
CONNECTIONS = {"residual-current": ["line-to-earth", "neutral-to-earth", "line-to-supply-neutral", "line-to-neutral", "supply-side"],
               "insulation-monitor": ["pole-to-earth", "pole-to-pole"], "earth-fault-detector": ["positive-to-earth", "negative-to-earth", "pole-to-pole"],
               "relay-path": ["across-contact", "leg-to-earth", "across-coil"]}
DEVICES = [*BANDS, "iec-general-b-30ma", "iec-general-ac-30ma", "vehicle-dc-detector", "equipment-ground-fault-30ma", {}]


@st.composite
def any_body(draw):
    """Bodies of the right shape with unreasonable numbers."""
    protection = draw(st.sampled_from(list(CONNECTIONS)))
    body = {"protection": protection, "connection": draw(st.sampled_from(CONNECTIONS[protection]))}
    function = draw(st.sampled_from(["voltage", "current", "clamp", "injector"]))
    body["instrument"] = {"function": function}
    body["instrument"] |= {"voltage": {"input_resistance_ohm": draw(spread_of(wild)), "input_capacitance_farad": draw(st.floats(0, 1))},
                           "current": {"burden_resistance_ohm": draw(spread_of(wild))}, "injector": {"injected_dc_ampere": draw(st.floats(0, 1000))}}.get(function, {})
    if protection != "earth-fault-detector" and draw(st.booleans()):
        body["frequency_hertz"] = draw(st.floats(1e-300, 1e5))
    supply = {"voltage_volt": draw(spread_of(st.floats(0, 1500))), "positive_resistance_ohm": draw(spread_of(wild)), "negative_resistance_ohm": draw(wild)}
    fault = {"positive_resistance_ohm": draw(spread_of(wild))}
    if protection == "residual-current":
        body |= {"device": draw(st.sampled_from(DEVICES)), "circuit": {"voltage_volt": draw(spread_of(st.floats(0, 1e5)))}}
        if draw(st.booleans()):
            body["leakage"] = leaking(draw(spread_of(st.floats(0, 1000))), draw(st.one_of(st.none(), st.floats(-360, 360))), direct_current_ampere=draw(st.floats(0, 1)))
        if draw(st.booleans()):
            body["waveform"] = draw(st.sampled_from(["sinusoidal", "half-wave", "smooth-dc"]))
    elif protection == "insulation-monitor":
        body |= {"monitor": {"response_resistance_ohm": draw(wild), "response_tolerance_percent": draw(st.floats(0, 100))},
                 "system": {"voltage_volt": draw(st.floats(0, 1e5)), "insulation_resistance_ohm": draw(spread_of(wild))}}
    elif protection == "earth-fault-detector":
        body |= {"dc_supply": supply | {"alarm_imbalance_volt": draw(wild)}, "earth_fault": fault}
    else:
        body |= {"coil": {"resistance_ohm": draw(spread_of(wild)), "rated_voltage_volt": draw(wild), "supply_voltage_volt": draw(spread_of(st.floats(0, 1e5)))},
                 "relay": draw(st.sampled_from(["auxiliary-dc", "contactor-ac", {}])), "control_supply": supply, "earth_fault": fault}
    return body


@settings(max_examples=600, deadline=None, suppress_health_check=[HealthCheck.function_scoped_fixture, HealthCheck.too_slow])
@given(body=any_body())
def test_the_answer_never_holds_what_json_cannot_say(rule_set, body):
    try:
        answer = rule_set.answer("device-trip", body)
    except InputProblems:
        return
    json.dumps(answer, allow_nan=False)
    assert answer["verdict"] in SEVERITY
    for name in ("trip_probability_ratio", "alarm_probability_ratio", "detector_probability_ratio", "operate_probability_ratio"):
        found = answer["results"].get(name, {}).get("value")
        assert found is None or 0 <= found <= 1


@pytest.mark.parametrize("body,place,code", [
    (bridged("iec-general-a-30ma", -230, 1000), "/circuit/voltage_volt", "out-of-range"),
    (bridged("iec-general-a-30ma", 230, -1000), "/instrument/input_resistance_ohm", "out-of-range"),
    (bridged("no-such-device", 230, 1000), "/device", "unknown-id"),
    (bridged("iec-general-a-30ma", 230, 1000, connection="across-coil"), "/connection", "not-applicable"),
    (bridged("iec-general-a-30ma", 230, 1000, coil={"resistance_ohm": 1}), "/coil", "not-applicable"),
])
def test_what_does_not_fit_is_refused(rule_set, body, place, code):
    with pytest.raises(InputProblems) as refused:
        rule_set.answer("device-trip", body)
    assert (place, code) in [(p.pointer, p.code) for p in refused.value.problems]

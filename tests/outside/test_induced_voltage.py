"""The posterior of the induced-voltage check against an independent one, integrated densely from the stated model.

The reference is written from the method (Gaussian likelihood of each reading about the loaded value, priors over open-circuit voltage and source
impedance) and uses scipy for the integral over the voltage in closed form; only the priors' numbers are read from the rule set.
"""
import json

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.special import log_ndtr
from scipy.stats import norm

NODES = 20000
INSTRUMENTS = [10e6, 1e6, 300e3, 200e3, 7e3, 3e3, 2e3, 10e9]


def described(resistance):
    return {"function": "voltage", "input_resistance_ohm": resistance, "input_capacitance_farad": 1e-10, "percent_of_reading_percent": 1, "digits_count": 3, "resolution_voltage_volt": 0.01}


def explanations(rule_set, system, frequency):
    """(id, weight, mean, deviation, least, most, least |Z|, most |Z|, reactive) of every explanation, emf and cable unknown."""
    constants = {name: c["value"] for name, c in rule_set.data["checks"]["induced-voltage"]["constants"].items()}
    omega = 2 * np.pi * frequency
    for id_, entry in sorted(rule_set.data["entries"]["explanation"].items()):
        field = {name: value["value"] if isinstance(value, dict) else value for name, value in entry["fields"].items()}
        scale = {"magnetic": constants["unknown_emf"], "none": constants["pick_up_voltage"]}.get(field["model"], system)
        if field["model"] == "capacitive":
            low, high = 1 / (omega * constants["most_cable_capacitance"]), 1 / (omega * constants["least_cable_capacitance"])
        elif field["reactive"]:
            low, high = 1 / (omega * field["capacitance_most"]), 1 / (omega * field["capacitance_least"])
        else:
            low, high = field["impedance_least"], field["impedance_most"]
        deviation = field["voltage_spread"] * scale if "voltage_spread" in field else np.inf
        yield id_, field["weight"], field["voltage_centre"] * scale, deviation, field["voltage_least"] * scale, field["voltage_most"] * scale, low, high, field["reactive"]


def parts(rule_set, system, frequency, readings, nodes=NODES):
    """For every explanation: (id, complex impedance at the nodes, mean, deviation and logarithm of weight of the voltage there, its range, misfit).

    The integral over the voltage is exact, a Gaussian cut by the prior's range; the impedance runs over a dense midpoint rule.
    """
    omega = 2 * np.pi * frequency
    for id_, weight, mean, deviation, least, most, low, high, reactive in explanations(rule_set, system, frequency):
        size = np.exp(np.log(low) + (np.log(high) - np.log(low)) * (np.arange(nodes) + 0.5) / nodes)
        source = -1j * size if reactive else size + 0j
        precision = 0.0 if np.isinf(deviation) else deviation ** -2
        total, moment, square = np.full(nodes, precision), np.full(nodes, precision * mean), np.full(nodes, precision * mean ** 2)
        for value, resistance in readings:
            u = uncertainty(value)
            share = 1 / np.abs(1 + source * (1 / resistance + 1j * omega * 1e-10))
            total, moment, square = total + (share / u) ** 2, moment + share * value / u ** 2, square + (value / u) ** 2
        centre, spread = moment / total, total ** -0.5
        a, b = (least - centre) / spread, (most - centre) / spread
        lower, upper = np.where(a > 0, -b, a), np.where(a > 0, -a, b)           # the tail with the digits
        inside = log_ndtr(upper) + np.log1p(-np.exp(np.minimum(log_ndtr(lower) - log_ndtr(upper), -1e-300)))
        height = 1 / (most - least) if np.isinf(deviation) else 1 / (deviation * np.sqrt(2 * np.pi) * (norm.cdf(most, mean, deviation) - norm.cdf(least, mean, deviation)))
        chi = square - moment ** 2 / total
        yield id_, source, centre, spread, np.log(weight * height) - 0.5 * chi + np.log(spread * np.sqrt(2 * np.pi)) + inside, (a, b), np.min(chi)


def uncertainty(value):
    """Standard uncertainty of a reading with the instrument of `described`."""
    return np.sqrt((0.01 * value + 3 * 0.01) ** 2 / 3 + (0.03 * value) ** 2 + 0.05 ** 2)


def reference(rule_set, system, frequency, readings, nodes=NODES):
    """Posterior probabilities by id, the least misfit, and the evidence of all explanations together."""
    found = list(parts(rule_set, system, frequency, readings, nodes))
    mass = {id_: np.exp(logs).mean() for id_, _, _, _, logs, _, _ in found}
    whole = sum(mass.values())
    if whole == 0:       # every weight is too small for a float: weigh relative to the greatest
        top = max(logs.max() for _, _, _, _, logs, _, _ in found)
        mass = {id_: np.exp(logs - top).mean() for id_, _, _, _, logs, _, _ in found}
    return {id_: m / sum(mass.values()) for id_, m in mass.items()}, min(part[-1] for part in found), whole


def situations(count):
    """Readings that some true source gives, with noise: every kind of source, one to three instruments."""
    random = np.random.default_rng(20261202)
    for number in range(count):
        system, frequency = [(120.0, 60.0), (230.0, 50.0), (277.0, 60.0)][number % 3]
        kind, omega = number % 5, 2 * np.pi * frequency
        size = np.exp(random.uniform(np.log(1), np.log(30))) if kind == 0 else np.exp(random.uniform(np.log(1e3), np.log(5e6)))
        source = size + 0j if kind in (0, 1) else -1j * size
        voltage = system * (random.normal(1, 0.02) if kind == 0 else random.uniform(0.05, 1.0)) if kind < 4 else random.uniform(0, 0.4)
        readings = []
        for resistance in random.choice(INSTRUMENTS, 1 + number % 3, replace=False):
            shown = voltage / abs(1 + source * (1 / resistance + 1j * omega * 1e-10))
            readings.append((float(abs(shown + random.normal(0, 0.02 * shown + 0.03))), float(resistance)))
        yield system, frequency, readings


def asked(system, frequency, readings, **more):
    return {"known": "readings", "system": {"voltage_volt": system, "frequency_hertz": frequency},
            "readings": [{"voltage_volt": v, "instrument": described(r)} for v, r in readings], **more}


@pytest.mark.parametrize("situation", list(situations(45)), ids=lambda s: f"{s[0]:.0f}V-{len(s[2])}")
def test_probabilities_agree_with_the_dense_reference(rule_set, situation):
    system, frequency, readings = situation
    expected, _, _ = reference(rule_set, system, frequency, readings)
    found = rule_set.answer("induced-voltage", asked(system, frequency, readings))["results"]
    for item in found["explanation_probability_ratio"]:
        assert item["value"] == pytest.approx(expected[item["id"]], abs=0.005), item["id"]        # the required accuracy
    assert sum(item["value"] for item in found["explanation_probability_ratio"]) == pytest.approx(1, abs=1e-12)
    assert found["stiff_probability_ratio"]["value"] == pytest.approx(expected["connected"] + expected["other-supply"], abs=0.005)


@pytest.mark.parametrize("situation", list(situations(12)), ids=lambda s: f"{s[0]:.0f}V-{len(s[2])}")
def test_intervals_agree_with_draws_from_the_reference(rule_set, situation):
    """Source impedance and body current: the shares of a weighted million draws below the reported ends are 2.5, 50 and 97.5 %."""
    system, frequency, readings = situation
    random = np.random.default_rng(7)
    sizes, currents, weights = [], [], []
    for _, source, centre, spread, logs, (a, b), _ in parts(rule_set, system, frequency, readings, 4000):
        low, high = norm.cdf(a)[:, None], norm.cdf(b)[:, None]
        draws = centre[:, None] + spread[:, None] * norm.ppf(np.clip(low + (high - low) * random.random((4000, 40)), 1e-300, 1 - 1e-16))
        sizes.append(np.broadcast_to(np.abs(source)[:, None], draws.shape))
        currents.append(np.abs(draws) / np.abs(source[:, None] + 1000))
        weights.append(np.broadcast_to(logs[:, None], draws.shape))
    logs = np.array(weights)
    share_of = np.exp(logs - logs.max())
    share_of /= share_of.sum()
    found = rule_set.answer("induced-voltage", asked(system, frequency, readings))["results"]
    for name, values, unit in (("source_impedance", np.array(sizes), "ohm"), ("body_current", np.array(currents), "ampere")):
        for suffix, p in (("_low", 0.025), ("", 0.5), ("_high", 0.975)):
            end = found[f"{name}{suffix}_{unit}"]["value"]
            # an outer voltage node holds 5 % of the weight, so an end is known to half of that; an impedance node is up to 7 % wide
            assert share_of[values <= end * 0.93].sum() - 0.025 <= p <= share_of[values <= end * 1.07].sum() + 0.025, (name, suffix)


@pytest.mark.parametrize("situation", list(situations(8)), ids=lambda s: f"{s[0]:.0f}V-{len(s[2])}")
def test_expected_information_against_simulated_readings(rule_set, situation):
    """The doubt that a next reading removes, against the same found by drawing the reading and weighing again with the reference."""
    system, frequency, readings = situation
    found = rule_set.answer("induced-voltage", asked(system, frequency, readings, kit=[{"instrument": described(3e3)}]))["results"]
    expected, misfit, before = reference(rule_set, system, frequency, readings)
    if misfit > 9:
        return
    low, high = found["predicted_reading_low_volt"][0]["value"], found["predicted_reading_high_volt"][0]["value"]
    assert 0 <= low <= found["predicted_reading_volt"][0]["value"] <= high
    entropy = lambda p: -sum(x * np.log2(x) for x in p.values() if x > 0)        # noqa: E731
    grid = np.linspace(0, high * 1.3 + 1, 160)
    next_time = [reference(rule_set, system, frequency, [*readings, (float(value), 3e3)], 1500) for value in grid]
    density = np.array([evidence for _, _, evidence in next_time]) / before / (uncertainty(grid) * np.sqrt(2 * np.pi))
    gain = entropy(expected) - np.sum(np.array([entropy(p) for p, _, _ in next_time]) * density) / np.sum(density)
    # bins stand in for the reading's noise: what they tell apart agrees within a tenth of a bit or a quarter of the gain
    assert found["information_gain_bit"][0]["value"] == pytest.approx(max(gain, 0), abs=max(0.1, 0.25 * abs(gain)))


@settings(max_examples=40, deadline=None)
@given(st.floats(0, 400), st.sampled_from(INSTRUMENTS), st.floats(0, 400), st.sampled_from(INSTRUMENTS))
def test_whatever_is_read_nothing_is_called_safe(rule_set, first, one, second, other):
    answer = rule_set.answer("induced-voltage", asked(230.0, 50.0, [(first, one), (second, other)]))
    text = json.dumps(answer, allow_nan=False)
    assert answer["verdict"] != "acceptable" and "absence-of-voltage" in text
    assert not any(word in sentence["sentence"].lower() for sentence in answer["findings"] for word in ("is dead", "safe to touch", "is safe"))


def test_the_priors_add_to_one(rule_set):
    weights = [entry["fields"]["weight"]["value"] for entry in rule_set.data["entries"]["explanation"].values()]
    assert sum(weights) == pytest.approx(1, abs=1e-12)


def test_no_verdict_of_this_check_is_acceptable(rule_set):
    assert all(f["verdict"] != "acceptable" for f in rule_set.data["checks"]["induced-voltage"]["findings"])

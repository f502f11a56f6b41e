"""Requests for the device trip check with uncertain numbers, and plain Monte Carlo draws of what each of them means.

Everything is drawn, the device's own threshold too, and the currents are added as sampled waves or plain complex numbers: nothing here
knows how the rule set writes its formulas.
"""
import math

import numpy as np

from .monte_carlo import DRAWS, draws

BANDS = {"class-a-ground-fault": (0.004, 0.006), "iec-general-a-10ma": (0.005, 0.010), "iec-general-a-30ma": (0.015, 0.030),
         "iec-general-a-100ma": (0.050, 0.100), "iec-selective-a-300ma": (0.150, 0.300), "special-purpose-ground-fault": (0.015, 0.020)}


def spread(rng, value, form, share):
    """A number with one of the forms of spread."""
    if form == 0:
        return value
    if form == 1:
        return {"value": value, "half_width_percent": 100 * share}
    if form == 2:
        return {"value": value, "standard_uncertainty": value * share / 2}
    return {"between": [value * (1 - share * float(rng.uniform(0.5, 1))), value * (1 + share * float(rng.uniform(0.5, 1)))]}


def residual_cases(count):
    """Bodies of branch residual-current whose residual current lies about the band of the device."""
    rng = np.random.default_rng(11)
    bodies = []
    for number in range(count):
        device = list(BANDS)[number % len(BANDS)]
        low, high = BANDS[device]
        voltage = float(rng.uniform(100, 400))
        leakage = float(rng.uniform(0, 0.9)) * low
        wanted = float(rng.uniform(0.6, 1.1)) * (low + high) / 2 - 0.4 * leakage
        resistance = voltage / wanted
        frequency = 50 if number % 2 else 60
        instrument = {"function": "voltage", "rated_voltage_volt": 1000, "input_resistance_ohm": spread(rng, resistance, number % 4, float(rng.uniform(0.02, 0.3)))}
        if number % 3 == 0:      # as much current by capacitance as by resistance, at most
            instrument["input_capacitance_farad"] = spread(rng, float(rng.uniform(0, 1)) / (resistance * 2 * math.pi * frequency), number % 2, 0.3)
        body = {"protection": "residual-current", "connection": "line-to-earth", "device": device, "frequency_hertz": frequency, "instrument": instrument,
                "circuit": {"voltage_volt": spread(rng, voltage, (number + 1) % 4, float(rng.uniform(0.02, 0.15)))}}
        body["leakage"] = {"current_ampere": spread(rng, leakage, (number + 2) % 4, float(rng.uniform(0.05, 0.3)))}
        body["leakage"] |= [{}, {"phases": "one"}, {"phases": "several"}, {"angle_degree": float(rng.uniform(-180, 180))},
                            {"angle_degree": {"value": float(rng.uniform(-90, 90)), "half_width": float(rng.uniform(5, 90))}}][number % 5]
        bodies.append(body)
    return bodies


def residual_draws(rng, body):
    """10^6 draws of the residual current, as complex sums."""
    leakage, instrument = body["leakage"], body["instrument"]
    omega = 2 * math.pi * body["frequency_hertz"]
    admittance = 1 / draws(rng, instrument["input_resistance_ohm"]) + 1j * omega * draws(rng, instrument.get("input_capacitance_farad", 0))
    if "angle_degree" in leakage:
        angle = np.radians(draws(rng, leakage["angle_degree"]))
    else:
        angle = rng.uniform(0, 2 * np.pi if leakage.get("phases") == "several" else np.pi / 2, DRAWS)
    return np.abs(draws(rng, body["circuit"]["voltage_volt"]) * admittance + draws(rng, leakage["current_ampere"]) * np.exp(1j * angle))


def monitor_case(rng, number):
    """(body, probability of an alarm by Monte Carlo) for an insulation monitor."""
    response, tolerance = float(rng.uniform(5e3, 5e4)), float(rng.uniform(5, 30))
    parallel = response * float(rng.uniform(0.8, 1.2))
    insulation = parallel * float(rng.uniform(1.5, 20))
    instrument = 1 / (1 / parallel - 1 / insulation)
    body = {"protection": "insulation-monitor", "connection": "pole-to-earth", "frequency_hertz": 50,
            "monitor": {"response_resistance_ohm": response, "response_tolerance_percent": tolerance},
            "system": {"voltage_volt": 230, "insulation_resistance_ohm": spread(rng, insulation, 1 + number % 3, 0.4)},
            "instrument": {"function": "voltage", "rated_voltage_volt": 1000, "input_resistance_ohm": spread(rng, instrument, number % 4, 0.2)}}
    seen = 1 / (1 / draws(rng, body["system"]["insulation_resistance_ohm"]) + 1 / draws(rng, body["instrument"]["input_resistance_ohm"]))
    responds = response * (1 + tolerance / 100 * rng.uniform(-1, 1, DRAWS))
    return body, float(np.mean(seen <= responds))


def detector_case(rng, number):
    """(body, probability of an alarm by Monte Carlo) for a dc supply, every number uncertain."""
    volts, leg = float(rng.uniform(24, 250)), float(rng.uniform(5e3, 1e5))
    added = leg * float(rng.uniform(0.5, 5))
    shift = volts * (1 / added) / (2 / leg + 1 / added)
    body = {"protection": "earth-fault-detector", "connection": "positive-to-earth",
            "dc_supply": {"voltage_volt": spread(rng, volts, 1, 0.1), "positive_resistance_ohm": spread(rng, leg, number % 4, 0.1),
                          "negative_resistance_ohm": spread(rng, leg, (number + 1) % 4, 0.1),
                          "alarm_imbalance_volt": spread(rng, shift * float(rng.uniform(0.9, 1.1)), 1 + number % 3, 0.15)},
            "instrument": {"function": "voltage", "rated_voltage_volt": 1000, "input_resistance_ohm": spread(rng, added, (number + 2) % 4, 0.2)}}
    supply = {key: draws(rng, value) for key, value in body["dc_supply"].items()}
    positive = 1 / supply["positive_resistance_ohm"] + 1 / draws(rng, body["instrument"]["input_resistance_ohm"])
    negative = 1 / supply["negative_resistance_ohm"]
    earth = supply["voltage_volt"] * positive / (positive + negative)       # of earth above the negative pole
    return body, float(np.mean(np.abs(supply["voltage_volt"] - earth - earth) >= supply["alarm_imbalance_volt"]))


def relay_case(rng, number):
    """(body, probability of operation, probability of holding, both by Monte Carlo) for a bridged contact."""
    rated, coil = float(rng.choice([24, 48, 110, 125, 220])), float(rng.uniform(200, 2e4))
    resistance = coil * float(rng.uniform(0.2, 3))
    shares = {"may_operate_share_percent": 30, "must_operate_share_percent": 80, "must_release_share_percent": 10, "may_release_share_percent": 60}
    body = {"protection": "relay-path", "connection": "across-contact", "relay": shares,
            "coil": {"supply_voltage_volt": spread(rng, rated, 1, 0.15), "rated_voltage_volt": rated, "resistance_ohm": spread(rng, coil, number % 4, 0.2)},
            "instrument": {"function": "voltage", "rated_voltage_volt": 1000, "input_resistance_ohm": spread(rng, resistance, (number + 1) % 4, 0.3)}}
    ohms = draws(rng, body["coil"]["resistance_ohm"])
    reaching = draws(rng, body["coil"]["supply_voltage_volt"]) * ohms / (ohms + draws(rng, body["instrument"]["input_resistance_ohm"]))
    share = reaching / rated
    return body, float(np.mean(share >= rng.uniform(0.3, 0.8, DRAWS))), float(np.mean(share >= rng.uniform(0.1, 0.6, DRAWS)))


def sampled_rms(voltage, resistance, waveform, leakage, angle_degree, steps=200_000):
    """Rms of the summed wave over one period: the instrument's current, whole, rectified or direct, and a sinusoidal leakage."""
    phase = (np.arange(steps) + 0.5) * 2 * np.pi / steps
    through = math.sqrt(2) * voltage / resistance * np.sin(phase)
    if waveform == "half-wave":
        through = np.maximum(through, 0)
    if waveform == "smooth-dc":
        through = voltage / resistance
    wave = through + math.sqrt(2) * leakage * np.sin(phase + math.radians(angle_degree))
    return float(np.sqrt(np.mean(wave ** 2)))

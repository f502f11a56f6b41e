"""Random circuits for the loading error check: each as a request body and as cards of a netlist."""
import math

import numpy as np

SEED = 20260301
OVERRIDES = {"limit_percent": 1}


def log_uniform(rng, low, high):
    """A value whose logarithm is uniform between two bounds."""
    return float(10 ** rng.uniform(math.log10(low), math.log10(high)))


def voltage_input(rng, alternating):
    """An instrument's data: a voltage input from a low-impedance tester to an electrometer, with leads."""
    data = {"function": "voltage", "input_resistance_ohm": log_uniform(rng, 1e3, 1e10)}
    if alternating:
        data["input_capacitance_farad"] = log_uniform(rng, 1e-11, 1e-9)
        data["lead_capacitance_farad"] = log_uniform(rng, 1e-11, 1e-9)
    return data


def meter(netlist, name, plus, minus, data):
    """The instrument's cards between two nodes."""
    netlist.impedance(name + "m", plus, minus, data["input_resistance_ohm"])
    for key in ("input_capacitance_farad", "lead_capacitance_farad"):
        if key in data:
            netlist.add(f"c{name}m{key[0]} {plus} {minus} {data[key]!r}")


def frequency_of(rng, alternating):
    """A frequency, or None for dc."""
    return log_uniform(rng, 10, 1e5) if alternating else None


def body_of(circuit, instrument, frequency, **rest):
    """The request body."""
    body = {"circuit": circuit, "instrument": instrument, **OVERRIDES, **rest}
    if frequency:
        body["frequency_hertz"] = frequency
    return body


def thevenin(netlist, rng, name, alternating):
    """A source behind R, L, C with a capacitance of its own across the terminals."""
    frequency, volts = frequency_of(rng, alternating), log_uniform(rng, 0.1, 1000)
    instrument = voltage_input(rng, alternating)
    source = {"resistance_ohm": log_uniform(rng, 1, 1e8)}
    if alternating and rng.random() < 0.5:
        source["inductance_henry"] = log_uniform(rng, 1e-4, 10)
    if alternating and rng.random() < 0.5:
        source["series_capacitance_farad"] = log_uniform(rng, 1e-11, 1e-6)
    if alternating and rng.random() < 0.5:
        source["parallel_capacitance_farad"] = log_uniform(rng, 1e-11, 1e-8)
    for state in ("f", "l"):           # free, loaded
        node = f"{name}{state}"
        netlist.source(node, node + "s", volts, frequency)
        netlist.impedance(node + "z", node + "s", node + "t", source["resistance_ohm"], source.get("inductance_henry", 0.0),
                          source.get("series_capacitance_farad"))
        if "parallel_capacitance_farad" in source:
            netlist.add(f"c{node}p {node}t 0 {source['parallel_capacitance_farad']!r}")
    meter(netlist, name + "l", name + "lt", "0", instrument)
    netlist.measure(name, frequency, undisturbed_voltage=name + "ft", loaded_voltage=name + "lt")
    return lambda found: body_of("thevenin", instrument, frequency, source={**source, "voltage_volt": found[name, "undisturbed_voltage"]})


def _element(rng, alternating):
    data = {"resistance_ohm": log_uniform(rng, 10, 1e8)}
    if alternating and rng.random() < 0.4:
        data["inductance_henry"] = log_uniform(rng, 1e-4, 10)
    if alternating and rng.random() < 0.5:
        data["capacitance_farad"] = log_uniform(rng, 1e-11, 1e-7)
        if rng.random() < 0.3:
            return {"capacitance_farad": data["capacitance_farad"]}
    return data


def _place(netlist, name, plus, minus, data):
    if "resistance_ohm" in data:
        netlist.impedance(name, plus, minus, data["resistance_ohm"], data.get("inductance_henry", 0.0))
    if "capacitance_farad" in data:
        netlist.add(f"c{name}x {plus} {minus} {data['capacitance_farad']!r}")


def divider(netlist, rng, name, alternating):
    """Two elements behind a supply, either of them measured."""
    frequency, volts = frequency_of(rng, alternating), log_uniform(rng, 0.1, 1000)
    instrument, upper, lower = voltage_input(rng, alternating), _element(rng, alternating), _element(rng, alternating)
    measured = "upper" if rng.random() < 0.5 else "lower"
    supply = {"voltage_volt": volts, "resistance_ohm": log_uniform(rng, 0.01, 1e4)}
    if alternating and rng.random() < 0.5:
        supply["inductance_henry"] = log_uniform(rng, 1e-5, 0.1)
    for state in ("f", "l"):
        node = name + state
        netlist.source(node, node + "s", volts, frequency)
        netlist.impedance(node + "z", node + "s", node + "a", supply["resistance_ohm"], supply.get("inductance_henry", 0.0))
        _place(netlist, node + "u", node + "a", node + "b", upper)
        _place(netlist, node + "w", node + "b", "0", lower)
    across = {"upper": ("a", "b"), "lower": ("b", "0")}
    ends = {state: {which: tuple(p if p == "0" else name + state + p for p in pair) for which, pair in across.items()} for state in "fl"}
    other = "lower" if measured == "upper" else "upper"
    meter(netlist, name + "l", *ends["l"][measured], instrument)
    netlist.measure(name, frequency, undisturbed_voltage=ends["f"][measured], loaded_voltage=ends["l"][measured],
                    other_voltage_before=ends["f"][other], other_voltage_after=ends["l"][other],
                    supply_current_before=f"i:{name}f", supply_current_after=f"i:{name}l")
    return lambda found: body_of("divider", instrument, frequency, supply=supply, upper=upper, lower=lower, measured=measured)


def series_string(netlist, rng, name, alternating):
    """Three to six elements; a run of neighbours lies between the probes."""
    frequency, volts = frequency_of(rng, alternating), log_uniform(rng, 0.1, 1000)
    instrument, count = voltage_input(rng, alternating), int(rng.integers(3, 7))
    first = int(rng.integers(0, count))
    last = int(rng.integers(first, min(first + 2, count)))
    elements, wanted = [], {}
    for number in range(count):
        data = {"label": f"element {number}", "resistance_ohm": log_uniform(rng, 10, 1e7), "measured": first <= number <= last}
        if alternating and rng.random() < 0.4:
            data["reactance_ohm"] = log_uniform(rng, 10, 1e6) * (1 if rng.random() < 0.5 else -1)
        elements.append(data)
    for state in ("f", "l"):
        node = name + state
        netlist.source(node, node + "n0", volts, frequency)
        for number, data in enumerate(elements):
            reactance, omega = data.get("reactance_ohm", 0.0), 2 * np.pi * (frequency or 0)
            minus = "0" if number == count - 1 else f"{node}n{number + 1}"
            netlist.impedance(f"{node}e{number}", f"{node}n{number}", minus, data["resistance_ohm"],
                              reactance / omega if reactance > 0 else 0.0, -1 / (omega * reactance) if reactance < 0 else None)
            wanted[f"{'before' if state == 'f' else 'after'}{number}"] = (f"{node}n{number}", minus)
    plus, minus = f"{name}ln{first}", "0" if last == count - 1 else f"{name}ln{last + 1}"
    meter(netlist, name + "l", plus, minus, instrument)
    free = tuple(p if p == "0" else p.replace(name + "l", name + "f") for p in (plus, minus))
    netlist.measure(name, frequency, undisturbed_voltage=free, loaded_voltage=(plus, minus), supply_current_before=f"i:{name}f",
                    supply_current_after=f"i:{name}l", **wanted)
    return lambda found: body_of("series-string", instrument, frequency, supply={"voltage_volt": volts}, elements=elements)


def series_ammeter(netlist, rng, name, alternating):
    """A circuit of R, L, C opened for an ammeter."""
    frequency, volts = frequency_of(rng, alternating), log_uniform(rng, 0.1, 1000)
    burden = log_uniform(rng, 1e-2, 1e4)
    source = {"voltage_volt": volts, "resistance_ohm": log_uniform(rng, 1, 1e6)}
    if alternating and rng.random() < 0.5:
        source["inductance_henry"] = log_uniform(rng, 1e-4, 1)
    if alternating and rng.random() < 0.5:
        source["series_capacitance_farad"] = log_uniform(rng, 1e-9, 1e-4)
    for state in ("f", "l"):
        node = name + state
        netlist.source(node, node + "s", volts, frequency)
        netlist.impedance(node + "z", node + "s", "0" if state == "f" else node + "t", source["resistance_ohm"],
                          source.get("inductance_henry", 0.0), source.get("series_capacitance_farad"))
    netlist.impedance(name + "lm", name + "lt", "0", burden)
    netlist.measure(name, frequency, undisturbed_current=f"i:{name}f", loaded_current=f"i:{name}l", burden_voltage=name + "lt")
    return lambda found: body_of("series-ammeter", {"function": "current", "burden_resistance_ohm": burden}, frequency, source=source)


MAKERS = (thevenin, divider, series_string, series_ammeter)


def generate(netlist, count=60):
    """`count` circuits of each of the four kinds, half of them ac: name -> function from ngspice's values to the request body."""
    rng = np.random.default_rng(SEED)
    bodies = {}
    for maker in MAKERS:
        for number in range(count):
            name = f"{maker.__name__.replace('_', '')}{number}"
            bodies[name] = maker(netlist, rng, name, alternating=number % 2 == 1)
    return bodies

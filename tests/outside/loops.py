"""Random signal loops for the loop shift check: each as a request body and as networks for ngspice.

A transmitter is a source of its set current while its voltage suffices; else it is its lift-off voltage (a voltage behind a resistance,
which may be negative), or the highest voltage of its active output. Both are simulated, with the instrument and without; ngspice's own
voltages then say which of the two is the real one.
"""
import math

import numpy as np

from .ngspice import Netlist

SEED = 20260401
SLOPE = 0.0514      # volt in which the test diode's current grows by the factor e: the rule set's diode_slope
TOP = 0.020         # the diode's forward voltage is stated at the top of a 4 to 20 mA signal

CONNECTIONS = {
    "two-wire": ("across-receiver", "across-transmitter", "across-supply", "in-series", "across-test-diode", "clamp"),
    "four-wire": ("across-receiver", "across-transmitter", "in-series", "across-test-diode"),
    "voltage-signal": ("across-receiver", "across-transmitter"),
}


def log_uniform(rng, low, high):
    """A value whose logarithm is uniform between two bounds."""
    return float(10 ** rng.uniform(math.log10(low), math.log10(high)))


def thermal_voltage():
    """ngspice's own kT/q, from the voltages of one diode model at two currents."""
    netlist = Netlist(signed=True)
    netlist.add(".model dvt d(is=1e-14 n=1)", "dvta a 0 dvt", "ivta 0 a dc 1e-3", "dvtb b 0 dvt", "ivtb 0 b dc 1e-5")
    netlist.measure("vt", None, a="a", b="b")
    found = netlist.run()
    return (found["vt", "a"] - found["vt", "b"]) / math.log((1e-3 + 1e-14) / (1e-5 + 1e-14))


class Loop:
    """One loop with one connection; subclasses lay out its network."""

    kinds = ("i", "v")      # the transmitter as a current source, and at its voltage limit

    def __init__(self, name, connection, rng):
        self.name, self.connection = name, connection
        self.wire, self.other = log_uniform(rng, 0.1, 100), float(rng.choice([0.0, 280.0, 340.0]))
        self.receiver, self.current = log_uniform(rng, 50, 1000), float(rng.uniform(0.0035, 0.023))
        self.forward = float(rng.uniform(0.4, 0.8))
        self.meter = log_uniform(rng, 500, 1e8)
        if connection == "in-series":
            self.meter = log_uniform(rng, 0.1, 2000)
        if connection in ("across-test-diode", "clamp"):      # a loop with voltage to spare, so that the diode's own drop does not matter
            self.kinds = ("i",)
            self.meter, self.receiver, self.other = log_uniform(rng, 0.5, 300), log_uniform(rng, 50, 250), 0.0

    def body(self):
        """The request body; subclasses add the transmitter and what feeds it."""
        instrument = {"function": "voltage", "input_resistance_ohm": self.meter}
        if self.connection in ("in-series", "across-test-diode"):
            instrument = {"function": "current", "burden_resistance_ohm": self.meter}
        body = {"connection": self.connection, "instrument": {"function": "clamp"} if self.connection == "clamp" else instrument,
                "signal": "4-20-ma", "receiver": {"resistance_ohm": self.receiver}, "wire": {"resistance_ohm": self.wire},
                "other_resistance_ohm": self.other, "transmitter": {"output_current_ampere": self.current}}
        if self.connection == "across-test-diode":
            body["test_diode"] = {"forward_voltage_volt": self.forward}
        return body

    def place(self, netlist, thermal):
        """Adds all networks of this loop and what is wanted of them: name -> node or pair of nodes."""
        wanted = {}
        for state in "fw":
            for kind in self.kinds:
                node = f"{self.name}{state}{kind}"
                wanted |= {f"{node}_{what}": place for what, place in self.network(netlist, node, kind).items()}
                if state == "w":
                    wanted |= self._instrument(netlist, node, thermal)
        return wanted

    def _instrument(self, netlist, node, thermal):
        ends = {"across-receiver": (f"{node}r", "0"), "across-transmitter": (f"{node}t", self.return_of(node)),
                "across-supply": (f"{node}p", "0"), "across-test-diode": (f"{node}d", f"{node}e"), "in-series": (f"{node}d", f"{node}e")}
        if self.connection == "across-test-diode":
            saturation = TOP / math.expm1(self.forward / SLOPE)
            netlist.add(f".model m{node} d(is={saturation!r} n={SLOPE / thermal!r})", f"d{node} {node}d {node}e m{node}")
        if self.connection in ends:
            netlist.impedance(f"{node}m", *ends[self.connection], self.meter)
        return {f"{node}_meter": ends["across-test-diode"]} if self.connection == "across-test-diode" else {}

    def return_of(self, node):
        """The node that the transmitter's other terminal is on."""
        return "0"

    def receiver_branch(self, netlist, node, start, wire):
        """From `start` through the place of a test diode or series instrument, a wire and the receiver to ground."""
        open_here = node.startswith(f"{self.name}w") and self.connection in ("in-series", "across-test-diode")
        netlist.add(f"v{node}d {start} {node}d dc 0")
        if not open_here:
            netlist.add(f"v{node}e {node}d {node}e dc 0")
        netlist.impedance(f"{node}b", f"{node}e", f"{node}r", wire)
        netlist.impedance(f"{node}r", f"{node}r", "0", self.receiver)

    def outside(self, node, terminal):
        """The terminal that the wiring meets: beyond the test diode, which counts as part of the transmitter."""
        return f"{node}e" if self.connection == "across-test-diode" else terminal

    def state(self, found, state):
        """(receiver voltage, transmitter voltage) that are real in this state ("f" free or "w" with the instrument), or None."""
        for kind in self.kinds:
            node = f"{self.name}{state}{kind}"
            volts, current = found["loops", f"{node}_transmitter"], found["loops", f"{node}_sense"]
            if self.suffices(volts) if kind == "i" else 0 < current <= self.current:
                return found["loops", f"{node}_receiver"], volts
        return None


class TwoWire(Loop):
    """Supply s, its terminals p, transmitter t to u, receiver r."""

    def __init__(self, name, connection, rng):
        super().__init__(name, connection, rng)
        self.supply, self.supply_resistance = float(rng.uniform(12, 40)), float(rng.choice([0.0, log_uniform(rng, 0.1, 200)]))
        if connection in ("across-test-diode", "clamp"):
            self.supply = 40.0
        if rng.random() < 0.5:
            self.base, self.slope = float(rng.uniform(7, 15)), 0.0
            self.liftoff = {"voltage_volt": self.base}
        else:
            low, high = float(rng.uniform(8, 19)), float(rng.uniform(8, 16))
            self.liftoff = {"low_current_ampere": 0.004, "low_voltage_volt": low, "high_current_ampere": 0.022, "high_voltage_volt": high}
            self.slope = (high - low) / 0.018
            self.base = low - self.slope * 0.004

    def body(self):
        return {"loop": "two-wire", **super().body(), "liftoff": self.liftoff,
                "supply": {"voltage_volt": self.supply, "resistance_ohm": self.supply_resistance}}

    def network(self, netlist, node, kind):
        netlist.add(f"v{node}s {node}s 0 dc {self.supply!r}")
        netlist.impedance(f"{node}o", f"{node}s", f"{node}p", self.supply_resistance)
        netlist.impedance(f"{node}a", f"{node}p", f"{node}t", self.wire / 2 + self.other)
        netlist.add(f"v{node}x {node}t {node}y dc 0")
        if kind == "i":
            netlist.add(f"i{node}t {node}y {node}u dc {self.current!r}")
        else:
            netlist.add(f"v{node}t {node}y {node}z dc {self.base!r}")
            netlist.impedance(f"{node}z", f"{node}z", f"{node}u", self.slope)
        self.receiver_branch(netlist, node, f"{node}u", self.wire / 2)
        return {"receiver": f"{node}r", "transmitter": (f"{node}t", self.outside(node, f"{node}u")), "sense": f"i:{node}x"}

    def return_of(self, node):
        return f"{node}u"

    def suffices(self, volts):
        return volts >= self.base + self.slope * self.current


class FourWire(Loop):
    """An active output t, receiver r."""

    def __init__(self, name, connection, rng):
        super().__init__(name, connection, rng)
        self.compliance = 30.0 if connection == "across-test-diode" else float(rng.uniform(5, 30))

    def body(self):
        body = {"loop": "four-wire", **super().body()}
        body["transmitter"]["compliance_voltage_volt"] = self.compliance
        return body

    def network(self, netlist, node, kind):
        netlist.add(f"v{node}x {node}y {node}t dc 0")
        netlist.add(f"i{node}t 0 {node}y dc {self.current!r}" if kind == "i" else f"v{node}t {node}y 0 dc {self.compliance!r}")
        self.receiver_branch(netlist, node, f"{node}t", self.wire + self.other)
        return {"receiver": f"{node}r", "transmitter": self.outside(node, f"{node}t"), "sense": f"i:{node}x"}

    def suffices(self, volts):
        return volts <= self.compliance


class VoltageSignal(Loop):
    """A voltage behind a resistance, its terminals t, receiver r."""

    kinds = ("v",)

    def __init__(self, name, connection, rng):
        super().__init__(name, connection, rng)
        self.volts, self.output_resistance, self.receiver = float(rng.uniform(1, 5)), log_uniform(rng, 1, 1e4), log_uniform(rng, 1e4, 1e7)

    def body(self):
        return {"loop": "voltage-signal", **super().body(), "signal": "1-5-v",
                "transmitter": {"output_voltage_volt": self.volts, "output_resistance_ohm": self.output_resistance}}

    def network(self, netlist, node, kind):
        netlist.add(f"v{node}s {node}s 0 dc {self.volts!r}")
        netlist.impedance(f"{node}o", f"{node}s", f"{node}t", self.output_resistance)
        netlist.impedance(f"{node}a", f"{node}t", f"{node}r", self.wire + self.other)
        netlist.impedance(f"{node}r", f"{node}r", "0", self.receiver)
        return {"receiver": f"{node}r", "transmitter": f"{node}t"}

    def state(self, found, state):
        node = f"{self.name}{state}v"
        return found["loops", f"{node}_receiver"], found["loops", f"{node}_transmitter"]


_KINDS = {"two-wire": TwoWire, "four-wire": FourWire, "voltage-signal": VoltageSignal}


def simulate(count=20):
    """(loops, ngspice's values): `count` of every kind of loop with every connection."""
    rng, netlist, thermal = np.random.default_rng(SEED), Netlist(signed=True), thermal_voltage()
    loops = [_KINDS[loop](f"{loop}{connection}{number}k".replace("-", ""), connection, rng) for loop, connections in CONNECTIONS.items()
             for connection in connections for number in range(count)]
    wanted = {}
    for loop in loops:
        wanted |= loop.place(netlist, thermal)
    netlist.measure("loops", None, **wanted)
    return loops, netlist.run()

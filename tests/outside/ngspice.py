"""Runs many linear circuits in one ngspice process and reads node voltages and source currents back with full digits."""
import re
import subprocess

# Linear circuits need no iteration, but ngspice's defaults (reltol 1e-3) would still let a dc operating point stop early.
_OPTIONS = ".options reltol=1e-12 abstol=1e-18 vntol=1e-15 gmin=1e-24 pivrel=1e-2\n"
_VALUE = re.compile(r"^(\S+)\s*=\s*(\S+)\s*$")


class Netlist:
    """One ngspice deck that grows circuit by circuit; every circuit has node names of its own and shares only ground."""

    def __init__(self, signed=False):
        """`signed`: report values with their sign, which only dc has, instead of magnitudes."""
        self.cards, self.wanted = [], []
        self._form = "{}" if signed else "abs({})"

    def add(self, *cards):
        """Adds element cards; a source is written by `source`."""
        self.cards.extend(cards)

    def source(self, name, plus, volts, frequency):
        """A voltage source to ground, dc or ac."""
        self.cards.append(f"v{name} {plus} 0 " + (f"dc 0 ac {volts!r}" if frequency else f"dc {volts!r}"))

    def impedance(self, name, plus, minus, resistance, inductance=0.0, series_capacitance=None):
        """R, L and C in series between two nodes; a zero part is left out."""
        parts = [("r", resistance), ("l", inductance), ("c", series_capacitance)]
        parts = [(kind, value) for kind, value in parts if value] or [("v", None)]
        node = plus
        for number, (kind, value) in enumerate(parts):
            following = minus if number == len(parts) - 1 else f"{name}_{number}"
            self.cards.append(f"{kind}{name}{kind} {node} {following} " + ("dc 0" if value is None else repr(float(value))))
            node = following

    def measure(self, circuit, frequency, **expressions):
        """Values wanted of one circuit: name -> a node pair ("a", "b"), a node "a", or "i:source"."""
        self.wanted.append((circuit, frequency, expressions))

    def run(self):
        """{(circuit, name): value}"""
        script = ["set numdgt=15", "set noaskquit"]
        for circuit, frequency, expressions in self.wanted:
            script.append(f"ac lin 1 {frequency!r} {frequency!r}" if frequency else "op")
            for name, what in expressions.items():
                script.append(f"let {circuit}_{name} = {self._form.format(_expression(what))}")
                script.append(f"print {circuit}_{name}")
            script.append("destroy all")
        deck = "circuits of a test\n" + _OPTIONS + "\n".join(self.cards) + "\n.control\n" + "\n".join(script) + "\nquit\n.endc\n.end\n"
        done = subprocess.run(["ngspice", "-b"], input=deck, capture_output=True, text=True, timeout=300, check=False)
        found = {}
        for line in done.stdout.splitlines():
            match = _VALUE.match(line.strip())
            if match:
                found[match.group(1)] = float(match.group(2))
        values = {}
        for circuit, _, expressions in self.wanted:
            for name in expressions:
                key = f"{circuit}_{name}"
                assert key in found, f"ngspice gave no {key}:\n{done.stdout[-2000:]}\n{done.stderr[-2000:]}"
                values[circuit, name] = found[key]
        return values


def _expression(what):
    if isinstance(what, tuple):
        return f"v({what[0]})-v({what[1]})" if what[1] != "0" else f"v({what[0]})"
    return f"i(v{what[2:]})" if what.startswith("i:") else f"v({what})"

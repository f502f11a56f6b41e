"""One check compiled for one signature: the code, and where in its result each part of the answer is found."""
import threading

import numpy as np

from .coverage import coverage_ends, ends_of, even_ends
from .emit import Emitter
from .graph import Graph
from .points import POINTS
from .values import SAMPLES, Absent, Key, Node, Pair, sampled_leaves

_scratch = threading.local()
_HIDDEN_AXES = ("count", "table")


def _buffers(counts):
    """Scratch arrays of this thread, at least as many as asked for."""
    if not hasattr(_scratch, "f"):
        _scratch.f, _scratch.b = [], []
    while len(_scratch.f) < counts["f"]:
        _scratch.f.append(np.empty(POINTS))
    while len(_scratch.b) < counts["b"]:
        _scratch.b.append(np.empty(POINTS, dtype=bool))
    return _scratch.f, _scratch.b


class Output:
    """Where a formula's value stands in the compiled function's result.

    `place` is an index, `samples` that of its samples or None, `fixed` the value itself where the signature settles it, `absent` an
    Absent, `hidden` the axes of a grid that is not reported.
    """

    __slots__ = ("formula", "place", "imaginary", "samples", "fixed", "absent", "hidden", "axes", "factor", "names")

    def __init__(self, formula, units):
        self.formula, self.names = formula, formula.get("names")
        self.factor = units[formula["unit"]]["factor"] if formula["unit"] else 1
        self.place = self.imaginary = self.samples = self.fixed = self.absent = None
        self.hidden, self.axes = (), ()


class Plan:
    """Run with `run(values, sampled, uniforms, drawn, sizes)`; read through `live` (findings that can hold), `cautions`, `assumptions` and `outputs`."""

    def __init__(self, model, states, filled):
        self.model, self.states, self.layouts = model, states, {}
        graph = Graph(model.bundle, model, states, filled)
        for formula in model.formulas:     # in dependency order, so that no recursion grows deep
            graph.formula(formula["name"])
        self._graph, self._wanted, self._places = graph, [], {}
        self._single, self._flat, self._deep = [], [], []     # places of samples reported with an interval: of one input, of several, with more axes
        self._holding = [graph.condition(f["when"]) if "when" in f else True for f in model.findings]
        self.live = [(number, self._place_of(value)) for number, value in enumerate(self._holding) if value is not False]
        self.cautions = [self._condition(c.get("when")) for c in model.declared.get("cautions", ())]
        self.assumptions = [self._condition(a.get("when")) for a in model.declared.get("assumptions", ())]
        self.outputs = {f["name"]: self._output(f) for f in model.formulas}
        emitter = Emitter(graph)
        self._fast, self._safe, self._counts = emitter.compile(self._wanted)
        self.uniform_count = len(emitter.uniforms)     # those that something reported rests on
        self._basis = {}
        self.sampled = [i for i, state in enumerate(states) if self._is_sampled(model.slots[i], state)]
        self.exact = not emitter.arrays     # floats only: nothing to sample, no numpy call

    @staticmethod
    def _is_sampled(slot, state):
        """Whether samples or an array are made from this slot: an uncertain number, or the column of a list."""
        return state in ("L", "U", "N", "V") if slot.axis else slot.kind == "number" and state == "u"

    # ---- what is wanted ----------------------------------------------------------------------------------------------------------------

    def _want(self, node, lane="a"):
        key = (node.index, lane)
        if key not in self._places:
            self._places[key] = len(self._wanted)
            self._wanted.append((node, lane))
        return self._places[key]

    def _condition(self, tree):
        """True, False, or a place in the result."""
        return self._place_of(True if tree is None else self._graph.condition(tree))

    def _place_of(self, condition):
        return condition if isinstance(condition, bool) else self._want(condition)

    def _output(self, formula):
        output, value = Output(formula, self.model.bundle["units"]), self._graph.values[formula["name"]]
        if isinstance(value, Absent):
            output.absent = value
        elif isinstance(value, (bool, Key)):
            output.fixed = value.key if isinstance(value, Key) else value
        else:
            parts = [value] if isinstance(value, Node) else [value.re, value.im]
            axes = parts[0].axes.union(*(p.axes for p in parts))
            output.hidden = tuple(a["name"] for a in self.model.axes if a["name"] in axes and a["from"] in _HIDDEN_AXES)
            output.axes = tuple(a["name"] for a in self.model.axes if a["name"] in axes)
            if not output.hidden:
                self._place(output, parts, axes)
        return output

    def _place(self, output, parts, axes):
        if output.formula["show"] == "hidden" and output.formula["name"] not in self.model.mentioned:
            return
        output.place = self._want(parts[0])
        if len(parts) == 2:
            output.imaginary = self._want(parts[1])
        elif SAMPLES in axes and output.formula["show"] == "result" and not parts[0].boolean:
            output.samples = self._want(parts[0], "s")
            group = self._deep if axes != {SAMPLES} else self._single if sampled_leaves(parts[0]) == 1 else self._flat
            if output.samples not in group:
                group.append(output.samples)

    # ---- running -----------------------------------------------------------------------------------------------------------------------

    def run(self, values, sampled, uniforms, drawn, sizes):
        """The tuple of results. Never raises on arithmetic: what has no finite value is NaN or infinite in the tuple."""
        f, b = _buffers(self._counts)
        try:
            return self._fast(values, sampled, uniforms, drawn, sizes, f, b)
        except (ZeroDivisionError, ValueError, OverflowError):
            return self._safe(values, sampled, uniforms, drawn, sizes, f, b)

    def intervals(self, results, drawn):
        """{place of samples: (low, high)} for every result reported with an interval."""
        found = {place: even_ends(results[place]) for place in self._single}
        found.update(zip(self._flat, coverage_ends([results[place] for place in self._flat], drawn)))
        for place in self._deep:
            found[place] = ends_of(results[place], drawn)
        return found

    # ---- what a verdict rests on -------------------------------------------------------------------------------------------------------

    def basis(self, decided):
        """({name: record} of the unverified numbers of the bundle, slots) on which the conditions of findings 0..decided rest."""
        if decided not in self._basis:
            leaves, seen = set(), set()
            queue = [n for n in self._holding[:decided + 1] if isinstance(n, Node)]
            while queue:
                node = queue.pop()
                if node.index not in seen:
                    seen.add(node.index)
                    queue.extend(node.args)
                    if node.op in ("slot", "constant", "column", "lookup"):
                        leaves.add((node.op,) + node.extra)
            fixed, slots = {}, []
            for leaf in sorted(leaves, key=repr):
                if leaf[0] == "slot" or leaf[1] == "curve":
                    slots.append(leaf[-1])
                else:
                    fixed.update((name, record) for name, record in self.model.fixed_origins(leaf) if self.model.is_weak(record))
            self._basis[decided] = fixed, slots
        return self._basis[decided]

"""From a specialised graph to straight-line Python: floats for one point, numpy with scratch buffers for the samples.

Every node that depends on samples has two lanes: "a", the plain formula at the best estimates, and "s", an array over the
point set.  Nodes without samples have lane "a" only.  The function is written twice: with Python's own operators, which raise where IEEE 754
has no finite answer, and with functions that follow IEEE 754; the second runs only when the first has raised.
"""
import math

import numpy as np

from . import exact_math, kernels
from .coverage import ends_of, even_ends, plain_share, share
from .points import POINTS
from .values import SAMPLES, sampled_leaves

_INFIX = {"add": "+", "sub": "-", "mul": "*", "lt": "<", "le": "<=", "gt": ">", "ge": ">=", "eq": "==", "ne": "!=", "and": "and", "or": "or"}
_SCALAR = {
    "neg": "-{0}", "not": "not {0}", "abs": "abs({0})", "floor": "floor({0})", "exp": "exp({0})", "ln": "ln({0})", "sin": "sin({0})",
    "cos": "cos({0})", "min": "{0} if {0} < {1} or {0} != {0} else {1}", "max": "{0} if {0} > {1} or {0} != {0} else {1}",
    "select": "{1} if {0} else {2}", "finite": "{0} - {0} == 0.0",
}
_FAST = {"div": "{0} / {1}", "sqrt": "root({0})"}
_SAFE = {"div": "div({0}, {1})", "sqrt": "sqrt({0})"}
_UFUNC = {
    "add": "add", "sub": "subtract", "mul": "multiply", "div": "divide", "neg": "negative", "min": "minimum", "max": "maximum", "abs": "absolute",
    "sqrt": "sqrt", "floor": "floor", "lt": "less", "le": "less_equal", "gt": "greater", "ge": "greater_equal", "eq": "equal",
    "ne": "not_equal", "and": "logical_and", "or": "logical_or", "not": "logical_not", "finite": "isfinite",
}
_ARRAY = {"exp": "exp_array({0})", "ln": "ln_array({0})", "sin": "sin_array({0})", "cos": "cos_array({0})", "select": "where({0}, {1}, {2})"}
_REDUCE = {"any": "{0}.any(axis={1})", "all": "{0}.all(axis={1})", "count": "{0}.sum(axis={1}, dtype=float)", "sum": "fold_sum({0}, {1})",
           "least": "fmin.reduce({0}, axis={1})", "greatest": "fmax.reduce({0}, axis={1})"}

_SIDED = ("lt", "le", "gt", "ge")      # comparisons whose probability can be corrected by the difference of their sides

_GLOBALS = {
    "root": math.sqrt, "div": exact_math.div, "sqrt": exact_math.sqrt, "floor": exact_math.floor, "nan": exact_math.NAN,
    "exp": exact_math.exp, "ln": exact_math.ln, "sin": exact_math.sin, "cos": exact_math.cos,
    "exp_array": exact_math.exp_array, "ln_array": exact_math.ln_array, "sin_array": exact_math.sin_array, "cos_array": exact_math.cos_array,
    "fold_sum": exact_math.fold_sum, "ends_of": ends_of, "even_ends": even_ends, "share": share, "plain_share": plain_share,
    "where": np.where, "fmin": np.fmin, "fmax": np.fmax, "arange": np.arange,
    "at_least": kernels.at_least, "at_greatest": kernels.at_greatest,
    "ranking": kernels.ranking, "quantile": kernels.quantile, "share_place": kernels.share_place, "at_place": kernels.at_place,
    "spread_onto": kernels.spread_onto, "spread_along": kernels.spread_along, "POINTS": float(POINTS),
}


def _is_corrected(condition):
    """Whether the difference of the sides of a comparison can correct its probability: on one uncertain input alone the points are even."""
    return condition.op in _SIDED and sampled_leaves(condition) != 1


class _Line:
    __slots__ = ("name", "args", "fast", "safe", "buffer")

    def __init__(self, name, args, fast, safe=None, buffer=None):
        self.name, self.args, self.fast, self.safe, self.buffer = name, args, fast, safe or fast, buffer


class Emitter:
    """Writes the code that computes a set of (node, lane) wanted by the answer."""

    def __init__(self, graph):
        self.graph = graph
        self.order = [a["name"] for a in graph.check.axes] + [SAMPLES]
        self.lines = []
        self.names = {}
        self.globals = dict(_GLOBALS)
        for op, ufunc in _UFUNC.items():
            self.globals["np_" + op] = getattr(np, ufunc)

    def compile(self, wanted):
        """Return (fast, safe, scratch counts); the functions take (v, s, u, d, n, f, b) and return a tuple, one value per wanted (node, lane).

        v: values per slot; s: sampled arrays per slot; u: coordinates of the unknowns; d: the Drawn behind them; n: items per list axis; f, b: scratch buffers
        for floats and booleans.
        """
        needed = self._needed(wanted)
        self.arrays = any(node.axes for node, _ in needed)
        self.uniforms = sorted({node.extra[0] for node, lane in needed if node.op == "uniform" and lane == "s"})
        for node, lane in needed:
            self._emit(node, lane)
        results = [self._name(node, lane) for node, lane in wanted]
        counts = self._allocate(results)
        return self._function("fast", results), self._function("safe", results), counts

    # ---- what is needed ------------------------------------------------------------------------------------------------------------

    @staticmethod
    def _lane(node, lane):
        return lane if SAMPLES in node.axes else "a"

    def _needed(self, wanted):
        found, queue = {}, [(n, self._lane(n, lane)) for n, lane in wanted]
        while queue:
            node, lane = queue.pop()
            if (node.index, lane) in found:
                continue
            found[node.index, lane] = (node, lane)
            inner = "s" if node.op in ("share", "mean", "low_end", "high_end") else lane
            queue.extend((a, self._lane(a, inner)) for a in self._inputs(node))
        return [found[k] for k in sorted(found)]

    @staticmethod
    def _inputs(node):
        """The nodes this one's code reads. A corrected share reads the sides of its comparison, and sees by itself where they have no value."""
        if node.op == "share" and _is_corrected(node.args[0]):
            return (node.args[0], *node.args[0].args)
        return node.args

    def _axes(self, node, lane):
        return [a for a in self.order if a in node.axes and (lane == "s" or a != SAMPLES)]

    def _name(self, node, lane):
        return self.names[node.index, self._lane(node, lane)]

    # ---- lines ---------------------------------------------------------------------------------------------------------------------

    def _emit(self, node, lane):
        leaf = getattr(self, "_leaf_" + node.op, None)
        if leaf:
            self.names[node.index, lane] = leaf(node, lane)
            return
        name = self.names[node.index, lane] = f"x{node.index}{lane}"
        special = getattr(self, "_op_" + node.op, None)
        if special:
            special(name, node, lane)
        elif node.op in _REDUCE:
            self._op_reduce(name, node, lane)
        else:
            self._elementwise(name, node, lane)

    def _leaf_number(self, node, lane):
        return repr(node.extra[0]) if node.extra[0] >= 0 else f"({node.extra[0]!r})"

    def _leaf_constant(self, node, lane):
        value = float(self.graph.check.constant(node.extra[0])["value"])
        return f"({value!r})"

    def _leaf_truth(self, node, lane):
        return repr(node.extra[0])

    def _leaf_nothing(self, node, lane):
        return "nan"

    def _leaf_slot(self, node, lane):
        name = f"{'sv'[lane == 'a']}{node.extra[0]}"
        self.lines.append(_Line(name, [], f"{name[0]}[{node.extra[0]}]"))
        return name

    def _leaf_column(self, node, lane):
        axis, column = node.extra
        name = "column_" + axis + "_" + column.replace(".", "_")
        self.globals[name] = self.graph.check.column_array(axis, column)
        return name

    def _leaf_size(self, node, lane):
        return f"float(n[{node.extra[0]!r}])"

    def _leaf_place(self, node, lane):
        axis = node.extra[0]
        name = "place_" + axis
        if self.graph.axis_of[axis]["from"] == "list":
            self.lines.append(_Line(name, [], f"arange(float(n[{axis!r}]))"))
        else:
            self.globals[name] = np.arange(float(self.graph.check.axis_size(axis)))
        return name

    def _operands(self, node, lane, axes):
        """Operand texts, expanded so that numpy lines them up along `axes`."""
        return [self._expanded(a, lane, axes) for a in node.args]

    def _expanded(self, node, lane, axes):
        lane = self._lane(node, lane)
        name, own = self._name(node, lane), self._axes(node, lane)
        if not own or own == axes[len(axes) - len(own):]:
            return name
        return name + "[" + ", ".join(":" if a in own else "None" for a in axes) + "]"

    def _arg_names(self, node, lane):
        return [self._name(a, lane) for a in node.args]

    def _elementwise(self, name, node, lane):
        axes = self._axes(node, lane)
        operands = self._operands(node, lane, axes)
        args = self._arg_names(node, lane)
        if not axes:
            if node.op == "code_is":
                fast = safe = f"{operands[0]} == {node.extra[0]}"
            elif node.op in _INFIX:
                fast = safe = f"{operands[0]} {_INFIX[node.op]} {operands[1]}"
            elif node.op in _SCALAR:
                fast = safe = _SCALAR[node.op].format(*operands)
            else:
                fast, safe = _FAST[node.op].format(*operands), _SAFE[node.op].format(*operands)
            self.lines.append(_Line(name, args, fast, safe))
        elif node.op == "code_is":
            self.lines.append(_Line(name, args, f"np_eq({operands[0]}, {node.extra[0]})"))
        elif node.op in _UFUNC:
            buffer = None
            if axes == [SAMPLES]:
                buffer = "b" if node.boolean else "f"
            self.lines.append(_Line(name, args, f"np_{node.op}({', '.join(operands)})", buffer=buffer))
        else:
            self.lines.append(_Line(name, args, _ARRAY[node.op].format(*operands)))

    def _op_lookup(self, name, node, lane):
        argument, scalar = self._name(node.args[0], lane), not self._axes(node, lane)
        key = f"lookup_{'one' if scalar else 'many'}_" + "_".join(str(e).replace(".", "_") for e in node.extra)
        look = self.graph.check.lookup(node.extra)
        self.globals[key] = look.one if scalar else look.many
        data = f", v[{node.extra[1]}]" if node.extra[0] == "curve" else ""
        self.lines.append(_Line(name, [argument], f"{key}({argument}{data})"))

    def _op_uniform(self, name, node, lane):
        axes = self._axes(node, lane)
        low, high = self._operands(node, lane, axes)
        place = f"u[{self.uniforms.index(node.extra[0])}]" if lane == "s" else "0.5"
        self.lines.append(_Line(name, self._arg_names(node, lane), f"{low} + ({high} - {low}) * {place}"))

    def _op_share(self, name, node, lane):
        condition = node.args[0]
        argument, axes = self._name(condition, "s"), self._axes(condition, "s")
        if _is_corrected(condition):
            sides = self._operands(condition, "s", axes)
            args = [argument, *self._arg_names(condition, "s")]
            self.lines.append(_Line(name, args, f"share({argument}, {sides[0]} - {sides[1]}, {condition.op in ('gt', 'ge')}, d)"))
            return
        known = self._expanded(node.args[1], "s", axes) if len(node.args) > 1 else "True"
        self.lines.append(_Line(name, self._arg_names(node, "s"), f"plain_share({argument}, {known})"))

    def _op_indicator(self, name, node, lane):
        axes = self._axes(node, lane)
        operands = self._operands(node, lane, axes)
        known = operands[1] if len(operands) > 1 else "True"
        text = f"where({known}, where({operands[0]}, 1.0, 0.0), nan)" if axes else f"(1.0 if {operands[0]} else 0.0) if {known} else nan"
        self.lines.append(_Line(name, self._arg_names(node, lane), text))

    def _op_mean(self, name, node, lane):
        argument = self._name(node.args[0], "s")
        total = f"fold_sum({argument}, -1)"
        self.lines.append(_Line(name, [argument], f"{total if node.axes else f'float({total})'} / POINTS"))

    def _ends(self, name, node, part):
        argument = self._name(node.args[0], "s")
        both = argument + "_ends"
        if not any(line.name == both for line in self.lines):
            even = node.args[0].axes == {SAMPLES} and sampled_leaves(node.args[0]) == 1
            self.lines.append(_Line(both, [argument], f"even_ends({argument})" if even else f"ends_of({argument}, d)"))
        self.lines.append(_Line(name, [both], f"{both}[{part}]"))

    def _op_low_end(self, name, node, lane):
        self._ends(name, node, 0)

    def _op_high_end(self, name, node, lane):
        self._ends(name, node, 1)

    def _with_axes(self, node, lane, extra):
        inside = node.axes | set(extra)
        return [a for a in self.order if a in inside and (lane == "s" or a != SAMPLES)]

    def _op_reduce(self, name, node, lane):
        argument, axis = node.args[0], node.extra[0]
        axes = self._with_axes(argument, lane, [axis])
        text = self._expanded(argument, lane, axes)
        position = axes.index(axis)
        if axis not in argument.axes:
            text = f"spread_along({self._name(argument, lane)}, {position}, {self._size_text(axis)})"
        text = _REDUCE[node.op].format(text, position)
        if len(axes) == 1:
            text = f"{'bool' if node.boolean else 'float'}({text})"
        self.lines.append(_Line(name, [self._name(argument, lane)], text))

    def _op_at_least(self, name, node, lane):
        axes = self._with_axes(node, lane, node.extra)
        key, x = self._operands(node, lane, axes)
        text = f"{node.op}({key}, {x}, {axes.index(node.extra[0])}, {len(axes)})"
        self.lines.append(_Line(name, self._arg_names(node, lane), text))

    _op_at_greatest = _op_at_least

    def _op_ranking(self, name, node, lane):
        axes = self._with_axes(node, lane, node.extra)
        text = f"{node.op}({', '.join(self._operands(node, lane, axes))}, {self._over(node.extra, axes)})"
        self.lines.append(_Line(name, self._arg_names(node, lane), text))

    _op_share_place = _op_ranking

    def _op_quantile(self, name, node, lane):
        axes = self._axes(node, lane)
        ranking, share = node.args
        kept = tuple(axes.index(a) for a in self._axes(ranking, lane))
        text = f"quantile({self._name(ranking, lane)}, {self._expanded(share, lane, axes)}, {kept}, {len(axes)})"
        self.lines.append(_Line(name, self._arg_names(node, lane), text))

    def _op_at_place(self, name, node, lane):
        axes = self._with_axes(node, lane, node.extra)
        x, place = node.args
        text = f"at_place({self._expanded(x, lane, axes)}, {self._expanded(place, lane, axes)}, {self._over(node.extra, axes)})"
        self.lines.append(_Line(name, self._arg_names(node, lane), text))

    def _op_spread_onto(self, name, node, lane):
        onto, reduced = node.extra[0], node.extra[1:]
        axes = [a for a in self._with_axes(node, lane, reduced) if a != onto]
        position, weight = self._operands(node, lane, axes)
        target = self._axes(node, lane).index(onto)
        text = f"spread_onto({position}, {weight}, {self._over(reduced, axes)}, {self._size_text(onto)}, {target})"
        self.lines.append(_Line(name, self._arg_names(node, lane), text))

    def _over(self, reduced, axes):
        """Text of the last two arguments of a kernel over several axes: positions of the reduced ones as written, sizes of all."""
        sizes = "".join(self._size_text(a) + ", " for a in axes)
        return f"{tuple(axes.index(a) for a in reduced)}, ({sizes})"

    def _size_text(self, axis):
        if axis == SAMPLES:
            return str(POINTS)
        return f"n[{axis!r}]" if self.graph.axis_of[axis]["from"] == "list" else str(self.graph.check.axis_size(axis))

    # ---- scratch buffers and text -----------------------------------------------------------------------------------------------------

    def _allocate(self, results):
        """Give every one-dimensional array operation a buffer that nothing still needed is using."""
        last = {}
        for place, line in enumerate(self.lines):
            for argument in line.args:
                last[argument] = place
        for name in results:
            last[name] = len(self.lines)
        counts, free, held = {"f": 0, "b": 0}, {"f": [], "b": []}, {}
        for place, line in enumerate(self.lines):
            for argument in set(line.args):
                if argument in held and last[argument] == place:
                    buffer = held.pop(argument)
                    free[buffer[0]].append(buffer)
            if line.buffer:
                kind = line.buffer
                if free[kind]:
                    buffer = free[kind].pop()
                else:
                    buffer = f"{kind}[{counts[kind]}]"
                    counts[kind] += 1
                held[line.name] = buffer
                line.fast = line.safe = line.fast[:-1] + f", out={buffer})"
        return counts

    def _function(self, form, results):
        body = [f"    {line.name} = {getattr(line, form)}" for line in self.lines]
        text = "\n".join(["def run(v, s, u, d, n, f, b):", *body, f"    return ({', '.join(results)}{',' if results else ''})"])
        space = dict(self.globals)
        exec(compile(text, f"<{self.graph.check.name} {form}>", "exec"), space)
        space["run"].text = text
        return space["run"]

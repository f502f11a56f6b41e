"""From a check's formula trees and one request's *signature* to a graph of plain operations.

A signature says, for every input slot, whether it is absent, exact, uncertain, and which choice was made.  Everything that
depends on the signature alone is settled here, once: conditionals on choices, `given`, `first_of`, absence.  What is left is a graph
of nodes, each one operation on real numbers or booleans along named axes; a complex number is a pair of nodes.  Equal operations on equal operands
are one node.
"""
from .graph_arithmetic import Arithmetic
from .graph_axes import OverAxes
from .graph_truth import Truth
from .values import NO_VALUE, SAMPLES, Absent, Key, Node, Pair


class Graph(Arithmetic, Truth, OverAxes):
    """The specialised graph of one check for one signature.

    `check` is the declaration (slots, axes, formulas), `bundle` its rule set's data, `states` the signature and `filled` the
    set of list axes that have at least one item.
    """

    def __init__(self, bundle, check, states, filled):
        self.bundle, self.check = bundle, check
        self.states, self.filled = states, filled
        self.slot_of = check.slot_index
        self.formula_of = {f["name"]: f for f in check.formulas}
        self.axis_of = {a["name"]: a for a in check.axes}
        self.values = {}
        self.uniforms = []          # nodes of the unknown quantities, in formula order
        self._nodes = {}

    # ---- nodes -------------------------------------------------------------------------------------------------------------------

    def node(self, op, *args, extra=(), axes=None, boolean=False, sure=False):
        """The node for this operation; the same one when asked again."""
        if axes is None:
            axes = frozenset().union(*(a.axes for a in args)) if args else frozenset()
        key = (op, tuple(a.index for a in args), extra, axes)
        found = self._nodes.get(key)
        if found is None:
            found = self._nodes[key] = Node(op, args, extra, axes, boolean, sure, len(self._nodes))
        return found

    def number(self, value):
        """A constant of the mathematics, not of the trade."""
        return self.node("number", extra=(float(value),), sure=True)

    def truth(self, value):
        """A boolean settled by the signature, as a node, where an array of booleans is needed."""
        return self.node("truth", extra=(bool(value),), boolean=True, sure=True)

    # ---- formulas ------------------------------------------------------------------------------------------------------------------

    def formula(self, name):
        """The value of a formula: Node, Pair, Absent or bool."""
        if name not in self.values:
            self.values[name] = self.value(self.formula_of[name]["tree"])
        return self.values[name]

    def value(self, tree):
        """The value of an expression tree."""
        if isinstance(tree, (int, float)):
            return self.number(tree)
        return getattr(self, "_" + tree[0])(*tree[1:])

    def condition(self, tree):
        """A condition: True, False or a boolean Node.  What is absent is false."""
        value = self.value(tree)
        return False if isinstance(value, Absent) else value

    # ---- leaves --------------------------------------------------------------------------------------------------------------------

    def _ref(self, name):
        if name in self.formula_of:
            return self.formula(name)
        index = self.slot_of.get(name)
        if index is not None:
            return self._slot(self.check.slots[index], index)
        axis, _, column = name.partition(".")
        return self._column(axis, column)

    def _slot(self, slot, index):
        state = self.states[index]
        if state is None or state == "a":
            return Absent((slot.path,))
        if slot.axis is None:
            if slot.kind == "choice":
                return Key(state)
            if slot.kind == "switch":
                return state
            return self.node("slot", extra=(index,), axes=frozenset((SAMPLES,)) if state == "u" else frozenset(), sure=True)
        axes = {slot.axis}
        if state in ("U", "V"):
            axes.add(SAMPLES)
        return self.node("slot", extra=(index,), axes=frozenset(axes), boolean=slot.kind == "switch", sure=state in ("L", "U"))

    def _column(self, axis, column):
        # A column of a table or of a catalogue: an array fixed in the bundle.
        values = self.check.column(axis, column)
        kind = self.check.column_kind(axis, column)
        if all(v is None for v in values):
            return NO_VALUE
        sure = kind != "number" or all(v is not None for v in values)
        return self.node("column", extra=(axis, column), axes=frozenset((axis,)), boolean=kind == "switch", sure=sure)

    def _const(self, name):
        return self.node("constant", extra=(name,), sure=True)

    def _key(self, key):
        return Key(key)

    def _pi(self):
        return self.number(3.141592653589793)

    def _absent(self):
        return NO_VALUE

    def _true(self):
        return True

    def _false(self):
        return False

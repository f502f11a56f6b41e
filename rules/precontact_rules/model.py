"""What the engine needs to know of one check of one rule set: formulas, axes, columns, constants, look-ups."""
import numpy as np

from .declaration import Check
from .exact_math import NAN
from .kernels import Lookup
from .phrase import Template

UNVERIFIED = ("practice", "informal", "memory")


class CheckModel:
    """One check, read from the bundle once; everything a graph or an answer asks for by name."""

    def __init__(self, bundle, name):
        self.bundle, self.name = bundle, name
        declared = bundle["checks"][name]
        self.declared = declared
        self.formulas, self.axes = declared["formulas"], declared["axes"]
        self.findings = declared["findings"]
        self.slots = Check(bundle, name).slots
        self.slot_index = {slot.path: index for index, slot in enumerate(self.slots)}
        self.formula_named = {f["name"]: f for f in self.formulas}
        self.mentioned = {name for f in self.findings for text in f["sentence"].values() for name in Template(text).names()}
        self._axis_named = {a["name"]: a for a in self.axes}
        self._lookups, self._applicable, self._inputs = {}, {}, {}

    def constant(self, name):
        """The constant's record: value in SI, unit, source, standing. Raises KeyError."""
        return self.declared.get("constants", {}).get(name) or self.bundle["constants"][name]

    def constant_or_none(self, name):
        """The constant's record, or None where no constant has this name."""
        return self.declared.get("constants", {}).get(name) or self.bundle["constants"].get(name)

    # ---- axes fixed in the bundle ----------------------------------------------------------------------------------------------------

    def entry_ids(self, axis):
        """Ids along an axis of catalogue entries."""
        return sorted(self.bundle["entries"].get(self._axis_named[axis]["of"], {}))

    def axis_size(self, axis):
        """Number of places along an axis that the bundle fixes."""
        declared = self._axis_named[axis]
        if declared["from"] == "count":
            return declared["count"]
        if declared["from"] == "entries":
            return len(self.entry_ids(axis))
        return len(next(iter(self.bundle["tables"][declared["table"]]["data"].values())))

    def column_field(self, axis, column):
        """The kind's declaration of a field that runs along an axis of entries."""
        fields = self.bundle["kinds"][self._axis_named[axis]["of"]]["fields"]
        return next(f for f in fields if f["name"] == column)

    def column_kind(self, axis, column):
        """number, choice or switch."""
        return "number" if self._axis_named[axis]["from"] == "table" else self.column_field(axis, column)["kind"]

    def column(self, axis, column):
        """Values along the axis, None where an entry has none: floats in SI, codes of choices, booleans."""
        declared = self._axis_named[axis]
        if declared["from"] == "table":
            return self.bundle["tables"][declared["table"]]["data"][column]
        return [self._entry_value(declared["of"], entry, self.column_field(axis, column)) for entry in self.entry_ids(axis)]

    def _entry_value(self, kind, entry, field):
        value = self.bundle["entries"][kind][entry]["fields"].get(field["name"])
        if value is None and "assume" in field:
            value = field["assume"]["value"] if field["kind"] != "number" else {
                "value": field["assume"]["value"] * self.bundle["units"][field["unit"]]["factor"]}
        if value is None:
            return None
        if field["kind"] == "choice":
            return [c["key"] for c in field["choices"]].index(value)
        return value["value"] if field["kind"] == "number" else value

    def column_array(self, axis, column):
        """The column as a numpy array; an absent number is NaN, an absent choice -1."""
        kind, values = self.column_kind(axis, column), self.column(axis, column)
        if kind == "choice":
            return np.array([-1 if v is None else v for v in values])
        if kind == "switch":
            return np.array([bool(v) for v in values])
        return np.array([NAN if v is None else float(v) for v in values])

    def column_origins(self, axis, column):
        """(name, origin) of every number along a column, for what a verdict rests on."""
        declared = self._axis_named[axis]
        if declared["from"] == "table":
            return [(declared["table"], self.bundle["tables"][declared["table"]])]
        entries = self.bundle["entries"][declared["of"]]
        values = ((entry, entries[entry]["fields"].get(column)) for entry in self.entry_ids(axis))
        return [(f"{entry}.{column}", value) for entry, value in values if isinstance(value, dict)]

    def fixed_origins(self, leaf):
        """(name, record) of the numbers of the bundle that a constant, column or table look-up reads."""
        if leaf[0] == "constant":
            return [(leaf[1], self.constant(leaf[1]))]
        return self.column_origins(*leaf[1:]) if leaf[0] == "column" else [(leaf[2], self.bundle["tables"][leaf[2]])]

    def axis_from(self, axis):
        """list, entries, table or count."""
        return self._axis_named[axis]["from"]

    def entry_title(self, axis, place):
        """Title of the entry at a place of an axis of entries, by language."""
        kind = self._axis_named[axis]["of"]
        return self.bundle["entries"][kind][self.entry_ids(axis)[place]]["title"]

    def applicable(self, states):
        """Paths of the inputs that apply in the branch this signature took."""
        branch = states[self.slot_index[self.declared["branch"]]]
        if branch not in self._applicable:
            self._applicable[branch] = {s.path for s in self.slots if s.only is None or branch in s.only}
        return self._applicable[branch]

    def inputs_of(self, name):
        """Paths of all inputs that a formula mentions, itself or through other formulas, whichever side of a conditional they stand on."""
        if name not in self._inputs:
            self._inputs[name] = frozenset()        # formulas come without cycles; this only guards the walk
            found = set()
            for mentioned in _references(self.formula_named[name]["tree"]):
                found |= self.inputs_of(mentioned) if mentioned in self.formula_named else {mentioned} & self.slot_index.keys()
            self._inputs[name] = frozenset(found)
        return self._inputs[name]

    # ---- look-ups --------------------------------------------------------------------------------------------------------------------

    def lookup(self, extra):
        """The Lookup for ("table", name, column) or ("curve", slot index)."""
        if extra not in self._lookups:
            if extra[0] == "table":
                table = self.bundle["tables"][extra[1]]
                first = table["columns"][0]["name"]
                made = Lookup(table["between"], table["below"], table["above"], table["data"][first], table["data"][extra[2]])
            else:
                field = self.slots[extra[1]].field
                made = Lookup(field["between"], field["below"], field["above"])
            self._lookups[extra] = made
        return self._lookups[extra]

    # ---- standing ----------------------------------------------------------------------------------------------------------------------

    def is_weak(self, origin):
        """Whether a number of this origin may not make this check's verdict milder."""
        return origin.get("standing") in UNVERIFIED and self.name not in origin.get("cautious_in", {})


def _references(tree):
    if isinstance(tree, list) and tree:
        if tree[0] == "ref":
            yield tree[1]
        elif tree[0] == "lookup" and tree[1] == "curve":
            yield tree[2]
            yield from _references(tree[3])
        else:
            for part in tree[1:]:
                yield from _references(part)

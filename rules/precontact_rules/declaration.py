"""The inputs of a check as its bundle declares them, flattened into slots."""


class Slot:
    """One leaf field. `path` is its name in formulas, `axis` the list it runs along or None, `pointer` its place in a body (`*` for the
    item's number), `reference` the path of the catalogue reference it belongs to or None, `factor` from the field's unit to SI, `only` the
    branches it applies in or None for all.
    """

    __slots__ = ("index", "path", "kind", "axis", "pointer", "unit", "factor", "field", "reference", "only")

    def __init__(self, index, path, axis, pointer, field, reference, only, units):
        self.index, self.path, self.axis, self.pointer, self.field, self.reference = index, path, axis, pointer, field, reference
        self.only = only
        self.kind, self.unit = field["kind"], field.get("unit")
        self.factor = units[self.unit]["factor"] if self.kind == "number" else 1


class Check:
    """Slots of one check in declaration order, and the tree of nodes (field, slot or children) that the validator walks."""

    def __init__(self, bundle, name):
        self.name, self.declared = name, bundle["checks"][name]
        self.branch = self.declared["branch"]
        self._bundle, self.slots = bundle, []
        self.tree = self._walk(self.declared["inputs"], "", "", None, None, None)

    def _walk(self, fields, prefix, pointer, axis, reference, only):
        return [self._node(field, prefix, f"{pointer}/{field['key']}", axis, reference, field.get("only", only)) for field in fields]

    def _node(self, field, prefix, pointer, axis, reference, only):
        path, kind = prefix + field["name"], field["kind"]
        if kind == "group":
            return field, None, self._walk(field["fields"], path + ".", pointer, axis, reference, only)
        if kind == "list":
            return field, None, self._walk(field["fields"], field["item"] + ".", pointer + "/*", field["item"], reference, only)
        if kind == "reference":
            return field, path, self._walk(self._bundle["kinds"][field["of"]]["fields"], path + ".", pointer, axis, path, only)
        slot = Slot(len(self.slots), path, axis, pointer, field, reference, only, self._bundle["units"])
        self.slots.append(slot)
        return field, slot, None

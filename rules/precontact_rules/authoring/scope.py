"""The names that a check's formulas can see: inputs, columns of axes, constants, tables, formulas."""
from .expression import ExpressionFault, parse
from .infer import Type
from .reader import Map
from .units import PURE, dimension

_FORMULA_KEYS = ("unit", "is", "meaning", "source", "show", "names", "absent_because")


class Scope:
    """Everything nameable in one check. `inputs` path -> Type, `references` path -> kind, `formulas` name -> (mapping, tree)."""

    def __init__(self, source, name, declared_fields, axes, constants, kinds):
        self.source, self.name, self.kinds = source, name, kinds
        self.axes = {axis["name"]: axis for axis in axes}
        self.constants, self.inputs, self.references, self.texts, self.curves = constants, {}, {}, set(), {}
        self.groups, self.formulas, self.used = {}, {}, set()
        self._declare(declared_fields, "", None)
        for axis in axes:
            if axis["from"] == "entries":
                self._declare(kinds[axis["of"]]["fields"], axis["name"] + ".", axis["name"], entries=True)
            elif axis["from"] == "table":
                table = source.tables[axis["table"]]
                for column, content in table["columns"].items():
                    self.inputs[f"{axis['name']}.{column}"] = Type("number", dimension(content["unit"]), frozenset([axis["name"]]))

    def _declare(self, fields, prefix, axis, entries=False):
        for field in fields:
            path, kind = prefix + field["name"], field["kind"]
            axes = frozenset([axis] if axis else [])
            absent = entries or not (field["required"] and "only" not in field) and "assume" not in field
            if kind == "group":
                self.groups[path] = [path + "." + inner["name"] for inner in field["fields"]]
                self._declare(field["fields"], path + ".", axis)
            elif kind == "list":
                self._declare(field["fields"], field["item"] + ".", field["item"])
            elif kind == "reference":
                self.references[path] = field["of"]
                self._declare(self.kinds.get(field["of"], {"fields": []})["fields"], path + ".", axis, entries=True)
            elif kind == "number":
                sampled = frozenset(["samples"]) if field.get("uncertain") and not (entries and axis in self.axes and self.axes[axis]["from"] == "entries") else frozenset()
                self.inputs[path] = Type("number", dimension(field["unit"]), axes | sampled, absent)
            elif kind == "choice":
                self.inputs[path] = Type("choice", PURE, axes, absent, tuple(c["key"] for c in field["choices"]))
            elif kind == "switch":
                self.inputs[path] = Type("boolean", PURE, axes, absent)
            elif kind == "curve":
                self.curves[path] = field
            else:
                self.texts.add(path)

    def add_formulas(self, mapping, prefix=""):
        """Parse a mapping of formulas; kind formulas get the binding's prefix."""
        for name, content in mapping.items():
            full = prefix + name
            if not isinstance(content, Map):
                self.source.fault(mapping.file, mapping.at(name), f"the formula {name!r} is not a mapping", "{unit, is, meaning, source}")
                continue
            if full in self.formulas or full in self.inputs or full in self.constants:
                self.source.fault(mapping.file, mapping.at(name), f"the name {full!r} a second time", "a name of its own")
                continue
            self.source.keys(content, _FORMULA_KEYS, ("is", "source"))
            tree = self.parsed(content, "is")
            self.formulas[full] = (content, self.prefixed(tree, prefix) if prefix else tree)

    def prefixed(self, tree, prefix):
        """A kind formula's tree with its bare names put under the binding."""
        if not isinstance(tree, list):
            return tree
        if tree[0] == "name":
            return tree if tree[1].startswith("limits.") else ["name", prefix + tree[1]]
        if tree[0] == "lookup":
            name = tree[1] if tree[1].split(".")[0] in self.source.tables else prefix + tree[1]
            return ["lookup", name, self.prefixed(tree[2], prefix)]
        return [tree[0], *(self.prefixed(part, prefix) if isinstance(part, list) and part and isinstance(part[0], str) else part for part in tree[1:])]

    def parsed(self, mapping, key):
        """The tree of an expression in a mapping; after a fault, absent."""
        try:
            return parse(mapping.get(key, "absent"))
        except ExpressionFault as fault:
            self.source.fault(mapping.file, mapping.at(key), f"{fault.found} (column {fault.column + 1} of the expression)", fault.expected)
            return ["absent"]

"""From a request body to slots: every problem found at once, in the order of the declaration.

The validator is compiled once per check from the bundle's own declaration, the same that the OpenAPI schema, the handheld's form and the
reference tables are made from.
"""
from .declaration import Check
from .intake import Intake, Members, unknown
from .numbers import entry_number
from .problems import InputProblems, Problem, shown
from .readers import columns, reader

NO_TITLE = {"en": "the instrument described", "es": "el instrumento descrito"}
_LISTED = 12      # so many allowed keys are written out in a message


def compile_intake(bundle, name):
    """Return intake(body) -> Intake for one check. The function raises InputProblems listing every fault."""
    check = Check(bundle, name)
    steps = [_compiled(node, bundle) for node in check.tree]
    members = Members(steps)
    branch_field = next(field for field, _, _ in check.tree if field["name"] == check.branch)
    branches = frozenset(choice["key"] for choice in branch_field["choices"])
    expected = ", ".join(step.key for step in steps)

    def intake(body):
        run = Intake()
        if type(body) is not dict:
            raise InputProblems([Problem("", "wrong-type", f"{shown(body)} is not a JSON object; the members are {expected}")])
        branch = body.get(branch_field["key"])
        run.branch = branch if type(branch) is str and branch in branches else None
        members.take(body, run, "")
        if run.problems:
            raise InputProblems(run.problems)
        run.states = tuple(run.states)
        return run

    return intake


def _compiled(node, bundle):
    field, slot, children = node
    if field["kind"] == "group":
        return _Group(field, [_compiled(child, bundle) for child in children])
    if field["kind"] == "list":
        return _List(field, children, bundle)
    if field["kind"] == "reference":
        return _Reference(field, slot, children, bundle)
    return _Leaf(field, slot)


def _applies(field, run, given, pointer):
    """Whether the field belongs to the chosen branch; a value given elsewhere is a problem."""
    only = field.get("only")
    if only is None or run.branch is None or run.branch in only:
        return True
    if given:
        run.problems.append(Problem(pointer, "not-applicable", f"does not apply to {run.branch}; it belongs to {', '.join(only)}"))
    return False


def _required(field, run, pointer):
    if field.get("required") and (run.branch is not None or "only" not in field):
        run.problems.append(Problem(pointer, "missing", f"nothing is given; needed: {_asked(field)}"))


def _offered(field, run, x, pointer):
    """What is given to a field that may be required: x, or None where it is absent or does not apply."""
    if not _applies(field, run, x is not None, pointer):
        return None
    if x is None:
        _required(field, run, pointer)
    return x


def _asked(field):
    meaning = field["meaning"]["en"]
    return f"{meaning}, in {field['unit'].replace('_', ' ')}" if field["kind"] == "number" else meaning


class _Leaf:
    """A number, choice, switch, text or curve outside any list."""

    kept = None

    def __init__(self, field, slot):
        self.key, self.field, self.slot = field["key"], field, slot
        self._read = reader(field, slot)
        self._absent = None if field["kind"] in ("choice", "switch") else "a"
        assume = field.get("assume")
        self._assumed = None if assume is None else assume["value"] * slot.factor if field["kind"] == "number" else assume["value"]
        self._plain = "only" not in field      # applies in every branch

    def take(self, x, run, pointer, entry=None):
        """Append this slot's state and value; `entry` is the catalogue's (value, record) where a reference supplies one."""
        if not self._plain and not _applies(self.field, run, x is not None, f"{pointer}/{self.key}"):
            value = None
        elif x is not None:
            value = self._read(x, run, f"{pointer}/{self.key}")
        elif entry is not None:
            value, record = entry
            if record is not None:
                run.origins[self.slot.index] = record
        elif self._assumed is not None:
            value = self._assumed
            run.assumed.append(self.slot.index)
        else:
            value = None
            if self.field.get("required"):
                _required(self.field, run, f"{pointer}/{self.key}")
        run.values.append(value)
        if value is None:
            run.states.append(self._absent)
        elif self._absent is None:
            run.states.append(value)
        else:
            run.states.append("u" if type(value) is tuple and self.field["kind"] == "number" else "x")


class _Group:
    """A named object of fields."""

    def __init__(self, field, steps):
        self.kept, self.by_id = {}, False
        self.key, self.field, self.members = field["key"], field, Members(steps)

    def take(self, x, run, pointer):
        pointer = f"{pointer}/{self.key}"
        applies, before, missing = _applies(self.field, run, x is not None, pointer), len(run.problems), x is None
        if missing or not applies:
            x = {}
        elif type(x) is not dict:
            run.problems.append(Problem(pointer, "wrong-type", f"{shown(x)} is not an object; its members are {', '.join(sorted(self.members.keys))}"))
            x = {}
        self.members.take(x, run, pointer)
        if missing and applies and len(run.problems) == before:      # its fields have not said so already
            _required(self.field, run, pointer)


class _Catalogue:
    """The entries of a kind, ready to be taken field by field."""

    def __init__(self, field, bundle):
        self.kind = field["of"]
        self.folder = bundle["kinds"][self.kind]["folder"]
        self.described = bundle["kinds"][self.kind].get("described", NO_TITLE)
        self.fields = bundle["kinds"][self.kind]["fields"]
        self.keys = frozenset(f["key"] for f in self.fields) | {"id"}
        self.titles = {id_: entry["title"] for id_, entry in bundle["entries"].get(self.kind, {}).items()}
        self.values = {id_: {f["name"]: _entry_value(f, entry["fields"][f["name"]]) for f in self.fields if f["name"] in entry["fields"]}
                       for id_, entry in bundle["entries"].get(self.kind, {}).items()}

    def resolve(self, x, run, pointer):
        """(overrides by key, entry values by name, title) of a reference; an empty pair after a problem."""
        if type(x) is str:
            if x in self.values:
                return {}, self.values[x], self.titles[x]
            run.problems.append(self._unknown_id(x, pointer))
        elif type(x) is not dict:
            run.problems.append(Problem(pointer, "wrong-type", f"{shown(x)} is neither an id nor an object; give an id of the {self.kind} catalogue, its data, or an id with overrides"))
        else:
            if not x.keys() <= self.keys:
                unknown(x, self.keys, run.problems, pointer)
            named = x.get("id")
            if named is None:
                return x, {}, self.described
            if type(named) is str and named in self.values:
                return x, self.values[named], self.titles[named]
            run.problems.append(self._unknown_id(named, pointer + "/id"))
        return None, {}, self.described

    def _unknown_id(self, x, pointer):
        ids = sorted(self.values)
        listed = f"known: {', '.join(ids)}" if len(ids) <= _LISTED else f"{len(ids)} are listed under /v1/catalogues/{self.folder}"
        return Problem(pointer, "unknown-id", f"{shown(x)} is not in the {self.kind} catalogue; {listed}")


def _entry_value(field, stored):
    """(value as the intake holds it, record with source and standing or None)."""
    if field["kind"] == "number":
        return entry_number(stored), stored
    if field["kind"] == "curve":
        return columns(stored["points"]), stored
    return stored, None


class _Reference:
    """A catalogue reference outside any list."""

    def __init__(self, field, path, children, bundle):
        self.kept, self.by_id = {}, True
        self.key, self.field, self.path = field["key"], field, path
        self.catalogue = _Catalogue(field, bundle)
        self.steps = [_Leaf(f, slot) for f, slot, _ in children]

    def take(self, x, run, pointer):
        pointer = f"{pointer}/{self.key}"
        x = _offered(self.field, run, x, pointer)
        overrides, entry = None, {}
        if x is not None:
            overrides, entry, run.titles[self.path] = self.catalogue.resolve(x, run, pointer)
        for step in self.steps:
            if overrides is None:
                run.states.append(step._absent)
                run.values.append(None)
            else:
                step.take(overrides.get(step.key), run, pointer, entry.get(step.field["name"]))


class _List:
    """A list of objects: one axis; every field is a column."""

    def __init__(self, field, children, bundle):
        self.kept, self.by_id = {}, False
        self.key, self.field = field["key"], field
        self.columns = [_Column(f, slot) if f["kind"] != "reference" else _ReferenceColumns(f, slot, inner, bundle) for f, slot, inner in children]
        self.keys = frozenset(c.key for c in self.columns)

    def take(self, x, run, pointer):
        pointer = f"{pointer}/{self.key}"
        x = _offered(self.field, run, x, pointer)
        items = self._items(x, run, pointer)
        run.sizes[self.field["item"]] = len(items)
        for column in self.columns:
            column.take(items, run, pointer)

    def _items(self, x, run, pointer):
        if x is None:
            return []
        if type(x) is not list:
            run.problems.append(Problem(pointer, "wrong-type", f"{shown(x)} is not a list; give a list of {self.field['item']} objects"))
            return []
        least, most = self.field.get("least", 0), self.field.get("most", 16)
        if len(x) > most:
            run.problems.append(Problem(pointer, "too-many-items", f"{len(x)} items; at most {most}"))
            return []
        if len(x) < least:
            run.problems.append(Problem(pointer, "too-few-items", f"{len(x)} items; at least {least}"))
        for i, item in enumerate(x):
            if type(item) is not dict:
                run.problems.append(Problem(f"{pointer}/{i}", "wrong-type", f"{shown(item)} is not an object; its members are {', '.join(sorted(self.keys))}"))
            elif not item.keys() <= self.keys:
                unknown(item, self.keys, run.problems, f"{pointer}/{i}")
        return [item if type(item) is dict else {} for item in x]


class _Column:
    """One field of a list's items."""

    def __init__(self, field, slot):
        self.key, self.field, self.slot = field["key"], field, slot
        self._read = reader(field, slot)
        self._codes = {c["key"]: i for i, c in enumerate(field["choices"])} if field["kind"] == "choice" else None
        assume = field.get("assume")
        self._assumed = None if assume is None else assume["value"] * slot.factor if field["kind"] == "number" else assume["value"]

    def take(self, items, run, pointer):
        self.take_values([(item.get(self.key), None) for item in items], run, pointer)

    def take_values(self, pairs, run, pointer, inside=""):
        """Append the column's state and values; each pair is (given value, catalogue's (value, record) or None)."""
        values, records = [], []
        for i, (x, entry) in enumerate(pairs):
            where, record = f"{pointer}/{i}{inside}/{self.key}", None
            if not _applies(self.field, run, x is not None, where):
                value = None
            elif x is not None:
                value = self._read(x, run, where)
            elif entry is not None:
                value, record = entry
            elif self._assumed is not None:
                value = self._assumed
                run.assumed.append((self.slot.index, i))
            else:
                value = None
                _required(self.field, run, where)
            values.append(value)
            records.append(record)
        if any(records):
            run.origins[self.slot.index] = records
        self._append(values, run)

    def _append(self, values, run):
        missing = [v is None for v in values]
        if all(missing):
            run.states.append("a")
            run.values.append(None)
            return
        if self.field["kind"] == "number":
            spread = any(type(v) is tuple for v in values)
            run.states.append(("V" if spread else "N") if any(missing) else ("U" if spread else "L"))
        else:
            run.states.append("L")
        run.values.append([-1 if v is None else self._codes[v] for v in values] if self._codes else values)


class _ReferenceColumns:
    """A catalogue reference in a list: every field of its kind is a column."""

    def __init__(self, field, path, children, bundle):
        self.key, self.field, self.path = field["key"], field, path
        self.catalogue = _Catalogue(field, bundle)
        self.columns = [_Column(f, slot) for f, slot, _ in children]

    def take(self, items, run, pointer):
        resolved, titles = [], []
        for i, item in enumerate(items):
            x, where = item.get(self.key), f"{pointer}/{i}/{self.key}"
            if x is None:
                _required(self.field, run, where)
                resolved.append((None, {}))
                titles.append(None)
            else:
                overrides, entry, title = self.catalogue.resolve(x, run, where)
                resolved.append((overrides, entry))
                titles.append(title)
        if items:
            run.titles[self.path] = titles
        for column in self.columns:
            name = column.field["name"]
            pairs = [((o or {}).get(column.key), entry.get(name)) for o, entry in resolved]
            if all(o is None for o, _ in resolved):
                column._append([None] * len(pairs), run)
            else:
                column.take_values(pairs, run, pointer, "/" + self.key)

"""One check, from its file and its parts to the record in the bundle."""
from . import data, fields
from .expression import names_in
from .infer import Inference, Mismatch, resolved, shown
from .reader import Map, Seq
from .scope import Scope
from .units import dimension
from .wording import place_faults

_KEYS = ("title", "question", "branch", "use", "inputs", "axes", "constants", "formulas", "findings", "cautions", "assumptions")
_RANK = {"unacceptable": 0, "conditional": 1, "acceptable": 2, "undetermined": 3}
_SHOW = ("working", "result", "hidden")


class CheckBuilder:
    """Builds one check; faults go to the source."""

    def __init__(self, source, name, kinds, limits):
        self.source, self.name, self.mapping, self.kinds = source, name, source.checks[name], kinds
        source.keys(self.mapping, _KEYS, ("title", "question", "branch", "inputs", "formulas", "findings"))
        self.parts = [source.parts[p] for p in self.mapping.get("use", []) if self._known_part(p)]
        branch = self.mapping.get("inputs", {}).get(self.mapping.get("branch"), {})
        self.branches = list(branch.get("choices", {}))
        if not self.branches:
            source.fault(self.mapping.file, self.mapping.at("branch"), "no branch choice", "branch names an input with choices")
        self.inputs = [f for m in self._all("inputs") for f in fields.declared(source, m, self.branches)]
        self._unique([f["name"] for f in self.inputs], "input")
        self.constants = {}
        for m in self._all("constants"):
            self.constants.update(data.constants(source, m))
        self.axes = [{"name": f["item"], "from": "list", "list": f["name"]} for f in self.inputs if f["kind"] == "list"]
        self.axes += [self._axis(name, a) for m in self._all("axes") for name, a in m.items()]
        self.axes = [a for a in self.axes if a]
        self.scope = Scope(source, name, self.inputs, self.axes, {**limits, **self.constants}, kinds)
        for m in self._all("formulas"):
            self.scope.add_formulas(m)
        self._kind_formulas()
        self.inference = Inference(self.scope)

    def _known_part(self, part):
        if part not in self.source.parts:
            self.source.fault(self.mapping.file, self.mapping.at("use"), f"the part {part!r}", f"one of {', '.join(self.source.parts)}")
        return part in self.source.parts

    def _all(self, key):
        """The mappings under `key` of the check and its parts, the check's own first."""
        return [m[key] for m in (self.mapping, *self.parts) if isinstance(m.get(key), Map)]

    def _unique(self, names, what):
        for name in {n for n in names if names.count(n) > 1}:
            self.source.fault(self.mapping.file, self.mapping.line, f"the {what} {name!r} a second time", "one of each name, parts included")

    def _axis(self, name, content):
        known = {"count": ("count", "count"), "table": ("table", "table"), "entries": ("entries", "of")}
        form = next((f for f in known if f in content), None)
        if form is None:
            self.source.fault(content.file, content.line, f"the axis {name!r} has no form", "count, table or entries")
            return None
        if form == "table" and content[form] not in self.source.tables or form == "entries" and content[form] not in self.kinds:
            self.source.fault(content.file, content.line, f"the axis {name!r} runs along {content[form]!r}", "a table or a kind of this rule set")
            return None
        return {"name": name, "from": known[form][0], known[form][1]: content[form]}

    def _kind_formulas(self):
        bindings = dict(self.scope.references)
        bindings.update({a["name"]: a["of"] for a in self.axes if a["from"] == "entries"})
        for path, kind in bindings.items():
            if kind in self.source.kinds:
                self.scope.add_formulas(self.source.kinds[kind].get("formulas", Map()), path + ".")

    # ---- the record ----------------------------------------------------------------------------------------------------------------

    def build(self):
        """The CHECK record of the bundle."""
        findings = self._findings()
        cautions = [self._conditional(c, "caution") for m in self._lists("cautions") for c in m]
        assumptions = [self._conditional(a, "text") for m in self._lists("assumptions") for a in m]
        own = {n for m in self._all("formulas") for n in m}
        formulas = self._formulas(own, findings)
        self._unused(own)
        return {"title": self.source.text(self.mapping, "title"), "question": self.source.text(self.mapping, "question"),
                "branch": self.mapping.get("branch"), "inputs": self.inputs, "axes": self.axes, "constants": self.constants,
                "formulas": formulas, "findings": findings, "cautions": cautions, "assumptions": assumptions}

    def _lists(self, key):
        return [m[key] for m in (self.mapping, *self.parts) if isinstance(m.get(key), Seq)]

    def _type(self, mapping, key, tree):
        try:
            return self.inference.of(tree)
        except Mismatch as fault:
            self.source.fault(mapping.file, mapping.at(key), fault.found, fault.expected)
            return None

    def _condition(self, mapping, key="when"):
        tree = self.scope.parsed(mapping, key)
        found = self._type(mapping, key, tree)
        if found and found.kind not in ("boolean", "nothing"):
            self.source.fault(mapping.file, mapping.at(key), f"a {found.kind} as a condition", "true or false")
        if found and found.axes:
            self.source.fault(mapping.file, mapping.at(key), f"a condition that still runs along {', '.join(sorted(found.axes))}",
                              "reduce it: probability(...) over samples, any_over(axis, ...) over items")
        return resolved(tree, self.scope)

    def _conditional(self, mapping, what):
        made = {}
        if what == "caution":
            self.source.keys(mapping, ("caution", "when"), ("caution",))
            made["caution"] = mapping.get("caution")
            self._known_caution(mapping, "caution", made["caution"])
        else:
            self.source.keys(mapping, ("when", "text"), ("text",))
            made["text"] = self.source.text(mapping, "text")
        if "when" in mapping:
            made["when"] = self._condition(mapping)
        return made

    def _known_caution(self, mapping, key, caution):
        self.source.used_cautions.add(caution)
        if caution not in self.source.cautions:
            self.source.fault(mapping.file, mapping.at(key), f"the caution {caution!r}", f"a file cautions/{caution}.yaml")

    def _findings(self):
        own = list(self.mapping.get("findings", []))
        self._ordered(own)
        for part in self.parts:
            for finding in part.get("findings", []):
                rank = _RANK.get(finding.get("verdict"), 2.5)      # a part's notes go before the last finding
                place = next((i for i, f in enumerate(own) if _RANK.get(f.get("verdict"), -1) > rank), len(own) - 1)
                own.insert(place, finding)
        self._unique([f.get("code") for f in own], "finding")
        return [self._finding(f) for f in own]

    def _ordered(self, own):
        rank = 0
        for finding in own:
            verdict = finding.get("verdict")
            if verdict != "note" and verdict not in _RANK:
                self.source.fault(finding.file, finding.at("verdict"), f"the verdict {verdict!r}", f"note or one of {', '.join(_RANK)}")
            elif verdict != "note" and _RANK[verdict] < rank:
                self.source.fault(finding.file, finding.at("verdict"), f"{verdict} after a milder verdict", f"the order {', '.join(_RANK)}")
            rank = max(rank, _RANK.get(verdict, 0))
        if not own or own[-1].get("verdict") != "undetermined" or "when" in own[-1]:
            self.source.fault(self.mapping.file, self.mapping.at("findings"), "the last finding", "undetermined and without `when`")
        for finding in own[:-1]:
            if "when" not in finding:
                self.source.fault(finding.file, finding.line, f"{finding.get('code')} has no `when`", "only the last finding holds always")

    def _finding(self, mapping):
        self.source.keys(mapping, ("code", "verdict", "when", "sentence", "cautions"), ("code", "verdict", "sentence"))
        made = {"code": mapping.get("code"), "verdict": mapping.get("verdict"), "sentence": self.source.text(mapping, "sentence"),
                "cautions": list(mapping.get("cautions", []))}
        for caution in made["cautions"]:
            self._known_caution(mapping, "cautions", caution)
        if "when" in mapping:
            made["when"] = self._condition(mapping)
            made["when_text"] = " ".join(str(mapping["when"]).split())
        for language, sentence in made["sentence"].items():
            for found, expected in place_faults(sentence, self.scope, self.inference):
                self.source.fault(mapping.file, mapping.at("sentence"), f"{found} ({language})", expected)
        return made

    # ---- formulas ------------------------------------------------------------------------------------------------------------------

    def _formulas(self, own, findings):
        """Records in dependency order: the check's and its parts' formulas, and the kind formulas they reach."""
        ordered, seen = [], set()

        def visit(name, trail=()):
            if name in seen or name not in self.scope.formulas or name in trail:
                return
            for needed in names_in(self.scope.formulas[name][1]):
                visit(needed, (*trail, name))
            seen.add(name)
            ordered.append(name)

        for name in self.scope.formulas:
            if name in own or name in self.scope.used:
                visit(name)
        place = {name: i for i, name in enumerate(self.scope.formulas)}
        return [self._formula(name, place[name]) for name in ordered]

    def _formula(self, name, order):
        content, tree = self.scope.formulas[name]
        found = self.inference.formula(name)
        if name in self.inference.failed:
            fault = self.inference.failed[name]
            self.source.fault(content.file, content.at("is"), fault.found, fault.expected)
        unit = self._unit(content, found)
        plain = unit is None or "names" in content
        record = {"name": name, "key": name if plain else f"{name}_{unit}", "unit": unit, "meaning": self.source.text(content, "meaning"),
                  "text": " ".join(str(content.get("is", "")).split()), "tree": resolved(tree, self.scope), "source": self.source.source(content),
                  "show": content.get("show", "working"), "order": order, "type": "boolean" if found.kind == "boolean" else "complex" if found.kind == "complex" else "number"}
        if record["show"] not in _SHOW:
            self.source.fault(content.file, content.at("show"), f"show: {record['show']!r}", f"one of {', '.join(_SHOW)}")
        if "names" in content:
            record["names"] = content["names"]
            if content["names"] not in self.scope.axes:
                self.source.fault(content.file, content.at("names"), f"names the axis {content['names']!r}", f"one of {', '.join(self.scope.axes)}")
        if "absent_because" in content:
            record["absent_because"] = self.source.text(content, "absent_because")
        return record

    def _unit(self, content, found):
        unit = content.get("unit")
        if found.kind == "boolean":
            if unit is not None:
                self.source.fault(content.file, content.at("unit"), f"unit {unit} on a condition", "no unit")
            return None
        dim = dimension(unit) if isinstance(unit, str) else None
        if dim is None:
            self.source.fault(content.file, content.at("unit"), f"the unit {unit!r}", "a unit of the closed list")
            return "ratio"
        if found.dimension is not None and dim != found.dimension:
            self.source.fault(content.file, content.at("is"), f"the expression is {shown(found.dimension)}", f"{unit}, {shown(dim)}")
        return unit

    def _unused(self, own):
        used = self.scope.used
        for name in own:
            content, _ = self.scope.formulas.get(name, (None, None))
            if content is not None and name not in used and content.get("show", "working") == "hidden":
                self.source.fault(content.file, content.line, f"{name} is hidden and nothing uses it", "show it, use it, or drop it")
        for m in self._all("constants"):
            for name in m:
                if name not in used:
                    self.source.fault(m.file, m.at(name), f"the constant {name} is not used", "drop it")
        for m in self._all("inputs"):
            for name in m:
                if name in self.scope.inputs and name not in used:
                    self.source.fault(m.file, m.at(name), f"the input {name} is not used", "use it or drop it")

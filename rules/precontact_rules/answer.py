"""From the engine's numbers to the answer a person reads and a machine stores."""
from .layout import Layout
from .phrase import Template, quantity_writer
from .reported import Reader

# A note never decides; a mild finding is reported only where it decides.
_NOTE, _SEVERE, _MILD = "note", "severe", "mild"
_KIND = {"note": _NOTE, "unacceptable": _SEVERE, "conditional": _SEVERE, "acceptable": _MILD, "undetermined": _MILD}
_KEPT = 1024
_WORDS = ("danger", "warning", "caution", "notice")     # ANSI Z535.4: most severe first


class AnswerWriter:
    """Writes the answers of one check of one rule set."""

    def __init__(self, rule_set, model):
        bundle = rule_set.data
        self.model, self.units, self.texts = model, bundle["units"], bundle["texts"]
        self._identity = {"version": rule_set.version, "digest": rule_set.digest}
        self._cautions = bundle["cautions"]
        self._kinds = [_KIND[f["verdict"]] for f in model.findings]
        self._listed = {}       # cautions and assumptions already written out, by what they are made of
        self._quantities, self.templates = {}, {}
        for number, finding in enumerate(model.findings):
            for language, text in finding["sentence"].items():
                self.templates[number, language] = Template(text)

    def write(self, intake, plan, results, intervals, beyond, input_digest, language):
        """The answer document. Its parts may be shared with other answers: to be read, not changed."""
        reader = Reader(self, intake, plan, results, intervals, language)
        decided, holding = self._decide(plan.live, results)
        verdict = self.model.findings[decided]["verdict"]
        layout = self._layout(plan, language)
        findings = [layout.finding(number)(results, reader) for number in holding]
        weak = self._weak(plan, intake, decided) if verdict == "acceptable" else []
        if weak:
            verdict = "conditional"
            findings.insert(0, self._engine_finding("rests-on-unverified-numbers", verdict, reader, [w["name"] for w in weak]))
        if beyond:
            verdict = "undetermined"
            paths = [self.model.slots[index].path for index in beyond]
            findings.insert(0, self._engine_finding("spread-leaves-range", verdict, reader, paths))
        return {
            "check": self.model.name,
            "rule_set": self._identity,
            "input_digest": input_digest,
            "verdict": verdict,
            "findings": findings,
            "results": layout.results(results, reader),
            "working": layout.working(results, reader),
            "assumptions": self._assumptions(plan, results, intake, language),
            "cautions": self._caution_list(plan, results, holding, language),
            "unverified": weak,
        }

    # ---- findings ------------------------------------------------------------------------------------------------------------------

    def _decide(self, live, results):
        """(number of the deciding finding, numbers of all reported findings, that one first)."""
        decided, holding = None, []
        for number, place in live:
            if place is True or results[place]:
                kind = self._kinds[number]
                if kind is not _NOTE and decided is None:
                    decided = number
                elif kind is not _MILD:
                    holding.append(number)
        return decided, [decided, *holding]

    def _engine_finding(self, code, verdict, reader, names):
        text = self.texts[code][reader.language]
        return {"code": code, "verdict": verdict, "sentence": text.replace("{names}", ", ".join(names))}

    def _weak(self, plan, intake, decided):
        """Unverified numbers on which an acceptable verdict rests, by name, with source and standing."""
        fixed, slots = plan.basis(decided)
        found = dict(fixed)
        origins, assumed = intake.origins, {place[0] if type(place) is tuple else place for place in intake.assumed}
        for index in slots:
            origin = origins.get(index)
            if origin is not None:
                for record in origin if type(origin) is list else (origin,):
                    if record is not None and self.model.is_weak(record):
                        found.setdefault(self.model.slots[index].path, record)
            elif index in assumed:
                record = self.model.slots[index].field["assume"]
                if self.model.is_weak(record):
                    found.setdefault(self.model.slots[index].path, record)
        return [{"name": name, "source": record["source"], "standing": record["standing"]} for name, record in found.items()]

    # ---- numbers -------------------------------------------------------------------------------------------------------------------

    def _layout(self, plan, language):
        layout = plan.layouts.get(language)
        if layout is None:
            layout = plan.layouts[language] = Layout(self, plan, language)
        return layout

    def quantity(self, unit, language):
        """The writer of numbers in one unit and language."""
        write = self._quantities.get((unit, language))
        if write is None:
            write = self._quantities[unit, language] = quantity_writer(self.units.get(unit), language)
        return write

    # ---- what was assumed, what to mind ------------------------------------------------------------------------------------------------

    def _assumptions(self, plan, results, intake, language):
        held = tuple([n for n, holds in enumerate(plan.assumptions) if holds is True or (holds is not False and results[holds])])
        key = ("assumptions", language, tuple(intake.assumed), held)
        if key not in self._listed:
            texts = self.model.declared.get("assumptions", ())
            self._keep(key, [self._assumed(place, language) for place in intake.assumed] + [{"because": texts[n]["text"][language]} for n in held])
        return self._listed[key]

    def _assumed(self, place, language):
        index, item = place if isinstance(place, tuple) else (place, None)
        slot = self.model.slots[index]
        assume = slot.field["assume"]
        pointer = slot.pointer if item is None else slot.pointer.replace("*", str(item), 1)
        return {"input": pointer, "value": assume["value"], "unit": slot.field.get("unit"), "because": assume["because"][language]}

    def _caution_list(self, plan, results, holding, language):
        held = tuple([n for n, holds in enumerate(plan.cautions) if holds is True or (holds is not False and results[holds])])
        key = ("cautions", language, tuple(holding), held)
        if key not in self._listed:
            standing = self.model.declared.get("cautions", ())
            ids = [i for number in holding for i in self.model.findings[number].get("cautions", ())] + [standing[n]["caution"] for n in held]
            ordered = sorted(dict.fromkeys(ids), key=lambda i: _WORDS.index(self._cautions[i]["word"]))
            self._keep(key, [{"id": i, "word": self._cautions[i]["word"], "text": self._cautions[i]["text"][language]} for i in ordered])
        return self._listed[key]

    def _keep(self, key, made):
        if len(self._listed) >= _KEPT:
            self._listed.clear()
        self._listed[key] = made

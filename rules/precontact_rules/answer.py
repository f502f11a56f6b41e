"""From the engine's numbers to the answer a person reads and a machine stores."""
from .layout import Layout
from .phrase import compile_template
from .reported import Reader

_SEVERE = ("unacceptable", "conditional")
_WORDS = ("danger", "warning", "caution", "notice")     # ANSI Z535.4: most severe first


class AnswerWriter:
    """Writes the answers of one check of one rule set."""

    def __init__(self, rule_set, model):
        bundle = rule_set.data
        self.model, self.units, self.texts = model, bundle["units"], bundle["texts"]
        self._identity = {"version": rule_set.version, "digest": rule_set.digest}
        self._cautions = bundle["cautions"]
        self._templates = {}
        for number, finding in enumerate(model.findings):
            for language, text in finding["sentence"].items():
                self._templates[number, language] = compile_template(text)

    def write(self, intake, plan, results, intervals, beyond, input_digest, language):
        """The answer document, a fresh dict."""
        reader = Reader(self, intake, plan, results, intervals, language)
        decided, holding = self._decide(plan.conditions, results)
        verdict = self.model.findings[decided]["verdict"]
        findings = [self._finding(number, reader, language) for number in holding]
        weak = self._weak(plan, intake, decided) if verdict == "acceptable" else []
        if weak:
            verdict = "conditional"
            findings.insert(0, self._engine_finding("rests-on-unverified-numbers", verdict, reader, [w["name"] for w in weak]))
        if beyond:
            verdict = "undetermined"
            paths = [self.model.slots[index].path for index in beyond]
            findings.insert(0, self._engine_finding("spread-leaves-range", verdict, reader, paths))
        layout = self._layout(plan, language)
        return {
            "check": self.model.name,
            "rule_set": self._identity,
            "input_digest": input_digest,
            "verdict": verdict,
            "findings": findings,
            "results": self._reported(layout, reader),
            "working": self._worked(layout, reader),
            "assumptions": self._assumptions(plan, results, intake, language),
            "cautions": self._caution_list(plan, results, holding, language),
            "unverified": weak,
        }

    # ---- findings ------------------------------------------------------------------------------------------------------------------

    def _decide(self, conditions, results):
        """(number of the deciding finding, numbers of all reported findings, that one first)."""
        decided, holding = None, []
        for number, finding in enumerate(self.model.findings):
            holds = conditions[number]
            if holds is False or (holds is not True and not results[holds]):
                continue
            note = finding["verdict"] == "note"
            if decided is None and not note:
                decided = number
            elif not note and finding["verdict"] not in _SEVERE:
                continue
            holding.append(number)
        return decided, [decided, *(number for number in holding if number != decided)]

    def _finding(self, number, reader, language):
        finding = self.model.findings[number]
        return {"code": finding["code"], "verdict": finding["verdict"], "sentence": reader.sentence(self._templates[number, language])}

    def _engine_finding(self, code, verdict, reader, names):
        text = self.texts[code][reader.language]
        return {"code": code, "verdict": verdict, "sentence": text.replace("{names}", ", ".join(names))}

    def _weak(self, plan, intake, decided):
        """Unverified numbers on which an acceptable verdict rests, by name, with source and standing."""
        found = {}
        for leaf in plan.leaves(decided):
            for name, origin in self._origins(leaf, intake):
                if origin and self.model.is_weak(origin):
                    found.setdefault(name, {"name": name, "source": origin["source"], "standing": origin["standing"]})
        return list(found.values())

    def _origins(self, leaf, intake):
        model, bundle = self.model, self.model.bundle
        if leaf[0] == "constant":
            return [(leaf[1], model.constant(leaf[1]))]
        if leaf[0] == "lookup" and leaf[1] == "table":
            return [(leaf[2], bundle["tables"][leaf[2]])]
        if leaf[0] == "column":
            return model.column_origins(leaf[1], leaf[2])
        index = leaf[-1]
        slot = model.slots[index]
        origin = intake.origins.get(index)
        origins = origin if isinstance(origin, list) else [origin]
        if any(i == index or (isinstance(i, tuple) and i[0] == index) for i in intake.assumed):
            origins = origins + [slot.field["assume"]]
        return [(slot.path, o) for o in origins]

    # ---- numbers -------------------------------------------------------------------------------------------------------------------

    def _layout(self, plan, language):
        layout = plan.layouts.get(language)
        if layout is None:
            layout = plan.layouts[language] = Layout(self.model, plan, self.texts, language)
        return layout

    @staticmethod
    def _reported(layout, reader):
        return {key: reader.result(output) if fixed is None else fixed for key, output, fixed in layout.results}

    @staticmethod
    def _worked(layout, reader):
        return [{"name": name, "value": reader.plain(output), "unit": unit, "formula": text, "source": source}
                for name, unit, text, source, output in layout.working]

    # ---- what was assumed, what to mind ------------------------------------------------------------------------------------------------

    def _assumptions(self, plan, results, intake, language):
        listed = []
        for place in intake.assumed:
            index, item = place if isinstance(place, tuple) else (place, None)
            slot = self.model.slots[index]
            assume = slot.field["assume"]
            pointer = slot.pointer if item is None else slot.pointer.replace("*", str(item), 1)
            listed.append({"input": pointer, "value": assume["value"], "unit": slot.field.get("unit"), "because": assume["because"][language]})
        for holds, assumption in zip(plan.assumptions, self.model.declared.get("assumptions", ())):
            if holds is True or (holds is not False and results[holds]):
                listed.append({"because": assumption["text"][language]})
        return listed

    def _caution_list(self, plan, results, holding, language):
        ids = []
        for number in holding:
            ids.extend(self.model.findings[number].get("cautions", ()))
        for holds, caution in zip(plan.cautions, self.model.declared.get("cautions", ())):
            if holds is True or (holds is not False and results[holds]):
                ids.append(caution["caution"])
        ordered = sorted(dict.fromkeys(ids), key=lambda i: _WORDS.index(self._cautions[i]["word"]))
        return [{"id": i, "word": self._cautions[i]["word"], "text": self._cautions[i]["text"][language]} for i in ordered]

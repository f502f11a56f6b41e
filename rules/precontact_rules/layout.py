"""What of an answer is the same for every request of one signature and language, prepared once."""
import math

from .phrase import capitalised, joined


def no_value(formula, texts, language):
    """Why a formula that could have a number has none."""
    return formula["absent_because"][language] if "absent_because" in formula else texts["no-value"][language]


class Layout:
    """Per plan and language: which results and steps of working are reported, and everything about them that no number changes."""

    def __init__(self, writer, plan, language):
        self.model, self.texts, self.language = writer.model, writer.texts, language
        self._writer, self._plan, self._findings = writer, plan, {}
        model = self.model
        ordered = sorted(model.formulas, key=lambda f: f["order"])
        applicable = model.applicable(plan.states)
        results, working = [], []
        self._names = {"least": -math.inf, "most": math.inf, "joined": joined, "capitalised": capitalised}
        for formula in ordered:
            output = plan.outputs[formula["name"]]
            if formula["show"] == "result":
                keep, fixed = self._fixed(output, applicable)
                if keep:
                    results.append(f"{formula['key']!r}: {self._result(output, fixed)}")
            if formula["show"] != "hidden" and output.absent is None:
                step = {"name": formula["name"], "value": None, "unit": formula["unit"], "formula": formula["text"], "source": formula["source"]}
                if output.place is None:      # the signature settles it: one step for all answers
                    working.append(self._named({**step, "value": None if output.hidden else output.fixed}))
                else:
                    working.append(repr(step).replace("'value': None", f"'value': {self._plain(output)}", 1))
        self.results = self._function(f"{{{', '.join(results)}}}")
        self.working = self._function(f"[{', '.join(working)}]")

    def finding(self, number):
        """reported(results, reader) of a finding: its code, verdict and sentence."""
        made = self._findings.get(number)
        if made is None:
            finding = self.model.findings[number]
            sentence = self._sentence(self._writer.templates[number, self.language].parts)
            made = self._findings[number] = self._function(f"{{'code': {finding['code']!r}, 'verdict': {finding['verdict']!r}, 'sentence': {sentence}}}")
        return made

    def _sentence(self, parts):
        pieces = [repr(content) if kind == "words" else self._words(content) if kind == "name" else f"joined(reader.listed{content!r}, {self.language!r})"
                  for kind, content in parts if content]
        if parts[0][1]:
            pieces[0] = repr(capitalised(parts[0][1]))
            return " + ".join(pieces)
        return f"capitalised({' + '.join(pieces)})"

    def _words(self, name):
        """What stands for {name}: a plain number is written straight away, the rest asks the reader."""
        output = self._plan.outputs.get(name)
        if output is None or output.place is None or output.axes or output.names or output.imaginary is not None or output.formula["type"] == "boolean":
            return f"reader.words({name!r})"
        return f"{self._named(self._writer.quantity(output.formula['unit'], self.language))}(r[{output.place}])"

    # A listing is one expression over the tuple of results; only what has an interval, an axis or a name asks the reader.

    def _function(self, expression):
        space = dict(self._names)
        exec(compile(f"def listed(r, reader):\n    return {expression}", "<layout>", "exec"), space)
        return space["listed"]

    def _named(self, value):
        name = f"c{len(self._names)}"
        self._names[name] = value
        return name

    def _result(self, output, fixed):
        if fixed is not None:
            return self._named(fixed)
        if output.samples is not None or output.axes or output.names or output.imaginary is not None:
            return f"reader.result({self._named(output)})"
        place = f"r[{output.place}]"
        if output.formula["type"] == "boolean":
            return f"{{'value': {place}}}"
        nothing = self._named({"value": None, "reason": no_value(output.formula, self.texts, self.language)})
        return f"({{'value': value}} if least < (value := {self._scaled(place, output)}) < most else {nothing})"

    def _plain(self, output):
        if output.axes:
            return f"reader.plain({self._named(output)})"
        if output.imaginary is not None:
            return f"{{'re': {self._bare(output.place, output)}, 'im': {self._bare(output.imaginary, output)}}}"
        return f"r[{output.place}]" if output.formula["type"] == "boolean" else self._bare(output.place, output)

    def _bare(self, place, output):
        return f"(value if least < (value := {self._scaled(f'r[{place}]', output)}) < most else None)"

    @staticmethod
    def _scaled(place, output):
        return f"{place} + 0.0" if output.factor == 1 else f"{place} / {output.factor!r} + 0.0"      # + 0.0 turns a negative zero into zero

    def _fixed(self, output, applicable):
        """(whether the result belongs to this branch, its finished form or None)."""
        if output.absent is None:
            return True, None if output.place is not None else {"value": output.fixed}
        if any(path not in applicable for path in output.absent.needs) or self._elsewhere(output.formula["name"], applicable):
            return False, None
        because = output.formula.get("absent_because")
        if because is not None:
            return True, {"value": None, "reason": because[self.language]}
        keys = [self.model.slots[self.model.slot_index[path]].pointer.replace("/*", "") for path in output.absent.needs]
        return bool(keys), {"value": None, "reason": self.texts["needs-input"][self.language].replace("{names}", ", ".join(keys))}

    def _elsewhere(self, name, applicable):
        """Whether every branch-bound input that the formula mentions belongs to other branches."""
        bound = [path for path in self.model.inputs_of(name) if self.model.slots[self.model.slot_index[path]].only is not None]
        return bool(bound) and not any(path in applicable for path in bound)

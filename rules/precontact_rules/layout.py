"""What of an answer is the same for every request of one signature and language, prepared once."""


class Layout:
    """Per plan and language: which results and steps of working are reported, and everything about them that no number changes."""

    def __init__(self, model, plan, texts, language):
        self.model, self.texts, self.language = model, texts, language
        ordered = sorted(model.formulas, key=lambda f: f["order"])
        applicable = model.applicable(plan.states)
        self.results = []           # (key, output, finished result or None where the numbers decide)
        for formula in ordered:
            if formula["show"] == "result":
                output = plan.outputs[formula["name"]]
                keep, fixed = self._fixed(output, applicable)
                if keep:
                    self.results.append((formula["key"], output, fixed))
        self.working = [(formula["name"], formula["unit"], formula["text"], formula["source"], plan.outputs[formula["name"]])
                        for formula in ordered if formula["show"] != "hidden" and plan.outputs[formula["name"]].absent is None]

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

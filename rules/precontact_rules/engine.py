"""A rule set that answers: bundle in, request in, answer out."""
import hashlib
import json

import numpy as np

from .answer import AnswerWriter
from .canonical import digest
from .model import CheckModel
from .plan import Plan
from .points import POINTS, SCORE_LIMIT, PointSet
from .problems import InputProblems, Problem
from .validate import compile_intake

LANGUAGE = 1               # the rule-language version this engine speaks
PLANS_KEPT = 512           # compiled signatures kept per check; the oldest goes first
_EDGE = 1.0 - 1.0 / POINTS  # the outermost sample of a rectangular input, as a share of its half-width
_NO_SAMPLES = ()


class UnknownLanguage(ValueError):
    """The bundle was written for another version of the rule language."""


class Question:
    """One check of one rule set: validates, samples, runs, and hands the numbers to the answer writer."""

    def __init__(self, rule_set, name):
        bundle = rule_set.data
        self.model = CheckModel(bundle, name)
        self.intake = compile_intake(bundle, name)
        self.writer = AnswerWriter(rule_set, self.model)
        self._points = rule_set.points
        self._plans = {}
        self._ranges = [self._range(slot, bundle["units"]) for slot in self.model.slots]

    @staticmethod
    def _range(slot, units):
        """Bounds in SI: (least allowed, most allowed, lower bound excluded, upper bound excluded)."""
        field = slot.field
        if slot.kind != "number":
            return None
        factor = units[field["unit"]]["factor"]
        low, high = field.get("least", field.get("above")), field.get("most", field.get("below"))
        return (-np.inf if low is None else low * factor, np.inf if high is None else high * factor, "above" in field, "below" in field)

    def plan(self, intake):
        """The compiled plan for this request's signature."""
        filled = tuple([axis for axis, size in intake.sizes.items() if size])
        key = (intake.states, filled)
        plan = self._plans.get(key)
        if plan is None:
            if len(self._plans) >= PLANS_KEPT:
                del self._plans[next(iter(self._plans))]
            plan = self._plans[key] = Plan(self.model, intake.states, frozenset(filled))
        return plan

    def compute(self, intake):
        """Return (plan, results, intervals by place, slots whose spread leaves the allowed range)."""
        plan = self.plan(intake)
        if plan.exact:
            return plan, plan.run(intake.values, _NO_SAMPLES, _NO_SAMPLES, None, intake.sizes), None, _NO_SAMPLES
        if not plan.sampled and not plan.uniform_count:      # arrays of the bundle alone
            with np.errstate(all="ignore"):
                return plan, plan.run(intake.values, _NO_SAMPLES, _NO_SAMPLES, None, intake.sizes), None, _NO_SAMPLES
        self._require_dimensions(intake, plan)
        with np.errstate(all="ignore"):
            values, sampled, forms, beyond = self._sample(intake, plan)
            uniforms = [self._points.uniform(len(forms) + k) for k in range(plan.uniform_count)]
            drawn = self._points.drawn("".join(forms) + "r" * plan.uniform_count)
            results = plan.run(values, sampled, uniforms, drawn, intake.sizes)
            return plan, results, plan.intervals(results, drawn), beyond

    def answer(self, body, language, digest_of=digest):
        """The answer to a request body, as JSON-ready data. Raises InputProblems.

        A caller with a quicker encoder at hand may bring its own `digest_of`, which must give what canonical.digest gives.
        """
        intake = self.intake(body)
        plan, results, intervals, beyond = self.compute(intake)
        return self.writer.write(intake, plan, results, intervals, beyond, digest_of(body), language)

    def _require_dimensions(self, intake, plan):
        """Raise InputProblems naming the first uncertain number for which the point set has no dimension left."""
        left = self._points.dimensions - plan.uniform_count
        spreads = [(index, item) for index in plan.sampled for item, value in _items(intake.values[index]) if type(value) is tuple]
        if len(spreads) > left:
            index, item = spreads[left]
            pointer = self.model.slots[index].pointer.replace("*", str(item), 1)
            raise InputProblems([Problem(pointer, "too-many-uncertain", f"{len(spreads)} numbers are given with a spread; "
                                         f"at most {left} can be weighed together here: give some of them alone")])

    # ---- samples -------------------------------------------------------------------------------------------------------------------

    def _sample(self, intake, plan):
        """Best estimates, sampled arrays, forms of the dimensions used, slots beyond their range; dimensions are handed out in slot order, then in item order."""
        values, sampled, forms, beyond = list(intake.values), [None] * len(intake.values), [], []
        for index in plan.sampled:
            if type(values[index]) is list:
                self._sample_list(index, values, sampled, forms, beyond)
                continue
            spread = values[index]
            sampled[index] = self._spread(spread, len(forms))
            values[index] = spread[1]
            forms.append(spread[0])
            if self._leaves_range(spread, index):
                beyond.append(index)
        return values, sampled, forms, beyond

    def _sample_list(self, index, values, sampled, forms, beyond):
        items, kind = values[index], self.model.slots[index].kind
        if kind == "text":
            return
        if kind != "number":
            values[index] = np.array([bool(i) for i in items] if kind == "switch" else items)
            return
        values[index] = np.array([np.nan if i is None else i[1] if isinstance(i, tuple) else i for i in items])
        if not any(isinstance(i, tuple) for i in items):
            return
        rows = []
        for item in items:
            if isinstance(item, tuple):
                rows.append(self._spread(item, len(forms)))
                forms.append(item[0])
                if self._leaves_range(item, index) and index not in beyond:
                    beyond.append(index)
            else:
                rows.append(np.full(POINTS, np.nan if item is None else item))
        sampled[index] = np.stack(rows)

    def _spread(self, spread, dimension):
        form, value, size = spread
        points = self._points.normal(dimension) if form == "n" else self._points.symmetric(dimension)
        drawn = points * size
        drawn += value
        return drawn

    def _leaves_range(self, spread, index):
        form, value, size = spread
        reach = size * (SCORE_LIMIT if form == "n" else _EDGE)
        low, high, low_excluded, high_excluded = self._ranges[index]
        least, most = value - reach, value + reach
        return least < low or most > high or (low_excluded and least == low) or (high_excluded and most == high)


def _items(value):
    """(number of the item, its value) of a list, or of one value as of a list of one."""
    return enumerate(value if type(value) is list else [value])


class RuleSet:
    """A released (or draft) rule set. Immutable; one object may serve many threads."""

    def __init__(self, content):
        """`content`: the exact bytes of a bundle. Raises UnknownLanguage."""
        self.bytes = content
        self.digest = "sha-256:" + hashlib.sha256(content).hexdigest()
        self.data = json.loads(content)
        if self.data["language"] != LANGUAGE:
            raise UnknownLanguage(f"this bundle is written in rule language {self.data['language']}; this engine speaks {LANGUAGE}")
        self.version = self.data["version"]
        self.points = PointSet(self.data["tables"]["lattice"]["data"]["component"])
        self._questions = {}

    @property
    def check_names(self):
        """Names of the checks, sorted."""
        return sorted(self.data["checks"])

    def question(self, check):
        """The Question named `check`. Raises KeyError."""
        found = self._questions.get(check)
        if found is None:
            if check not in self.data["checks"]:
                raise KeyError(check)
            found = self._questions[check] = Question(self, check)
        return found

    def answer(self, check, body, language="en"):
        """Answer one check. `body` is the request's JSON object without its `rule_set` pin; `language` is en or es.

        Returns JSON-ready data to be read, not changed; numbers are in the units their keys name. Raises KeyError for an unknown check and InputProblems for
        a body that is not valid.
        """
        return self.question(check).answer(body, language)

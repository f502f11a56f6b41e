"""Generated questions: bodies for every check of a bundle, made from the bundle's own declaration. Seeded: the same ones every time.

A question is made in two steps, because a new signature costs an engine more than a new answer: a shape (fresh, or a mutation of one of the
bundle's worked cases), then several questions of that shape with other numbers.
"""
import copy
import json
import random
from typing import NamedTuple

from .drawing import Drawing, stated
from .faults import faulty

ALIKE = 6               # questions of one shape
DIMENSIONS = 80         # so many uncertain numbers a question has at most: more than the 64 that the lattice has are refused


class Dials(NamedTuple):
    """How a body differs from the one it is made from: probabilities."""

    optional: float      # an optional field that is not there is given
    spread: float        # a number that may be uncertain is
    change: float        # a number is another
    choose: float        # a choice, an entry or a text is another
    drop: float          # what is optional goes


REDRAWN = Dials(0, 0, 0.7, 0.02, 0)


class Asker:
    """Bodies for one check."""

    def __init__(self, bundle, check, rng):
        self.bundle, self.rng, self.draw = bundle, rng, Drawing(bundle, rng)
        declared = bundle["checks"][check]
        self.fields, self.kinds, self.entries = declared["inputs"], bundle["kinds"], bundle["entries"]
        self.branch_field = next(f for f in self.fields if f["name"] == declared["branch"])
        self.cases = [case["input"] for case in bundle["cases"] if case["check"] == check]
        self.turn = 0

    def shape(self):
        """A body to be varied: a mutated case, or a fresh one."""
        rng = self.rng
        spread = rng.choice([0, 0, 0, 0.3, 1])
        if self.cases and rng.random() < 0.6:
            base = rng.choice(self.cases)
            if spread == 1:
                return self.body(base, Dials(0.02, 1, 1, 0.02, 0.02))
            return self.body(base, Dials(*rng.choice([(0, spread, 0.2, 0, 0), (0.03, spread, 0.3, 0.08, 0.05), (0.1, spread, 0.6, 0.25, 0.1)])))
        return self.body({}, Dials(rng.choice([0.1, 0.35, 0.7, 0.9, 1]), spread, 1, 1, 0))

    def body(self, base, dials):
        """A valid body made from another one (or from nothing)."""
        branches = [c["key"] for c in self.branch_field["choices"]]
        branch = base.get(self.branch_field["key"])
        if branch is None or self.rng.random() < dials.choose / 3:
            branch = branches[self.turn % len(branches)]
            self.turn += 1
        self.branch, self.dials, self.used, self.left = branch, dials, {}, DIMENSIONS
        made = self._filled(self.fields, base)
        made[self.branch_field["key"]] = branch
        return made

    # ---- fields --------------------------------------------------------------------------------------------------------------------

    def _filled(self, fields, base):
        made = {}
        for field in fields:
            given = base.get(field["key"])
            if self.branch in field.get("only", (self.branch,)) and self._is_given(field, given):
                value = self._of(field, given)
                if value is not None:
                    made[field["key"]] = value
        if "id" in base and "id" not in made:
            made["id"] = base["id"]
        if made and self.rng.random() < 0.02:
            absent = [f["key"] for f in fields if f["key"] not in made and not f.get("required") and self.branch in f.get("only", (self.branch,))]
            if absent:
                made[self.rng.choice(absent)] = None
        return made

    def _is_given(self, field, given):
        if given is None:
            return field.get("required", False) or self.rng.random() < self.dials.optional
        return field.get("required", False) or self.rng.random() >= self.dials.drop

    def _of(self, field, given):
        return getattr(self, "_" + field["kind"])(field, given)

    def _number(self, field, given):
        rng = self.rng
        if given is not None and not isinstance(given, dict) and field.get("uncertain") and rng.random() < self.dials.spread and self.left:
            self.left -= 1
            return self.draw.spread(field, given)
        if given is not None and rng.random() >= self.dials.change:
            return copy.copy(given)
        if not self.left and given is not None:
            given = stated(given)
        made = self.draw.number(field, self.used, self.dials.spread if self.left else 0, given)
        self.left -= isinstance(made, dict)
        return made

    def _other(self, given):
        return given is None or self.rng.random() < self.dials.choose

    def _choice(self, field, given):
        keys = [c["key"] for c in field["choices"] if self.branch in c.get("only", (self.branch,))]
        return self.rng.choice(keys) if self._other(given) or given not in keys else given

    def _switch(self, _, given):
        return self.rng.random() < 0.5 if self._other(given) else given

    def _text(self, field, given):
        return self.draw.text(field) if self._other(given) else given

    def _curve(self, field, given):
        return self.draw.curve(field) if self._other(given) else given

    def _group(self, field, given):
        return self._filled(field["fields"], given or {})

    def _list(self, field, given):
        rng, most, least = self.rng, field.get("most", 16), max(field.get("least", 0), 0)
        items = list(given or [])
        if given is None:
            items = [{}] * max(least, rng.choice([0, 1, 1, 2, 2, 3, 4, most if rng.random() < 0.3 else 5]))
        elif rng.random() < self.dials.choose:
            items = items[1:] if len(items) > least and rng.random() < 0.4 else items + [rng.choice(items + [{}])]
        return [self._filled(field["fields"], item) for item in items[:most]]

    def _reference(self, field, given):
        rng, fields = self.rng, self.kinds[field["of"]]["fields"]
        ids = sorted(self.entries.get(field["of"], {}))
        if given is not None and rng.random() >= self.dials.choose:
            if isinstance(given, dict):
                return self._filled(fields, given) if "id" not in given else self._overridden(fields, given)
            # a spread question spreads the entry's own numbers too
            return self._overridden(fields, {"id": given}) if rng.random() < max(self.dials.choose, self.dials.spread / 2) else given
        style = rng.random()
        if ids and style < 0.5:
            return rng.choice(ids)
        if ids and style < 0.75:
            return self._overridden(fields, {"id": rng.choice(ids)})
        return self._filled(fields, given if isinstance(given, dict) and "id" not in given else {})

    def _overridden(self, fields, given):
        """An id with the values that are there, and now and then one more, for some of its fields."""
        chance = 0.15 if len(given) == 1 else self.dials.optional / 5
        made = {"id": given["id"]}
        for field in fields:
            value = given.get(field["key"])
            if value is not None or self.rng.random() < chance:
                made[field["key"]] = self._of(field, value)
        return made


class Question(NamedTuple):
    """What is asked: check, language, body."""

    check: str
    language: str
    body: dict


def questions(bundle, counts, seed=1, wrong=0.1):
    """Yield so many Questions of each check ({check: count}), a share of them faulty, the languages in turn."""
    number = 0
    for check in sorted(counts):
        rng = random.Random(f"{seed} {check}")
        asker, left = Asker(bundle, check, rng), counts[check]
        while left > 0:
            shape = asker.shape()
            for k in range(min(ALIKE, left)):
                body = shape if k == 0 else asker.body(shape, REDRAWN)
                if rng.random() < wrong:
                    body = faulty(bundle, check, body, rng)
                yield Question(check, ("en", "es")[number % 2], body)
                number += 1
                left -= 1


def cases(bundle):
    """Every worked case in both languages."""
    for case in bundle["cases"]:
        for language in ("en", "es"):
            yield Question(case["check"], language, case["input"])


def written(body):
    """The JSON text of a body that both runtimes read. Whole numbers are written as such: JavaScript does not remember whether one was 12 or 12.0."""
    return json.dumps(_as_ecmascript(body), separators=(",", ":")).replace("Infinity", "1e400")


def _as_ecmascript(value):
    if isinstance(value, dict):
        return {key: _as_ecmascript(part) for key, part in value.items()}
    if isinstance(value, list):
        return [_as_ecmascript(part) for part in value]
    if isinstance(value, float) and abs(value) < 1e21 and value == int(value) and (value or str(value) == "0.0"):
        return int(value)
    return value

"""Python's side of what test_words.py compares: files of cases, each with what Python makes of it."""
import json
import math
import random

from precontact_rules.canonical import canonical_bytes, digest
from precontact_rules.declaration import Check
from precontact_rules.phrase import Template, capitalised, joined, number_text
from precontact_rules.problems import InputProblems, shown
from precontact_rules.readers import reader
from precontact_rules.validate import compile_intake

from .spoiling import Spoiler, text_of

BODIES, FIELDS, NUMBERS, QUOTED = 2500, 40, 400, 3000      # of each check, of each field, of each unit, in all
LONGEST = 60


def write(bundle, folder):
    """Writes the files; returns how many bodies are valid and the codes of the problems in the others."""
    found = {"valid": 0, "codes": set()}
    _write(folder / "intakes.jsonl", _intakes(bundle, found))
    _write(folder / "fields.jsonl", _fields(bundle))
    _write(folder / "characters.jsonl", [json.dumps({"longest": LONGEST, "refused": _refused()})])
    _write(folder / "quantities.jsonl", _quantities(bundle))
    _write(folder / "quoted.jsonl", _quoted(bundle))
    _write(folder / "sentences.jsonl", _sentences(bundle))
    return found


def _write(path, lines):
    with open(path, "w") as file:
        file.writelines(line + "\n" for line in lines)


def _intakes(bundle, found):
    for check in sorted(bundle["checks"]):
        intake, spoiler = compile_intake(bundle, check), Spoiler(bundle, check, random.Random(check))
        for _ in range(BODIES):
            text = text_of(spoiler.body())
            made = _read(intake, json.loads(text), found)
            yield f'{{"check": "{check}", "body": {text}, "made": {json.dumps(made)}}}'


def _read(intake, body, found):
    try:
        run = intake(body)
    except InputProblems as problems:
        found["codes"].update(p.code for p in problems.problems)
        return {"problems": [p._asdict() for p in problems.problems]}
    found["valid"] += 1
    return {"states": list(run.states), "values": [_value(v) for v in run.values], "sizes": run.sizes, "assumed": run.assumed,
            "origins": run.origins, "titles": run.titles, "branch": run.branch, "digest": digest(body)}


class _Run:
    """What a reader of a field needs of an intake."""

    def __init__(self, branch):
        self.branch, self.problems = branch, []


def _fields(bundle):
    """Every field of every check on its own, given what is nearly right for its kind."""
    rng = random.Random(4)
    for check in sorted(bundle["checks"]):
        spoiler, declared = Spoiler(bundle, check, rng), Check(bundle, check)
        branches = next(field["choices"] for field, _, _ in declared.tree if field["name"] == declared.branch)
        for slot in declared.slots:
            read = reader(slot.field, slot)
            for _ in range(FIELDS):
                run, text = _Run(rng.choice([None, rng.choice(branches)["key"]])), text_of(spoiler.value(slot.field))
                value = _value(read(json.loads(text), run, "/x"))
                made = json.dumps({"value": value, "problems": [p._asdict() for p in run.problems]})
                yield f'{{"check": "{check}", "slot": {slot.index}, "branch": {json.dumps(run.branch)}, "given": {text}, "made": {made}}}'


def _refused():
    """Code points that a text may not hold."""
    run = _Run(None)
    read = reader({"kind": "text", "longest": LONGEST}, None)
    return [point for point in range(0x110000) if read(chr(point), run, "") is None]


def _value(value):
    """A value of an intake as the runtime holds it: an uncertain number as an object."""
    if isinstance(value, tuple) and isinstance(value[0], str):
        return dict(zip(("form", "value", "size"), value))
    if isinstance(value, (list, tuple)):
        return [_value(v) for v in value]
    return value


def _quantities(bundle):
    rng, units = random.Random(1), bundle["units"]
    yield json.dumps([None, None, "es", number_text(None, None, units, "es")])
    for unit in sorted(units):
        values = [None, 0.0, -0.0, math.inf, math.nan, 5e-324, -1.7976931348623157e308, 999.95, 99995.0, 9999.5]
        for _ in range(NUMBERS):
            whole = rng.randrange(1, 10 ** rng.choice([1, 4, 5, 6, 12]))
            power = rng.choice([1.0, 0.5, 0.25, 2.0 ** rng.randint(-40, 40), 10.0 ** rng.randint(-18, 14), 10.0 ** rng.randint(-310, 290)])
            values.append(rng.choice([1, -1]) * whole * power)
        for value in values:
            for language in ("en", "es"):
                bare = value if value is None or math.isfinite(value) else str(value)
                yield json.dumps([bare, unit, language, number_text(value, unit, units, language)])


def _quoted(bundle):
    """Any JSON value, how it is quoted in a message, and its canonical text where it has one."""
    spoiler = Spoiler(bundle, "loop-shift", random.Random(2))
    for _ in range(QUOTED):
        text = text_of(spoiler.anything())
        value = json.loads(text)
        quoted = shown(value)
        canonical = None if quoted == "a value that cannot be written here" else canonical_bytes(value).decode()
        yield f'{{"value": {text}, "shown": {json.dumps(quoted)}, "canonical": {json.dumps(canonical)}}}'


class _Filler:
    """Fills the places of a sentence with their own names and odd characters, and keeps what it said."""

    def __init__(self, rng):
        self.rng, self.said = rng, []

    def _say(self, words):
        self.said.append(words)
        return words

    def words(self, name):
        """Stands in for a name."""
        return self._say(self.rng.choice(["$&", "é", "ß", "ŉ", "ſ", "ა", "ƛ", "𐐨", "", "µ "]) + name)

    def listed(self, name, condition):
        """Stands in for a list."""
        return self._say([f"{name} {condition} $1 {k}" for k in range(self.rng.randrange(4))])


def _sentences(bundle):
    rng = random.Random(3)
    texts = sorted({text for check in bundle["checks"].values() for f in check["findings"] for text in f["sentence"].values()})
    for text in [*texts, "", "{a}", "{a}{ b }", "a {b | c} d", "{b.label|c}", "{ b.label | c }{a}"] * 3:
        template = Template(text)
        for language in ("en", "es"):
            filler = _Filler(rng)
            places = {"words": str, "name": filler.words, "list": lambda listed: joined(filler.listed(*listed), language)}      # noqa: B023
            sentence = capitalised("".join(places[kind](content) for kind, content in template.parts))
            yield json.dumps({"text": text, "language": language, "names": template.names(), "said": filler.said, "sentence": sentence})

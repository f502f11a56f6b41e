"""Faults put into valid bodies, to compare the lists of problems."""
import copy
import math

from .drawing import bounds

STRANGE = (True, False, "12", "", [], {}, [1, 2], {"a": 1}, {"value": 1}, 3, -1, 0.5, 1e-7, 1.5e300, math.inf, -math.inf, 10 ** 20, 1e22,
           "Ω" * 70, ["long"] * 20, {"value": 5, "half_width": 1})
UNKNOWN_KEYS = ("volts", "voltage", "", "a/b", "m~n", "id", "value", "Ñ", "𝒜", "toString", "__proto__", "constructor")
BAD_SPREADS = (
    {}, {"value": 1}, {"half_width": 1}, {"value": 1, "half_width": 1, "half_width_percent": 1}, {"value": 1, "half_width": -1}, {"between": [1]},
    {"between": [1, "2"]}, {"between": [1, 2], "value": 1}, {"between": {"low": 1}}, {"value": None, "half_width": 1}, {"value": 1, "sigma": 2},
    {"value": "1", "half_width": 1}, {"value": 1e300, "half_width": 1}, {"value": 1, "standard_uncertainty": 1e300}, {"between": [-1e9, 1e18]},
    {"value": 1, "half_width": True}, {"between": [1, 2], "half_width": 1}, {"value": math.inf, "half_width": 1}, {"value": 1, "a/b~": 2})
BAD_TEXTS = ("x" * 61, "two\nlines", "tab\t", "\u00a0", "\u200b", "𝒜" * 61, "bell\x07", "\ue000", "line\u2028", "\u00ad", 5, ["a"], {"a": "b"}, True)
BAD_CURVES = ([], [[1]], [[1, 2], [3]], [[1, "2"]], "curve", {"x": 1}, [[1, 2, 3]], [[True, 1]], [[1e17, 1]], [[i, i] for i in range(65)], [1, 2])


def faulty(bundle, check, body, rng):
    """The body with one to three faults."""
    if rng.random() < 0.01:
        return rng.choice([[], [1], "text", 5, None, True, {}])
    made = copy.deepcopy(body)
    for _ in range(rng.choice([1, 1, 2, 3])):
        _spoil(bundle, bundle["checks"][check]["inputs"], made, rng)
    return made


def _spoil(bundle, fields, part, rng):
    """One fault somewhere in the object that these fields declare."""
    field = rng.choice(fields)
    given = part.get(field["key"])
    if rng.random() < 0.1:
        part[rng.choice(UNKNOWN_KEYS)] = rng.choice(STRANGE)
    elif rng.random() < 0.1:
        part[field["key"]] = rng.choice(STRANGE)
    elif rng.random() < 0.1:
        part.pop(field["key"], None)
    elif rng.random() < 0.05:
        part[field["key"]] = None
    elif field["kind"] == "group":
        if not isinstance(given, dict):
            given = part[field["key"]] = {}
        _spoil(bundle, field["fields"], given, rng)
    elif field["kind"] == "list":
        _spoil_list(bundle, field, part, given, rng)
    elif field["kind"] == "reference":
        _spoil_reference(bundle, field, part, given, rng)
    else:
        part[field["key"]] = _wrong(field, rng)


def _spoil_list(bundle, field, part, given, rng):
    items = part[field["key"]] = given if isinstance(given, list) and given else [{}]
    if rng.random() < 0.3:
        part[field["key"]] = items * (field.get("most", 16) + 1) if rng.random() < 0.5 else []
    elif rng.random() < 0.15:
        items[rng.randrange(len(items))] = rng.choice(STRANGE)
    else:
        item = rng.choice(items)
        if isinstance(item, dict):
            _spoil(bundle, field["fields"], item, rng)


def _spoil_reference(bundle, field, part, given, rng):
    if rng.random() < 0.2:
        part[field["key"]] = rng.choice(["no-such-entry", "", "multimeter", {"id": "no-such-entry"}, {"id": 5}, {"id": None}, 7, ["id"], "toString"])
        return
    if not isinstance(given, dict):
        given = part[field["key"]] = {"id": given} if isinstance(given, str) else {}
    _spoil(bundle, bundle["kinds"][field["of"]]["fields"], given, rng)


def _wrong(field, rng):
    kind = field["kind"]
    if kind == "choice":
        return rng.choice(["", "no-such-choice", "Thevenin", 5, True, [], rng.choice(field["choices"])["key"], "constructor"])
    if kind == "switch":
        return rng.choice(["true", 0, 1, "yes", [], {}])
    if kind == "text":
        return rng.choice(BAD_TEXTS)
    if kind == "curve":
        return rng.choice(BAD_CURVES)
    low, high = bounds(field)
    beyond = [math.nextafter(low, -math.inf), math.nextafter(high, math.inf), -high, high * 10, -1, -1e-7, 2 ** 53 + 2, -2 ** 60, math.inf, "5", []]
    return copy.deepcopy(rng.choice(BAD_SPREADS) if rng.random() < 0.5 else rng.choice(beyond))

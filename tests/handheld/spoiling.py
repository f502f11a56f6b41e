"""Bodies spoiled without any knowledge of what is right: any part replaced, dropped, added, doubled or moved, down to characters and last digits."""
import copy
import json

from .drawing import bounds

INFINITE = "1e999"      # JSON text that every reader takes for an infinite number
NUMBERS = (0, -0.0, 1, -1, 0.5, 100, 1e-7, 1e-5, 15, 60, 0.1, 1 / 3, 1e21, 1e22, 123456789012345680.0, 1000000000000000.1, 5e-324,
           1.7976931348623157e308, -1.7976931348623157e308, 2 ** 53 - 1, 2 ** 53, 2 ** 53 + 1, -2 ** 53, -2 ** 53 - 1, 2 ** 63, 2 ** 64 + 1,
           10 ** 22, 10 ** 400, -10 ** 400, int(1.7976931348623157e308) + 1, 1e999, -1e999)
LETTERS = ("a", "Z", "0", " ", '"', "\\", "/", "~", "|", "{", "}", "$&", "$1", "é", "ß", "ŉ", "Ω", "µ", "e\u0301", "\u0000", "\t", "\n", "\x1f",
           "\x7f", "\x85", "\u00a0", "\u00ad", "\u061c", "\u1680", "\u180e", "\u2003", "\u200b", "\u200e", "\u2028", "\u202e", "\u202f", "\u2060",
           "\u2066", "\u3000", "\ud800", "\ud83d", "\udfff", "\ue000", "\ufdd0", "\ufe0f", "\ufeff", "\ufff9", "\ufffc", "\ufffd", "\uffff",
           "\u0378", "𝒜", "🔧", "\U0001fffe", "\U000e0041", "\U000f0000", "\U0010ffff")
KEYS = ("", "a/b", "m~n", "~1", "*", "id", "value", "between", "half_width", "half_width_percent", "standard_uncertainty", "label", "__proto__",
        "constructor", "toString", "hasOwnProperty", "length", "0", "é", "\ue000", "𝒜", "\ud800", "Ω" * 40)
SPREAD_KEYS = ("value", "half_width", "half_width_percent", "standard_uncertainty", "between")
OTHERS = (None, True, False, "", "id", [], {}, [[]], [{}], {"id": None}, {"": ""}, {"value": None}, [[1, 2]], [[2, 1], [1, 2], [1, 3]],
          [[1, 2], [True, 3]])


def text_of(body):
    """The body as JSON text, pure ASCII; what is infinite is written as a number too great to hold."""
    text = json.dumps(body)
    return text.replace("-Infinity", "-" + INFINITE).replace("Infinity", INFINITE)


class Spoiler:
    """Makes bodies out of the worked cases of one check."""

    def __init__(self, bundle, check, rng):
        self.rng = rng
        self.bodies = [case["input"] for case in bundle["cases"] if case["check"] == check]
        self.ids = [entry for entries in bundle["entries"].values() for entry in sorted(entries)]
        self.keys, self.values = set(), {}
        for body in self.bodies:
            self._learn(body)
        self.keys = sorted(self.keys)

    def _learn(self, part):
        for key, value in part.items() if isinstance(part, dict) else enumerate(part) if isinstance(part, list) else ():
            if isinstance(key, str):
                self.keys.add(key)
                self.values.setdefault(key, []).append(value)
            self._learn(value)

    def body(self):
        """A worked case with nothing to several things changed."""
        rng, made = self.rng, copy.deepcopy(self.rng.choice(self.bodies))
        for _ in range(rng.choice([0, 1, 1, 1, 2, 3, 5])):
            made = self._spoiled(made)
        return made

    def _spoiled(self, body):
        rng, places = self.rng, list(_places(body))
        if not places or rng.random() < 0.005:
            return self.anything()
        holder, key = rng.choice(places)
        dice = rng.random()
        if dice < 0.3:
            holder[key] = self._near(holder[key], key)
        elif dice < 0.45:
            holder[key] = self.anything()
        elif dice < 0.55:
            del holder[key]
        elif dice < 0.6:
            holder[key] = None
        elif dice < 0.75:
            self._add(holder)
        elif dice < 0.85:
            other, there = rng.choice(places)
            holder[key] = copy.deepcopy(other[there]) if there in other or isinstance(there, int) else None
        else:
            holder[key] = self._spread(holder[key])
        return body

    def _add(self, holder):
        rng = self.rng
        if isinstance(holder, list):
            holder += [copy.deepcopy(rng.choice(holder)) if holder and rng.random() < 0.7 else self.anything()] * rng.choice([1, 1, 2, 17])
            return
        key = rng.choice(self.keys) if rng.random() < 0.6 else rng.choice(KEYS) if rng.random() < 0.7 else self._text()
        holder[key] = copy.deepcopy(rng.choice(self.values[key])) if key in self.values and rng.random() < 0.7 else self.anything()

    def _near(self, value, key):
        rng = self.rng
        if key in self.values and rng.random() < 0.5:
            return copy.deepcopy(rng.choice(self.values[key]))
        if isinstance(value, bool) or value is None:
            return not value
        if isinstance(value, (int, float)) and abs(value) < 1e300:
            return rng.choice([-value, value * 1e3, value * 1e-3, value * 1e12, value + 1, float(value), str(value), [value], rng.choice(NUMBERS)])
        if isinstance(value, str):
            at = rng.randrange(len(value) + 1)
            longer = value[:at] + rng.choice(LETTERS) + value[at:]
            return rng.choice([rng.choice(self.ids), value.upper(), longer, longer * 9, value[1:], {"id": value}, self._text()])
        if isinstance(value, list):
            return rng.choice([[], value[:1], value * 9, {str(place): one for place, one in enumerate(value)}])
        return list(value.values()) if isinstance(value, dict) else -value

    def _spread(self, value):
        rng, made = self.rng, {}
        held = isinstance(value, (int, float)) and not isinstance(value, bool) and abs(value) < 1e300
        number = value if held else rng.choice(NUMBERS[:10])
        for key in rng.sample([*SPREAD_KEYS, rng.choice(KEYS)], rng.choice([1, 2, 2, 2, 3])):
            size = number if key == "value" else rng.choice([number / 10, rng.choice(NUMBERS), abs(number)])
            made[key] = self.anything() if rng.random() < 0.1 else size
        if "between" in made and rng.random() < 0.8:
            made["between"] = [rng.choice([number, number * 2, rng.choice(NUMBERS)]) for _ in range(rng.choice([1, 2, 2, 2, 2, 3]))]
            if rng.random() < 0.6:
                made.pop("value", None)
        return made

    def value(self, field):
        """A value of the kind of a field, or nearly: most numbers in its range, plain and with spreads, texts and curves of all lengths."""
        rng, kind = self.rng, field["kind"]
        if rng.random() < 0.1:
            return self.anything()
        if kind == "number":
            low, high = bounds(field)
            number = rng.choice([low, high, 0, 1, 0.1, rng.random() * min(high, 1e6), rng.choice(NUMBERS), min(max(rng.gauss(0, 1e3), low), high)])
            return number if rng.random() < 0.3 or abs(number) > 1e300 else self._spread(number)
        if kind == "choice":
            return rng.choice([choice["key"] for choice in field["choices"]])
        if kind == "curve":
            odd = rng.choice(NUMBERS) if rng.random() < 0.3 else 50
            return [[rng.choice([1, 2.5, 60, odd]), rng.random()] for _ in range(rng.choice([0, 1, 2, 3, 5, 64, 65]))]
        return self._text() if kind == "text" else rng.random() < 0.5

    def _text(self):
        return "".join(self.rng.choice(LETTERS) for _ in range(self.rng.choice([1, 1, 2, 3, 5, 30, 59, 60, 61, 90])))

    def anything(self, depth=0):
        """Any value that JSON can hold, and some that it cannot."""
        rng, dice = self.rng, self.rng.random()
        if dice < 0.3:
            return rng.choice(NUMBERS)
        if dice < 0.5:
            return self._text()
        if dice < 0.7 or depth > 3:
            return copy.deepcopy(rng.choice(OTHERS))
        if dice < 0.72:
            deep = rng.choice(NUMBERS)
            for _ in range(rng.choice([31, 32, 33, 60])):
                deep = [deep] if rng.random() < 0.5 else {rng.choice(KEYS): deep}
            return deep
        inner = [self.anything(depth + 1) for _ in range(rng.choice([0, 1, 2, 3, 20]))]
        return inner if rng.random() < 0.5 else {rng.choice(KEYS): value for value in inner}


def _places(part):
    for key in list(part) if isinstance(part, dict) else range(len(part)) if isinstance(part, list) else ():
        yield part, key
        yield from _places(part[key])

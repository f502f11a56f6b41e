"""Numbers, spreads, curves and texts for generated questions: realistic ones learned from the bundle, and the edges of what a field allows."""
import math

from precontact_rules.points import POINTS, SCORE_LIMIT

# Where a log-uniform draw starts and ends, by the unit's last word; anything else takes OTHER. In the field's own unit.
PLAUSIBLE = {"volt": (1e-3, 3e4), "ohm": (1e-2, 1e10), "ampere": (1e-7, 1e2), "farad": (1e-13, 1e-5), "henry": (1e-6, 1e2), "hertz": (1e-1, 1e6),
             "second": (1e-4, 1e4), "percent": (1e-2, 150), "metre": (1e-1, 1e4), "celsius": (1, 90), "degree": (1, 360), "ratio": (1e-2, 10)}
OTHER = (1e-3, 1e3)
TYPED = (1, 1.5, 2.2, 3.3, 4.7, 5, 6.8, 10)
TEXTS = ("PT-101", "a", "high", "Válvula ñ", "level/high~1", "Ω µ °", '"quoted" \\ back', "タンク", "🔧 wrench", "e\u0301 combining", "x" * 60, "𝒜" * 20)
FORMS = ("half_width", "half_width_percent", "standard_uncertainty", "between")
LEAST_POSITIVE = 5e-324


def walk(fields, kinds):
    """Every field below `fields`, those of references included."""
    for field in fields:
        yield field
        yield from walk(kinds[field["of"]]["fields"] if field["kind"] == "reference" else field.get("fields", ()), kinds)


def bounds(field):
    """(least, most) that the field allows."""
    low = field["least"] if "least" in field else math.nextafter(field["above"], math.inf) if "above" in field else -2.0 ** 53
    high = field["most"] if "most" in field else math.nextafter(field["below"], -math.inf) if "below" in field else 2.0 ** 53
    return low, high


def stated(number):
    """The middle of a number as a request states it."""
    if not isinstance(number, dict):
        return number
    return number["value"] if "between" not in number else (number["between"][0] + number["between"][1]) / 2


class Drawing:
    """Draws values for fields; knows which values the bundle's cases and entries use."""

    def __init__(self, bundle, rng):
        self.rng, self.seen = rng, {}
        units = bundle["units"]
        for case in bundle["cases"]:
            self._learn(case["input"])
        for kind, entries in bundle["entries"].items():
            fields = {f["name"]: f for f in bundle["kinds"][kind]["fields"]}
            for entry in entries.values():
                for name, stored in entry["fields"].items():
                    if fields[name]["kind"] == "number":
                        self.seen.setdefault(fields[name]["key"], []).append(stored["value"] / units[fields[name]["unit"]]["factor"])

    def _learn(self, part):
        for key, value in part.items():
            for item in value if isinstance(value, list) else [value]:
                if isinstance(item, dict) and not {"value", "between"} & item.keys():
                    self._learn(item)
                elif isinstance(item, (int, float, dict)) and not isinstance(item, bool):
                    self.seen.setdefault(key, []).append(stated(item))

    def value(self, field, used, near=None):
        """A plain number for the field: most of them plausible, or `near` another one; some on an edge. `used`: numbers of this question by unit."""
        rng, (low, high) = self.rng, bounds(field)
        seen = self.seen.get(field["key"])
        dice = rng.random()
        if dice < 0.03:
            found = rng.choice([low, high, math.nextafter(low, high), math.nextafter(high, low)])
        elif dice < 0.055:
            found = rng.choice([0.0, -0.0])
        elif dice < 0.08:
            found = rng.choice([LEAST_POSITIVE, 1e-310, 1e-300, 1e-100, 1e-15, 1e15, high / 3])
        elif dice < 0.14 and used.get(field["unit"]):
            found = rng.choice(used[field["unit"]])
        elif near is not None and dice < 0.85:
            found = near * math.exp(rng.gauss(0, rng.choice([1e-9, 0.01, 0.1, 0.5, 2])))
        elif seen and dice < 0.8:
            found = rng.choice(seen) * rng.choice([1, 1, math.exp(rng.gauss(0, 0.3)), math.exp(rng.gauss(0, 2))])
        elif dice < 0.9:
            found = rng.choice(TYPED) * 10.0 ** rng.randint(*(math.floor(math.log10(end)) for end in self._plausible(field, low, high)))
        else:
            least, most = self._plausible(field, low, high)
            found = math.exp(rng.uniform(math.log(least), math.log(most)))
        if low < 0 and near is None and rng.random() < 0.3:
            found = -found
        found = min(max(found, low), high)
        used.setdefault(field["unit"], []).append(found)
        return found

    @staticmethod
    def _plausible(field, low, high):
        least, most = PLAUSIBLE.get(field["unit"].rpartition("_")[2], OTHER)
        most = min(most, high)
        return (max(least, low) if max(least, low) < most else most * 1e-3), most

    def spread(self, field, value, form=None):
        """`value` with a spread, in one of the four forms."""
        rng, (low, high) = self.rng, bounds(field)
        form = form or rng.choice(FORMS)
        share = rng.choice([0.01, 0.1, math.exp(rng.uniform(math.log(1e-7), 0)), math.exp(rng.uniform(math.log(1e-3), math.log(0.3)))])
        if rng.random() < 0.03:
            share = rng.choice([0.0, 1.0, 3.0, 1e-300, 1e9])
        if form == "half_width_percent":
            return {"value": value, form: min(share * 100, 2.0 ** 53)}
        size = min(share * (abs(value) or rng.choice([1e-3, 1.0])), 2.0 ** 53)
        if form != "between":
            if rng.random() < 0.04 and low < value < high:       # the outermost sample falls on the bound, or a last place to either side of it
                reach = SCORE_LIMIT if form == "standard_uncertainty" else 1 - 1 / POINTS
                size = min(rng.choice([value - low, high - value]) / reach * rng.choice([1, 1 - 2e-16, 1 + 2e-16, 1.0001]), 2.0 ** 53)
            return {"value": value, form: size}
        ends = [min(max(value - size, low), high), min(max(value + size, low), high)]
        return {"between": ends if rng.random() < 0.9 else ends[::-1]}

    def number(self, field, used, spread, given=None):
        """A number, or one with a spread (with that probability), near one that is given and in its form."""
        if given is not None and isinstance(given, dict) and self.rng.random() < 0.9:
            form = next(f for f in FORMS if given.get(f) is not None)
            return self.spread(field, self.value(field, used, stated(given)), form)
        value = self.value(field, used, None if given is None else stated(given))
        return self.spread(field, value) if field.get("uncertain") and self.rng.random() < spread else value

    def curve(self, field):
        """Points of a curve, some in no order, some with a step."""
        rng = self.rng
        count = rng.choice([1, 2, 3, 5, 8])
        across = [rng.choice([1, 5, 10, 30, 50, 60, 100, 300, 400, 1000, 0.01, 0.04]) * rng.choice([1, 1, 0.001]) for _ in range(count)]
        points = [[x, math.exp(rng.uniform(math.log(1e-3), math.log(10)))] for x in across]
        return points if rng.random() < 0.3 else sorted(points)

    def text(self, field):
        """A short text."""
        return self.rng.choice(TEXTS)[:field["longest"]]

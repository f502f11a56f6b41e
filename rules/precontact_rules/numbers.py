"""Reading one number of a request: plain, or with a spread, checked against its declared range and brought to SI."""
import math

from .canonical import as_binary64, number_as_ecmascript
from .problems import Problem, escaped, in_order, shown

EXACT_WHOLE = 2 ** 53 - 1      # up to here every reader of JSON has the same whole numbers (RFC 7493, 2.2); nothing on a test bench is larger
SPREADS = ("half_width", "half_width_percent", "standard_uncertainty")
_FORMS = "a number, {value, half_width}, {value, half_width_percent}, {value, standard_uncertainty} or {between: [low, high]}"


def entry_number(record):
    """A number of a catalogue entry, already in SI, as the intake holds it: a float, or ("r" | "n", value, spread)."""
    for key, form in (("half_width", "r"), ("standard_uncertainty", "n")):
        if record.get(key):
            return (form, float(record["value"]), float(record[key]))
    return float(record["value"])


def number_reader(slot):
    """The reader for one number field: read(x, problems, pointer) -> float, ("r" | "n", value, spread), or None after a problem."""
    field, factor = slot.field, slot.factor
    low = field["least"] if "least" in field else math.nextafter(field["above"], math.inf) if "above" in field else -EXACT_WHOLE
    high = field["most"] if "most" in field else math.nextafter(field["below"], -math.inf) if "below" in field else EXACT_WHOLE
    uncertain = field.get("uncertain", False)
    unit = field["unit"].replace("_", " ")

    def read(x, problems, pointer):
        kind = type(x)
        if kind is float or kind is int:
            if low <= x <= high:
                return x * factor + 0.0        # + 0.0 turns a negative zero into zero
            problems.append(bad_number(x, pointer))
        elif kind is dict and uncertain:
            return spread(x, problems, pointer)
        elif kind is dict:
            problems.append(Problem(pointer, "not-uncertain", f"{shown(x)} is given with a spread; here only a plain number of {unit} is possible"))
        else:
            allowed = _FORMS if uncertain else "a number"
            problems.append(Problem(pointer, "wrong-type", f"{shown(x)} is not a number; give {allowed}, in {unit}"))
        return None

    def bad_number(x, pointer):
        if -math.inf < as_binary64(x) < math.inf:
            return Problem(pointer, "out-of-range", f"{shown(x)} {unit} is outside the range; it must be {range_text(field)}")
        found = "NaN" if x != x else "Infinity" if x > 0 else "-Infinity"
        return Problem(pointer, "not-finite", f"{found} is not a finite number; give one in {unit}")

    def plain(x, problems, pointer, least, most, what):
        """A member of a spread form: a number between least and most, in the field's own unit."""
        if type(x) not in (float, int):
            problems.append(Problem(pointer, "wrong-type" if x is not None else "missing", f"{shown(x)} is not a number; give {what}"))
        elif not least <= x <= most:
            problems.append(bad_number(x, pointer) if what == "the value" else
                            Problem(pointer, "out-of-range", f"{shown(x)} is not possible here; {what} is between 0 and {EXACT_WHOLE}"))
        else:
            return x + 0.0
        return None

    def spread(x, problems, pointer):
        x = {key: value for key, value in x.items() if value is not None}
        given = [key for key in SPREADS if key in x]
        unknown = in_order(key for key in x if key not in SPREADS and key not in ("value", "between"))
        if unknown:
            problems.append(Problem(f"{pointer}/{escaped(unknown[0])}", "unknown-field", f"{shown(unknown[0])} is not part of an uncertain number; it is {_FORMS}"))
        elif len(given) + ("between" in x) > 1:
            names = " and ".join(given + ["between"] * ("between" in x))
            problems.append(Problem(pointer, "two-spreads", f"{names} are given together; one number has one spread"))
        elif "between" in x:
            return between(x, problems, pointer)
        elif not given:
            problems.append(Problem(pointer, "missing", f"no spread in {shown(x)}; add one of {', '.join(SPREADS)}, or write the number alone"))
        else:
            return around(x, given[0], problems, pointer)
        return None

    def between(x, problems, pointer):
        ends = x["between"]
        if "value" in x:
            problems.append(Problem(f"{pointer}/value", "two-spreads", "value and between are given together; between alone says both"))
        elif type(ends) is not list or len(ends) != 2:
            problems.append(Problem(f"{pointer}/between", "wrong-type", f"{shown(ends)} is not a pair; give [low, high], in {unit}"))
        else:
            ends = [plain(end, problems, f"{pointer}/between/{i}", low, high, "the value") for i, end in enumerate(ends)]
            if None not in ends:
                a, b = sorted(end * factor for end in ends)
                half = (b - a) * 0.5
                return ("r", a + half, half) if half > 0.0 else a
        return None

    def around(x, name, problems, pointer):
        value = plain(x.get("value"), problems, pointer + "/value", low, high, "the value")
        size = plain(x[name], problems, f"{pointer}/{name}", 0, EXACT_WHOLE, f"the {name.replace('_', ' ')}")
        if value is None or size is None:
            return None
        value *= factor
        size = abs(value) * (size / 100.0) if name == "half_width_percent" else size * factor
        return ("n" if name == "standard_uncertainty" else "r", value, size) if size > 0.0 else value

    return read


def range_text(field):
    """The declared range in words, in the field's own unit."""
    parts = []
    for key, words in (("above", "above"), ("least", "at least"), ("below", "below"), ("most", "at most")):
        if key in field:
            parts.append(f"{words} {number_as_ecmascript(field[key])}")
    return " and ".join(parts) or f"between -{EXACT_WHOLE} and {EXACT_WHOLE}"

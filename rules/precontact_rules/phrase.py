"""Numbers and sentences as a person reads them, in English and Spanish, the same characters from every runtime."""
import math
import re
from decimal import ROUND_HALF_UP, Decimal

DIGITS = 4
_LATIN = "\u017f"      # up to here no Unicode version gives a letter another capital than the others do
_PREFIXES = {-12: "p", -9: "n", -6: "µ", -3: "m", 0: "", 3: "k", 6: "M", 9: "G"}
_NO_VALUE = {"en": "(no value)", "es": "(sin valor)"}
_AND = {"en": " and ", "es": " y "}
_PLACE = re.compile(r"\{([^{}]*)\}")
_LISTED = re.compile(r"^\s*([a-z0-9_.]+)\s*\|\s*([a-z0-9_.]+)\s*$")


def number_text(value, unit, units, language):
    """A number in SI with its unit, to four significant digits: "2.497 MΩ", "-7.7 %"; None becomes "(no value)"."""
    return quantity_writer(units.get(unit), language)(value)


def quantity_writer(unit, language):
    """write(value) -> the text of numbers in one unit (its record in the bundle) and one language, as number_text has it.

    What has no unit (None) has no number either: a choice or a text that was not given.
    """
    if unit is None:
        return lambda value: _NO_VALUE[language]
    factor, symbol, prefixes, nothing = unit["factor"], unit["symbol"], unit["prefixes"], _NO_VALUE[language]
    point = "," if language == "es" else "."

    def write(value):
        if value is None:
            return nothing
        value = value / factor
        if not -math.inf < value < math.inf:      # finite in SI, but not in its own unit
            return nothing
        exponent, digits = _rounded(abs(value))
        written = symbol
        if prefixes and value:
            power = -12 if exponent < -12 else 9 if exponent > 9 else exponent // 3 * 3
            written, exponent = _PREFIXES[power] + symbol, exponent - power
        text = _laid_out(digits, exponent, point)
        return ("-" if value < 0 else "") + text + ("\u00a0" + written if written else "")

    return write


def _rounded(value):
    """(decimal exponent of the first digit, the significant digits) of a value >= 0, rounded half up on its exact binary value."""
    if value == 0:
        return 0, "0"
    text = f"{value:.{DIGITS}e}"      # one digit more than is kept: "2.4973e+06"
    if text[DIGITS + 1] < "5":
        return int(text[DIGITS + 3:]), (text[0] + text[2:DIGITS + 1]).rstrip("0")
    shortest = repr(value).partition("e")[0].replace(".", "").strip("0")
    if len(shortest) != DIGITS + 1 or shortest[-1] != "5":
        # Not a tie, which has one digit more than is kept, a 5: there the C library's rounding of the exact value is the same.
        mantissa, _, power = f"{value:.{DIGITS - 1}e}".partition("e")
        return int(power), mantissa.replace(".", "").rstrip("0")
    exact = Decimal(value)
    exponent = exact.adjusted()
    rounded = exact.quantize(Decimal(1).scaleb(exponent - DIGITS + 1), rounding=ROUND_HALF_UP)
    exponent = rounded.adjusted()
    return exponent, "".join(map(str, rounded.as_tuple().digits)).rstrip("0") or "0"


def _laid_out(digits, exponent, point):
    if not -4 <= exponent <= 9:
        return digits[0] + (point + digits[1:] if len(digits) > 1 else "") + f"e{exponent}"
    if exponent < 0:
        return "0" + point + "0" * (-exponent - 1) + digits
    whole = exponent + 1
    return digits[:whole] + point + digits[whole:] if len(digits) > whole else digits.ljust(whole, "0")


class Template:
    """A sentence cut at its places: plain words, names, and lists of items."""

    __slots__ = ("parts",)

    def __init__(self, text):
        self.parts, end = [], 0
        for place in _PLACE.finditer(text):
            self.parts.append(("words", text[end:place.start()]))
            listed = _LISTED.match(place.group(1))
            self.parts.append(("list", listed.groups()) if listed else ("name", place.group(1).strip()))
            end = place.end()
        self.parts.append(("words", text[end:]))

    def names(self):
        """Names of the formulas that the sentence needs."""
        return [content if kind == "name" else content[1] for kind, content in self.parts if kind != "words"]


def capitalised(sentence):
    """The sentence with a capital letter: it may begin with a name."""
    first = sentence[:1]
    return (first.upper() if first <= _LATIN else first) + sentence[1:]


def joined(names, language):
    """Names as a list in a sentence: "a, b and c"."""
    if len(names) < 2:
        return "".join(names)
    return ", ".join(names[:-1]) + _AND[language] + names[-1]

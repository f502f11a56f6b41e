"""Canonical JSON (RFC 8785) and the digest of a request.

Python's own encoder already writes canonical text for almost every request: sorted keys, no spaces, shortest digits.  It differs from ECMAScript
only in how some numbers are laid out (1.0, 1e-07, 1e+16) and in the order of keys beyond the basic plane; only then is the slow
writer used.
"""
import hashlib
import json
import math
import re

_PERHAPS = re.compile(r"\d(?:\.0|[eE]|\d{15})")      # all begin with a digit: quick to look for
_LAID_OUT_OTHERWISE = re.compile(r"\d\.0(?![\d])|\d[eE][-+]?\d|(?<![\d.])\d{16}|[\ud800-\U0010ffff]")

_encode = json.JSONEncoder(sort_keys=True, separators=(",", ":"), ensure_ascii=False, allow_nan=False).encode


def canonical_bytes(data):
    """RFC 8785 bytes of JSON data. Raises ValueError for a number that JSON cannot hold."""
    text = _encode(data)
    if (not text.isascii() or _PERHAPS.search(text)) and _LAID_OUT_OTHERWISE.search(text):
        text = _written(data)
    return text.encode()


def digest(data):
    """SHA-256 of the canonical bytes: "sha-256:" and 64 hexadecimal digits."""
    return "sha-256:" + hashlib.sha256(canonical_bytes(data)).hexdigest()


def as_binary64(number):
    """A number as a reader of JSON has it that knows binary64 only: the nearest, infinite where there is none."""
    try:
        return float(number)
    except OverflowError:
        return math.inf if number > 0 else -math.inf


def _written(value):
    if isinstance(value, dict):
        items = sorted(value.items(), key=lambda item: item[0].encode("utf-16-be", "surrogatepass"))
        return "{" + ",".join(f"{_written(k)}:{_written(v)}" for k, v in items) + "}"
    if isinstance(value, (list, tuple)):
        return "[" + ",".join(map(_written, value)) + "]"
    if isinstance(value, float):
        return number_as_ecmascript(value)
    if isinstance(value, int) and not isinstance(value, bool):
        return number_as_ecmascript(float(value))
    return json.dumps(value, ensure_ascii=False, allow_nan=False)


def number_as_ecmascript(value):
    """A finite float as ECMAScript's Number::toString lays it out (ECMA-262 6.1.6.1.20); Python supplies the shortest digits."""
    if value == 0:
        return "0"
    sign, value = ("-", -value) if value < 0 else ("", value)
    mantissa, _, exponent = repr(value).partition("e")
    whole, _, fraction = mantissa.partition(".")
    if fraction == "0":
        fraction = ""
    point = len(whole) + int(exponent or 0)          # where the decimal point stands, counted from the first digit
    digits = (whole + fraction).lstrip("0")
    point -= len(whole + fraction) - len(digits) if whole == "0" else 0
    digits = digits.rstrip("0") or "0"
    count = len(digits)
    if count <= point <= 21:
        return sign + digits + "0" * (point - count)
    if 0 < point <= 21:
        return f"{sign}{digits[:point]}.{digits[point:]}"
    if -6 < point <= 0:
        return f"{sign}0.{'0' * -point}{digits}"
    power = f"e{point - 1:+d}"
    return sign + digits[0] + ("." + digits[1:] if count > 1 else "") + power

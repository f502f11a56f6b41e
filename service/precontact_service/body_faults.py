"""What is wrong with a body that is not acceptable JSON: every fault, and where it is."""
import json
import math
import re

import orjson
from precontact_rules import Problem

from .problems import ProblemError

DEPTH = 32            # levels of objects and lists; a check needs five
_DIGITS = 309         # a whole number of more digits is beyond binary64
_BOM = b"\xef\xbb\xbf"
# A string (closed or not, so that the scan stays linear), or one bracket.
_TOKENS = re.compile(rb'"(?:[^"\\]|\\.)*+"?|[\[\]{}]', re.DOTALL)


class _Fault:
    """Stands in the parsed value where something is wrong."""

    __slots__ = ("code", "detail", "inner")

    def __init__(self, code, detail, inner=None):
        self.code, self.detail, self.inner = code, detail, inner


def read_slowly(raw):
    """The JSON value of `raw`, read by the standard library with every rule enforced. Raises ProblemError."""
    text = _decoded(raw)
    _check_depth(raw)
    try:
        value = json.loads(text, object_pairs_hook=_object, parse_constant=_constant, parse_float=_float, parse_int=_whole)
    except json.JSONDecodeError as error:
        _refuse("not-json", f"line {error.lineno}, column {error.colno}: {error.msg}; one JSON object is right")
    faults = []
    _collect(value, "", faults)
    if faults:
        raise ProblemError("malformed-body", "The body is not acceptable JSON.", faults)
    try:
        orjson.loads(raw)
    except orjson.JSONDecodeError as error:      # what only the stricter reader minds: half a surrogate pair
        _refuse("not-json", f"line {error.lineno}, column {error.colno}: {error.msg}")
    return value


def _refuse(code, detail):
    raise ProblemError("malformed-body", "The body is not acceptable JSON.", [Problem("", code, detail)]) from None


def _decoded(raw):
    if not raw.strip():
        _refuse("empty-body", "the body is empty; one JSON object is right")
    if raw.startswith(_BOM):
        _refuse("byte-order-mark", "the body starts with a byte order mark; JSON text starts with its first character")
    try:
        return raw.decode()
    except UnicodeDecodeError as error:
        _refuse("not-utf-8", f"byte {error.start} (0x{raw[error.start]:02x}) is not UTF-8; JSON text is always UTF-8")


def _check_depth(raw):
    depth = 0
    for token in _TOKENS.finditer(raw):
        bracket = raw[token.start()]
        if bracket in b"[{":
            depth += 1
            if depth > DEPTH:
                _refuse("too-deep", f"byte {token.start()} opens level {depth}; objects and lists may be nested {DEPTH} deep")
        elif bracket in b"]}":
            depth -= 1


def _object(pairs):
    found = dict(pairs)
    if len(found) == len(pairs):
        return found
    seen, twice = set(), []
    for key, _ in pairs:
        if key in seen and key not in twice:
            twice.append(key)
        seen.add(key)
    return _Fault("duplicate-key", twice, found)


def _constant(name):
    return _Fault("not-finite", f"{name} is not JSON; a finite number is right")


def _float(text):
    value = float(text)
    return value if math.isfinite(value) else _Fault("not-finite", f"{_shortened(text)} is beyond the largest number there is, 1.8e308")


def _whole(text):
    return int(text) if len(text) <= _DIGITS else _Fault(
        "not-finite", f"a whole number of {len(text.lstrip('-'))} digits is beyond the largest number there is, 1.8e308")


def _shortened(text):
    return text if len(text) <= 40 else text[:37] + "..."


def _collect(value, pointer, faults):
    if isinstance(value, _Fault):
        if value.code == "duplicate-key":
            for key in value.detail:
                faults.append(Problem(f"{pointer}/{_escaped(key)}", value.code, "given more than once in this object; each key stands once"))
            _collect(value.inner, pointer, faults)
        else:
            faults.append(Problem(pointer, value.code, value.detail))
    elif isinstance(value, dict):
        for key, item in value.items():
            _collect(item, f"{pointer}/{_escaped(key)}", faults)
    elif isinstance(value, list):
        for place, item in enumerate(value):
            _collect(item, f"{pointer}/{place}", faults)


def _escaped(key):
    return key.replace("~", "~0").replace("/", "~1").encode("utf-8", "replace").decode()

"""Reading a JSON body: fast where nothing is wrong, exact about the place where something is.

RFC 8259 leaves duplicate keys, huge numbers and deep nesting to the receiver; this receiver refuses them, since each means that the
sender and the engine could understand two different things.
"""
import orjson

from .body_faults import DEPTH, read_slowly

_WHOLE = 2.0 ** 53      # beyond it a float may have been a whole number that a binary64 cannot hold


class _Doubt(Exception):
    """The fast reader cannot vouch for what it read."""


def read_json(raw):
    """The JSON value of `raw` bytes. Raises ProblemError (400) naming every fault and its place.

    orjson keeps the last of two equal keys without a word.  Every key is followed by one colon, so the colons of the text, less
    those inside strings, must be as many as the keys that survived; where they are not, or where an escape could hide a colon, the
    slow reader decides.
    """
    try:
        value = orjson.loads(raw)
        if b"\\" not in raw and _colons(value, 1) == raw.count(b":"):
            return value
    except (orjson.JSONDecodeError, _Doubt):
        pass
    return read_slowly(raw)


def _colons(value, depth):
    """How many colons the text of this value holds, if no key was given twice."""
    if depth > DEPTH:
        raise _Doubt
    kind = type(value)
    if kind is dict:
        count = len(value)
        for key, item in value.items():
            if ":" in key:
                count += key.count(":")
            kind = type(item)
            if kind is str:
                count += item.count(":")
            elif kind is dict or kind is list:
                count += _colons(item, depth + 1)
            elif kind is float and not -_WHOLE < item < _WHOLE:
                raise _Doubt
        return count
    if kind is list:
        return sum(_colons(item, depth + 1 if type(item) in (dict, list) else depth) for item in value)
    if kind is float and not -_WHOLE < value < _WHOLE:
        raise _Doubt
    return value.count(":") if kind is str else 0

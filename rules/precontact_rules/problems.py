"""What is wrong with a request, item by item."""
import math
from typing import NamedTuple

from .canonical import as_binary64, canonical_bytes

_LONGEST, _DEEPEST = 60, 32


class Problem(NamedTuple):
    """One fault: where (a JSON pointer), which kind (a code), and what was found and would be right (a sentence)."""

    pointer: str
    code: str
    detail: str


class InputProblems(Exception):
    """A request body that cannot be answered; `problems` lists every fault found."""

    def __init__(self, problems):
        super().__init__("; ".join(f"{p.pointer or '/'}: {p.detail}" for p in problems))
        self.problems = problems


def escaped(key):
    """The key as a token of a JSON pointer (RFC 6901)."""
    return str(key).replace("~", "~0").replace("/", "~1")


def in_order(keys):
    """Keys of JSON objects in the order of their UTF-16 code units, which every runtime can sort by."""
    return sorted(keys, key=lambda key: key.encode("utf-16-be", "surrogatepass"))


def shown(value):
    """A value as it is quoted in a message: canonical JSON, shortened; what JSON cannot hold, or holds too deep, is not written out."""
    if not _held(value, 0):
        return "a value that cannot be written here"
    text = canonical_bytes(value).decode()
    return text if len(text) <= _LONGEST else text[:_LONGEST - 1] + "…"


def _held(value, depth):
    kind = type(value)
    if kind in (int, float):
        return -math.inf < as_binary64(value) < math.inf
    if kind is str:
        return value.isascii() or _is_whole(value)
    if kind in (list, dict):
        return depth < _DEEPEST and all(_held(v, depth + 1) for v in (value.values() if kind is dict else value)) and (kind is list or all(map(_is_whole, value)))
    return value is None or kind is bool


def _is_whole(text):
    """Whether no half of a surrogate pair stands alone in it."""
    return not any("\ud800" <= letter <= "\udfff" for letter in text)

"""What is wrong with a rule source, item by item, with the place and what would be right."""
from typing import NamedTuple


class Fault(NamedTuple):
    """One fault: file (relative to the source folder), line (1-based), what was found, what would be right."""

    file: str
    line: int
    found: str
    expected: str

    def __str__(self):
        return f"{self.file}:{self.line}: {self.found}; {self.expected}"


def nearest(name, known, most=4):
    """Names close to `name`, for a hint; all of them when they are few."""
    import difflib
    known = sorted(known)
    if len(known) <= 8:
        return ", ".join(known) or "none"
    return ", ".join(difflib.get_close_matches(name, known, most, 0.5)) or f"{len(known)} names, none close"

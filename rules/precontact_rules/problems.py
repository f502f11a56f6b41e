"""What is wrong with a request, item by item."""
import json
from typing import NamedTuple


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


def shown(value, longest=60):
    """A value as it is quoted in a message: JSON, shortened."""
    try:
        text = json.dumps(value, ensure_ascii=False)
    except (TypeError, ValueError, RecursionError):
        text = type(value).__name__
    return text if len(text) <= longest else text[:longest - 1] + "…"

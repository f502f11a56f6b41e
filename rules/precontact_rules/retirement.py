"""When a released rule set is no longer for new work, and why: data beside the releases, since the releases themselves never change.

`deprecated`: the date from which another rule set is advised. `sunset`: the date from which it must not be used for new checks; what it answered before can
be recomputed with it for ever.
"""
import json
from datetime import date

FILE = "retirement.json"
LANGUAGES = ("en", "es")
NONE = {"deprecated": None, "sunset": None, "because": None}


class RetirementFault(ValueError):
    """The retirement file says something that cannot be: where, what, and what would be right."""


def retirements(folder, versions):
    """{version: {"deprecated", "sunset", "because"}} for these released versions; `NONE` for one that is not retired. Raises RetirementFault."""
    path = folder / FILE
    rows = _rows(path) if path.exists() else {}
    for version, row in rows.items():
        if version not in versions:
            raise RetirementFault(f"{path}: {version!r} was never released; released: {', '.join(versions)}")
        _check(row, f"{path}: {version}")
    return {version: {**NONE, **rows.get(version, {})} for version in versions}


def _rows(path):
    try:
        rows = json.loads(path.read_bytes())
    except ValueError as error:
        raise RetirementFault(f"{path} is not JSON: {error}") from None
    if not isinstance(rows, dict):
        raise RetirementFault(f"{path} is not an object by version")
    return rows


def _check(row, place):
    if not isinstance(row, dict) or not {"deprecated", "because"} <= row.keys() <= NONE.keys():
        raise RetirementFault(f"{place} is not an object of deprecated, because and, where there is one, sunset")
    dates = [_date(row[name], f"{place}.{name}") for name in ("deprecated", "sunset") if row.get(name) is not None]
    if not dates or row["deprecated"] is None:
        raise RetirementFault(f"{place}.deprecated is null; the date from which another rule set is advised is right")
    if dates != sorted(dates):
        raise RetirementFault(f"{place}.sunset ({row['sunset']}) is before deprecated ({row['deprecated']})")
    because = row["because"]
    if not isinstance(because, dict) or because.keys() != set(LANGUAGES) or not all(isinstance(text, str) and text.strip() for text in because.values()):
        raise RetirementFault(f"{place}.because is not a text in each of {', '.join(LANGUAGES)}")


def _date(text, place):
    try:
        if len(text) != 10:
            raise ValueError
        return date.fromisoformat(text)
    except (TypeError, ValueError):
        raise RetirementFault(f"{place} is {text!r}; a date like 2027-01-31 is right") from None

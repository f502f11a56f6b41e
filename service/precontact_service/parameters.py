"""Query parameters: the few there are, and a refusal of every other, since an ignored misspelt pin would answer another question."""
from flask import request
from precontact_rules import Problem

from .problems import ProblemError


def query(*allowed):
    """The request's query parameters as a dict. Raises ProblemError for one that is not allowed or is given twice."""
    if not request.query_string:
        return {}
    faults = []
    for name, values in request.args.lists():
        if name not in allowed:
            takes = f"this address takes {', '.join(allowed)}" if allowed else "this address takes none"
            faults.append(Problem(f"?{name[:60]}", "unknown-parameter", f"not a parameter here; {takes}"))
        elif len(values) > 1:
            faults.append(Problem(f"?{name}", "duplicate-key", f"given {len(values)} times; once is right"))
    if faults:
        raise ProblemError("invalid-input", "The query cannot be used; `errors` lists every fault.", faults)
    return request.args.to_dict()


def edition_of_request(editions):
    """The edition that `?rule_set=` names, the latest without it."""
    named = query("rule_set").get("rule_set")
    edition = editions.pinned(named, "?rule_set")
    request.environ["precontact.edition"] = edition
    return edition

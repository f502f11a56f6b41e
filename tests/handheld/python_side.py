"""The Python engine's side of the comparison: what it says to a question, as canonical text."""
import hashlib
import json

from precontact_rules import InputProblems
from precontact_rules.canonical import canonical_bytes

from .questions import written


def said(rule_set, check, language, body):
    """Canonical bytes of the answer, or of the list of problems."""
    try:
        return canonical_bytes(rule_set.answer(check, body, language))
    except InputProblems as found:
        return canonical_bytes([p._asdict() for p in found.problems])


def line_of(rule_set, question):
    """(the question as one line of JSON with the digest of what Python says to it, what Python says)."""
    text = written(question.body)
    answer = said(rule_set, question.check, question.language, json.loads(text))
    head = json.dumps({"check": question.check, "language": question.language, "sha256": hashlib.sha256(answer).hexdigest()})
    return f'{head[:-1]},"body":{text}}}\n', answer


def again(rule_set, line):
    """(question, what Python says) of a line that line_of wrote."""
    question = json.loads(line)
    return question, json.loads(said(rule_set, question["check"], question["language"], question["body"]))


def differences(ours, theirs, path=""):
    """Yield (path, ours, theirs) wherever two JSON documents differ."""
    if isinstance(ours, dict) and isinstance(theirs, dict):
        for key in sorted(ours.keys() | theirs.keys()):
            if key not in ours or key not in theirs:
                yield f"{path}/{key}", shown(ours.get(key, "(nothing)")), shown(theirs.get(key, "(nothing)"))
            else:
                yield from differences(ours[key], theirs[key], f"{path}/{key}")
    elif isinstance(ours, list) and isinstance(theirs, list):
        if len(ours) != len(theirs):
            yield f"{path} (length)", len(ours), len(theirs)
        for i, (a, b) in enumerate(zip(ours, theirs)):
            yield from differences(a, b, f"{path}/{i}")
    elif type(ours) is bool or type(theirs) is bool or not isinstance(ours, (int, float)) or not isinstance(theirs, (int, float)):
        if ours != theirs or type(ours) is not type(theirs):
            yield path, shown(ours), shown(theirs)
    elif float(ours) != float(theirs):
        yield path, shown(ours), shown(theirs)


def shown(value):
    """A value as a difference is reported: a number with its bits."""
    if isinstance(value, (int, float)) and not isinstance(value, bool):
        return f"{value!r} = {float(value).hex()}"
    return json.dumps(value, ensure_ascii=False)

"""Worked cases: run each through the engine, compare with what must come out, and record the answer for proof on a device."""
import json

from ..problems import InputProblems

_KEYS = ("check", "about", "source", "input", "expect")


def prove(source, rule_set):
    """[case record, ...] in order of id. A case whose answer is not as expected is a fault. Entries that no case uses are faults too."""
    proved, used = [], set()
    for name, mapping in source.cases.items():
        source.keys(mapping, _KEYS, ("check", "about", "input", "expect"))
        if mapping.get("check") not in source.checks:
            source.fault(mapping.file, mapping.at("check"), f"the check {mapping.get('check')!r}", f"one of {', '.join(source.checks)}")
            continue
        _mentioned(mapping["input"], used)
        body = json.loads(json.dumps(mapping["input"]))      # as a caller's body would be: plain, without line numbers
        try:
            answer = rule_set.answer(mapping["check"], body)
        except InputProblems as problems:
            for problem in problems.problems:
                source.fault(mapping.file, mapping.at("input"), f"{problem.pointer}: {problem.detail}", "a valid input")
            continue
        _compare(source, mapping, answer)
        proved.append({"id": name, "check": mapping["check"], "about": mapping["about"], "source": mapping.get("source", ""), "input": body,
                       "answer": {"verdict": answer["verdict"], "findings": [f["code"] for f in answer["findings"]], "results": answer["results"]}})
    for kind, entries in source.entries.items():
        if not any(f.get("reference") == kind for f in _references(source)):
            continue         # reached as an axis, not by name
        for entry in entries:
            if entry not in used:
                source.fault(f"{source.kinds[kind]['folder']}/{entry}.yaml", 1, "no case uses this entry", f"a file cases/<id>.yaml whose input names {entry}")
    return proved


def _references(source):
    queue = [m for check in (*source.checks.values(), *source.parts.values()) for m in [check.get("inputs", {})]]
    while queue:
        for content in queue.pop().values():
            if isinstance(content, dict):
                yield content
                if isinstance(content.get("fields"), dict):
                    queue.append(content["fields"])


def _mentioned(value, used):
    if isinstance(value, dict):
        for inner in value.values():
            _mentioned(inner, used)
    elif isinstance(value, list):
        for inner in value:
            _mentioned(inner, used)
    elif isinstance(value, str):
        used.add(value)


def _compare(source, mapping, answer):
    expect = mapping["expect"]
    source.keys(expect, ("verdict", "findings", "results"), ("verdict",))
    if answer["verdict"] != expect.get("verdict"):
        codes = ", ".join(f["code"] for f in answer["findings"])
        source.fault(mapping.file, expect.at("verdict"), f"the verdict is {answer['verdict']} ({codes})", f"{expect.get('verdict')}")
    codes = [f["code"] for f in answer["findings"]]
    for code in expect.get("findings", []):
        if code not in codes:
            source.fault(mapping.file, expect.at("findings"), f"the findings are {', '.join(codes)}", f"{code} among them")
    results = expect.get("results", {})
    for key, wanted in results.items():
        if key not in answer["results"]:
            source.fault(mapping.file, results.at(key), f"no result {key!r}", f"one of {', '.join(answer['results'])}")
        else:
            _compare_result(source, mapping, results, key, wanted, answer["results"][key])


def _compare_result(source, mapping, results, key, wanted, found):
    if isinstance(wanted, list):
        if not isinstance(found, list) or len(found) != len(wanted):
            source.fault(mapping.file, results.at(key), f"{key} is {found}", f"a list of {len(wanted)}")
            return
        for one, other in zip(wanted, found):
            _compare_result(source, mapping, results, key, one, other)
        return
    source.keys(wanted, ("value", "low", "high", "within", "because", "id"))
    for part in ("value", "low", "high", "id"):
        if part not in wanted:
            continue
        value, target = found.get(part), wanted[part]
        number = isinstance(target, (int, float)) and not isinstance(target, bool)
        if number and ("within" not in wanted or "because" not in wanted):
            source.fault(mapping.file, wanted.line, f"{key} without a tolerance", "within, and because: why that much")
        fits = isinstance(value, (int, float)) and abs(value - target) <= wanted.get("within", 0) if number else value == target
        if not fits:
            source.fault(mapping.file, wanted.line, f"{key} {part} is {value!r}", f"{target!r}" + (f" within {wanted.get('within')}" if number else ""))

"""What changed between two rule sets, numerically."""
from ..problems import InputProblems


def contrasted(old, new):
    """Lines: constants, tables, entries and formulas that differ, then the worked cases of both whose answers move."""
    for what, before, after in ((name, _flat(old.data, name), _flat(new.data, name)) for name in ("constants", "tables", "entries", "checks")):
        for key in sorted(before.keys() | after.keys()):
            if before.get(key) != after.get(key):
                yield f"{what} {key}: {_shown(before.get(key))} -> {_shown(after.get(key))}{_percent(before.get(key), after.get(key))}"
    cases = {(c["check"], c["id"]): c for rule_set in (old, new) for c in rule_set.data["cases"]}
    for (check, name), case in sorted(cases.items()):
        for line in _moved(_answer(old, check, case["input"]), _answer(new, check, case["input"])):
            yield f"case {name}: {line}"


def _flat(data, name):
    """Leaf values by dotted path; formulas by name, prose left out."""
    found = {}

    def walk(value, path):
        if isinstance(value, dict):
            if "tree" in value and "name" in value:
                found[path] = value["text"]
                return
            for key, inner in value.items():
                if key not in ("meaning", "sentence", "text", "title", "because", "question"):
                    walk(inner, f"{path}.{key}" if path else key)
        elif isinstance(value, list):
            for place, inner in enumerate(value):
                label = inner.get("name") or inner.get("code") or place if isinstance(inner, dict) else place
                walk(inner, f"{path}.{label}")
        else:
            found[path] = value

    walk(data[name], "")
    return found


def _shown(value):
    return "nothing" if value is None else repr(value)


def _percent(before, after):
    numbers = all(isinstance(v, (int, float)) and not isinstance(v, bool) for v in (before, after))
    return f" ({100 * (after - before) / before:+.3g} %)" if numbers and before else ""


def _answer(rule_set, check, body):
    try:
        return rule_set.answer(check, body)
    except (InputProblems, KeyError) as error:
        return {"verdict": f"refused ({error})", "results": {}}


def _moved(before, after):
    if before["verdict"] != after["verdict"]:
        yield f"verdict {before['verdict']} -> {after['verdict']}"
    for key in sorted(before["results"].keys() | after["results"].keys()):
        a, b = before["results"].get(key), after["results"].get(key)
        if a != b:
            values = [r.get("value") if isinstance(r, dict) else r for r in (a, b)]
            yield f"{key} {_shown(values[0])} -> {_shown(values[1])}{_percent(*values)}"

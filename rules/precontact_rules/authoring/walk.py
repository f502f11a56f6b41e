"""One check on one input, in words and numbers, for people who edit rules."""
from ..phrase import number_text


def walked(rule_set, check, body, language="en"):
    """The lines of a readable working."""
    answer = rule_set.answer(check, body, language)
    units = rule_set.data["units"]
    yield f"{check} on rule set {answer['rule_set']['version']} ({answer['rule_set']['digest'][:19]}…)"
    yield f"verdict: {answer['verdict']}"
    for finding in answer["findings"]:
        yield f"  {finding['code']} ({finding['verdict']}): {finding['sentence']}"
    yield "results"
    for key, result in answer["results"].items():
        yield f"  {key}: {_result(result)}"
    yield "working"
    for step in answer["working"]:
        yield f"  {step['name']} = {step['formula']}"
        yield f"      = {_value(step['value'], step['unit'], units, language)}    [{step['source']}]"
    for title, lines in (("assumptions", answer["assumptions"]), ("cautions", answer["cautions"]), ("unverified", answer["unverified"])):
        yield title
        for line in lines:
            yield "  " + "; ".join(f"{k}: {v}" for k, v in line.items())


def _value(value, unit, units, language):
    if isinstance(value, dict):
        return " + j ".join(_value(value[p], unit, units, language) for p in ("re", "im"))
    if isinstance(value, list):
        return "[" + ", ".join(_value(v, unit, units, language) for v in value) + "]"
    if value is None or isinstance(value, (bool, str)) or unit is None:
        return str(value)
    return number_text(value * units[unit]["factor"], unit, units, language)


def _result(result):
    if isinstance(result, list):
        return "; ".join(_result(r) for r in result)
    text = ", ".join(f"{k} {v}" for k, v in result.items() if k not in ("value",))
    return f"{result.get('value')}" + (f" ({text})" if text else "")

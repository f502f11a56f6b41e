"""A rule set carries worked cases with their answers; a runtime that gives others must not be used."""


def first_wrong(rule_set, cases):
    """Id of the first of these cases that is not answered exactly as recorded, or None."""
    for case in cases:
        answer = rule_set.answer(case["check"], dict(case["input"]))
        found = {"verdict": answer["verdict"], "findings": [f["code"] for f in answer["findings"]], "results": answer["results"]}
        if found != case["answer"]:
            return case["id"]
    return None


def one_of_each(rule_set):
    """The first case of every check."""
    chosen = {}
    for case in rule_set.data["cases"]:
        chosen.setdefault(case["check"], case)
    return list(chosen.values())

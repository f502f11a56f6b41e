"""Documentation of the checks."""
from .operations import ACCEPT_LANGUAGE, ETAG_HEADER, LANGUAGE_HEADER, RETIREMENT_HEADERS, RULE_SET_HEADER, documented, found, pin_parameter, problems, unchanged
from .schemas import CheckDescription, CheckList

_ETAG = {"ETag": ETAG_HEADER}


def component(check, part):
    """Name of the component of a check's request or answer: loading-error -> LoadingErrorRequest."""
    return "".join(word.capitalize() for word in check.split("-")) + part


def listing(made, view, editions):
    """GET /v1/checks."""
    return documented(
        made, view, operationId="listChecks", summary="The questions that can be asked", description="Name, title and question of every check of the rule set.",
        parameters=[ACCEPT_LANGUAGE, pin_parameter(editions)],
        responses={**found("Names and questions", CheckList, headers={**_ETAG, "Content-Language": LANGUAGE_HEADER}), **unchanged(), **problems(422)})


def description(made, view, editions, name):
    """GET /v1/checks/<name>."""
    title = editions.latest.rule_set.data["checks"][name]["title"]["en"]
    return documented(
        made, view, operationId=component(name, "Description"), summary=f"{title}: what is asked and answered",
        description="Read from the rule set: inputs with units, ranges and choices, catalogue fields, results with their formulas, findings.",
        parameters=[pin_parameter(editions)],
        responses={**found("Inputs, results and findings", CheckDescription, headers=_ETAG), **unchanged(), **problems(422)})


def question(made, view, editions, name):
    """POST /v1/checks/<name>."""
    check = editions.latest.rule_set.data["checks"][name]
    answer = {"description": "The answer", "headers": {"Precontact-Rule-Set": RULE_SET_HEADER, "Content-Language": LANGUAGE_HEADER, **RETIREMENT_HEADERS},
              "content": {"application/json": {"schema": component(name, "Answer")}}}
    return documented(
        made, view, operationId=f"ask{component(name, '')}", summary=f"{check['title']['en']}: {check['question']['en']}",
        description="A pure function of its body: the same question to the same rule set has the same answer, byte for byte, so it may be repeated "
                    "freely. A number may be uncertain where its schema says so.",
        parameters=[ACCEPT_LANGUAGE],
        requestBody={"required": True, "content": {"application/json": {"schema": component(name, "Request")}}},
        responses={"200": answer, **problems(400, 413, 415, 422)})

"""Executed examples: each is sent to the application itself, and what comes back is what the document shows."""
import orjson

from precontact_rules.sealing import KeyRing

from ..seals import SEALS, Seals
from .operations import PROBLEM_NAMES

LONGEST = 20_000        # bytes of a response shown in the document; a longer one is shown by its address
FOLDER = "examples"     # beside the document, where it is served and where it is kept
_JSON = "application/json"


def add_examples(document, app, editions):
    """Put the examples into `document`, in place. Returns {case id: bytes} of those answers that it shows by address only."""
    client, apart = app.test_client(), {}
    # Whatever keys the server has, the document shows the seals of the key that everybody knows: its examples stay the same, and nobody mistakes them.
    sealed = {SEALS: Seals(KeyRing.example())}
    for path, item in document["paths"].items():
        if "get" in item:
            _add_get(item["get"], _filled(path, item["get"]), client, sealed)
    rule_set = editions.latest.rule_set
    for check in rule_set.check_names:
        apart.update(_add_questions(document["paths"][f"/v1/checks/{check}"]["post"], check, cases_shown(rule_set, check), client))
    _add_problems(document["components"]["responses"], rule_set, client)
    return apart


def cases_shown(rule_set, check):
    """The fewest cases, taken greedily in order of id, whose findings are all that the check's cases show."""
    cases = [case for case in rule_set.data["cases"] if case["check"] == check]
    missing = {code for case in cases for code in case["answer"]["findings"]}
    shown = []
    while missing:
        best = max(cases, key=lambda case: len(missing.intersection(case["answer"]["findings"])))
        shown.append(best)
        missing.difference_update(best["answer"]["findings"])
    return shown


def _filled(path, operation):
    for parameter in operation.get("parameters", ()):
        if parameter["in"] == "path":
            path = path.replace("{" + parameter["name"] + "}", parameter["example"])
    return path


def _add_get(operation, address, client, sealed):
    response = client.get(address, environ_overrides=sealed)
    _expect(response, 200, address)
    shown = {"externalValue": address} if len(response.data) > LONGEST else {"value": orjson.loads(response.data)}
    for media in operation["responses"]["200"]["content"].values():
        media["examples"] = {"answered": {"summary": f"GET {address}", **shown}}


def _add_questions(operation, check, cases, client):
    requests, responses, apart, verdicts = {}, {}, {}, set()
    for case in cases:
        name, verdict = case["id"], case["answer"]["verdict"]
        response = client.post(f"/v1/checks/{check}", data=orjson.dumps(case["input"]), content_type=_JSON)
        _expect(response, 200, name)
        requests[name] = {"summary": case["about"] if isinstance(case["about"], str) else case["about"]["en"], "value": case["input"]}
        responses[name] = {"summary": f"{verdict}: {', '.join(case['answer']['findings'])}"}
        if verdict in verdicts:
            responses[name]["externalValue"] = f"{FOLDER}/{name}.json"
            apart[name] = response.data
        else:                                # one whole answer for each verdict keeps the document readable
            responses[name]["value"] = orjson.loads(response.data)
            verdicts.add(verdict)
    if cases:
        operation["requestBody"]["content"][_JSON]["examples"] = requests
        operation["responses"]["200"]["content"][_JSON]["examples"] = responses
    return apart


def _add_problems(responses, rule_set, client):
    address = f"/v1/checks/{rule_set.check_names[0]}"
    tried = {
        400: client.post(address, data=b'{"a": 1, "a": 2}', content_type=_JSON),
        404: client.get("/v1/rule-sets/0.0.0"),
        412: client.get(f"/v1/rule-sets/{rule_set.version}", headers={"If-Match": '"sha-256:0"'}),
        413: client.post(address, data=b" " * 300_000, content_type=_JSON),
        415: client.post(address, data=b"a=1", content_type="application/x-www-form-urlencoded"),
        422: client.post(address, data=b"{}", content_type=_JSON),
    }
    for status, response in tried.items():
        _expect(response, status, status)
        for media in responses[PROBLEM_NAMES[status]]["content"].values():
            media["examples"] = {"answered": {"value": orjson.loads(response.data)}}


def _expect(response, status, what):
    if response.status_code != status:
        raise RuntimeError(f"the example {what} was answered {response.status_code}: {response.text[:300]}")

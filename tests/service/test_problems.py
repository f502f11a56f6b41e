"""Every error status is a problem document: typed, with an address that explains it, and with nothing of the inside."""
import json

import jsonschema
import pytest
from precontact_service.problem_types import TYPES

TRACE = "00-0af7651916cd43dd8448eb211c80319c-b7ad6b7169203331-01"
CHECK = "/v1/checks/loading-error"


def broken(app, monkeypatch):
    """Make the engine fail as no engine should."""
    def fail(*_):
        raise RuntimeError("the secret inside")

    express = app.wsgi_app._application
    monkeypatch.setattr(express._questions[CHECK], "_ask_latest", fail)


CALLS = {
    400: lambda client: client.post(CHECK, data=b"{", content_type="application/json", headers={"traceparent": TRACE}),
    404: lambda client: client.get("/v1/nowhere", headers={"traceparent": TRACE}),
    405: lambda client: client.delete(CHECK, headers={"traceparent": TRACE}),
    412: lambda client: client.get("/v1/rule-sets/1.0.0", headers={"traceparent": TRACE, "If-Match": '"other"'}),
    413: lambda client: client.post(CHECK, data=b" " * 300_000, content_type="application/json", headers={"traceparent": TRACE}),
    415: lambda client: client.post(CHECK, data=b"{}", content_type="text/plain", headers={"traceparent": TRACE}),
    422: lambda client: client.post(CHECK, data=b"{}", content_type="application/json", headers={"traceparent": TRACE}),
}


def check_problem(client, response, status):
    """What is true of every problem document."""
    assert response.status_code == status
    assert response.content_type == "application/problem+json"
    assert response.headers["Content-Language"] == "en"
    assert response.headers["Cache-Control"] == "no-store"
    assert "Precontact-Rule-Set" in response.headers
    problem = response.json
    assert problem["status"] == status
    assert problem["detail"]
    assert "Traceback" not in response.text and "File " not in response.text
    page = client.get(problem["type"])
    assert page.status_code == 200 and problem["title"] in page.text
    components = client.get("/v1/openapi.json").json["components"]
    jsonschema.validate(problem, {"$ref": "#/components/schemas/Problem", "components": components})
    return problem


@pytest.mark.parametrize("status", CALLS)
def test_status(client, status):
    problem = check_problem(client, CALLS[status](client), status)
    assert problem["traceparent"] == TRACE


def test_500_says_nothing_of_the_inside_and_logs_all_of_it(app, client, question, monkeypatch, capfd):
    assert client.get("/v1/openapi.json").status_code == 200        # made while the engine is whole
    broken(app, monkeypatch)
    response = client.post(question[0], json=question[1], headers={"traceparent": TRACE})
    problem = check_problem(client, response, 500)
    assert "secret" not in response.text
    assert problem["traceparent"] == TRACE
    logged = json.loads(capfd.readouterr().err.strip().splitlines()[-1])
    assert logged["event"] == "failure" and logged["traceparent"] == TRACE
    assert "the secret inside" in logged["error"] and any("_ask_latest" in line or "fail" in line for line in logged["traceback"])


def test_405_lists_what_is_allowed(client):
    response = client.put(CHECK, json={})
    assert set(response.headers["Allow"].split(", ")) == {"GET", "HEAD", "OPTIONS", "POST"}


@pytest.mark.parametrize("given", ["", "junk", TRACE.upper(), TRACE + "-more", "ff" + TRACE[2:], "00-" + "0" * 32 + TRACE[35:], TRACE[:36] + "0" * 16 + "-01", TRACE + "\u00e9"])
def test_an_invalid_trace_is_not_echoed(client, given):
    assert "traceparent" not in client.get("/v1/nowhere", headers={"traceparent": given.encode("latin-1").decode("latin-1")}).json


def test_unknown_kinds_of_problem_are_not_found(client):
    response = client.get("/problems/none-such")
    assert response.status_code == 404 and "invalid-input" in response.json["detail"]


@pytest.mark.parametrize("code", TYPES)
def test_every_kind_has_a_page(client, code):
    page = client.get(f"/problems/{code}")
    assert page.status_code == 200
    assert page.content_type.startswith("text/html")
    assert TYPES[code].meaning.split("`")[0][:30] in page.text.replace("&#39;", "'")

"""What every response carries, whatever it is."""
import re

import pytest
from precontact_service.door import SECURITY

PATHS = ("/", "/healthz", "/readyz", "/v1/checks", "/v1/rule-sets", "/v1/rule-sets/1.0.0/bundle", "/v1/catalogues/instruments", "/v1/openapi.json", "/problems/missing",
         "/style.css", "/v1/keys", "/v1/keys/seal", "/v1/rule-sets/1.0.0/seal", "/field/rule-set/latest.json", "/nowhere", "/v1/catalogues/nothing")


def check_headers(response, latest):
    """The security headers and the rule set, each exactly once."""
    for name, value in SECURITY:
        assert response.headers.getlist(name) == [value]
    assert response.headers.getlist("Precontact-Rule-Set") == [f'"{latest.version}"; digest="{latest.digest}"']


@pytest.mark.parametrize("path", PATHS)
def test_get(client, latest, path):
    check_headers(client.get(path), latest)


def test_answer_and_refusal(client, latest, question):
    check_headers(client.post(question[0], json=question[1]), latest)
    check_headers(client.post(question[0], json={}), latest)
    check_headers(client.delete("/v1/checks"), latest)
    check_headers(client.options("/v1/checks"), latest)


def test_the_content_policy_admits_nothing_from_elsewhere_and_no_script():
    policy = dict(SECURITY)["Content-Security-Policy"]
    assert "default-src 'none'" in policy and "script-src" not in policy and "unsafe" not in policy
    assert "frame-ancestors 'none'" in policy and not re.search(r"https?:|\*", policy)


def test_every_status_has_one_length_and_type(client):
    for path in PATHS:
        response = client.get(path)
        assert response.headers["Content-Length"] == str(len(response.data))
        assert len(response.headers.getlist("Content-Type")) == 1


def test_options_tells_the_methods(client):
    response = client.options("/v1/checks/loading-error")
    assert response.status_code == 200 and "POST" in response.headers["Allow"]

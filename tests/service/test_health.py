"""Alive checks nothing; ready answers known questions, and says so when the answers are wrong."""
import json

import pytest
from precontact_rules import released
from precontact_service import create_app
from precontact_service.known_answers import first_wrong, one_of_each


@pytest.fixture
def tampered(tmp_path, latest):
    """An application whose rule set records an answer that its engine does not give."""
    bundle = json.loads(latest.bytes)
    bundle["cases"][0]["answer"]["verdict"] = "undetermined" if bundle["cases"][0]["answer"]["verdict"] != "undetermined" else "acceptable"
    (tmp_path / "9.9.9.json").write_text(json.dumps({**bundle, "version": "9.9.9"}))
    (tmp_path / "index.json").write_text(json.dumps([{"version": "9.9.9", "digest": "sha-256:made-up"}]))
    return create_app(tmp_path, access_log=False)


def test_alive_and_ready(client, latest):
    assert client.get("/healthz").json == {"status": "alive"}
    assert client.get("/readyz").json == {"status": "ready", "rule_set": {"version": latest.version, "digest": latest.digest}}


def test_not_ready_when_a_known_answer_is_wrong(tampered, latest):
    client = tampered.test_client()
    assert client.get("/healthz").status_code == 200
    response = client.get("/readyz")
    assert response.status_code == 503
    assert response.content_type == "application/problem+json"
    assert response.json["type"] == "/problems/not-ready" and latest.data["cases"][0]["id"] in response.json["detail"]


def test_readiness_asks_every_check(latest):
    assert {case["check"] for case in one_of_each(latest)} == set(latest.check_names)


@pytest.mark.parametrize("row", released.listing(), ids=lambda row: row["version"])
def test_every_release_still_gives_every_recorded_answer(row):
    rule_set = released.load(row["digest"])
    assert first_wrong(rule_set, rule_set.data["cases"]) is None

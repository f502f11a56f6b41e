"""Every check answers its worked cases over HTTP; the same question has the same bytes, whichever way it takes."""
import hashlib
import json
import os
import subprocess
import sys

import pytest
from precontact_rules import released

CHECKS = ("loading-error", "device-trip", "loop-shift", "induced-voltage")
JSON = "application/json"

ASK_EVERYTHING = """
import hashlib, json
from precontact_rules import released
from precontact_service import create_app
client, digest = create_app(access_log=False).test_client(), hashlib.sha256()
for case in released.latest().data["cases"]:
    digest.update(client.post("/v1/checks/" + case["check"], json=case["input"]).data)
print(digest.hexdigest())
"""


def test_the_four_checks_are_there(client):
    listed = client.get("/v1/checks").json
    assert set(CHECKS) <= {check["name"] for check in listed["checks"]}
    assert all(client.get(check["href"]).status_code == 200 for check in listed["checks"])


@pytest.mark.parametrize("case", released.latest().data["cases"], ids=lambda case: case["id"])
def test_case_is_answered_as_recorded(client, case):
    response = client.post(f"/v1/checks/{case['check']}", json=case["input"])
    assert response.status_code == 200, response.text
    answer = response.json
    assert answer["verdict"] == case["answer"]["verdict"]
    assert [finding["code"] for finding in answer["findings"]] == case["answer"]["findings"]
    assert answer["results"] == case["answer"]["results"]


def test_an_answer_names_its_rule_set_in_body_and_header(client, question, latest):
    response = client.post(question[0], json=question[1])
    assert response.json["rule_set"] == {"version": latest.version, "digest": latest.digest}
    assert response.headers["Precontact-Rule-Set"] == f'"{latest.version}"; digest="{latest.digest}"'


def test_an_answer_carries_working_cautions_and_input_digest(client, question):
    answer = client.post(question[0], json=question[1]).json
    assert {"check", "input_digest", "verdict", "findings", "results", "working", "assumptions", "cautions", "unverified"} <= answer.keys()
    assert all(step["formula"] and step["source"] for step in answer["working"])
    assert answer["cautions"] and answer["cautions"][0]["word"] in ("danger", "warning", "caution", "notice")


def test_an_uncertain_number_gives_intervals(client, question):
    path, body = question
    body["source"]["resistance_ohm"] = {"value": 1000, "half_width_percent": 10}
    error = client.post(path, json=body).json["results"]["loading_error_percent"]
    assert error["low"] < error["value"] < error["high"]


@pytest.mark.parametrize("accepted, language", [
    (None, "en"), ("es", "es"), ("es-MX, en;q=0.5", "es"), ("de, es;q=0.3, en;q=0.2", "es"), ("fr", "en"), ("en, es;q=0.9", "en"), (";;=,", "en"), ("*", "en")])
def test_language(client, question, accepted, language):
    path, body = question
    response = client.post(path, json=body, headers={} if accepted is None else {"Accept-Language": accepted})
    assert response.headers["Content-Language"] == language
    assert "Accept-Language" in response.headers["Vary"]
    other = client.post(path, json=body, headers={"Accept-Language": "en" if language == "es" else "es"})
    assert response.json["cautions"][0]["text"] != other.json["cautions"][0]["text"]
    assert response.json["results"].keys() == other.json["results"].keys()


def test_the_same_question_twice_has_the_same_bytes(client, cases):
    for check, listed in cases.items():
        for case in listed[:10]:
            first, second = (client.post(f"/v1/checks/{check}", json=case["input"]).data for _ in range(2))
            assert first == second


def test_the_express_lane_and_the_long_way_give_the_same_bytes(client, cases):
    for check, listed in cases.items():
        for case in listed:
            raw = json.dumps(case["input"])
            express = client.post(f"/v1/checks/{check}", data=raw, content_type=JSON)
            long_way = client.post(f"/v1/checks/{check}", data=raw, content_type=JSON + "; charset=utf-8")
            assert express.data == long_way.data
            assert dict(express.headers) == dict(long_way.headers)


def test_two_processes_give_the_same_bytes():
    def digest(seed):
        made = subprocess.run([sys.executable, "-c", ASK_EVERYTHING], capture_output=True, text=True, check=True,
                              env={**os.environ, "PYTHONPATH": os.pathsep.join(sys.path), "PYTHONHASHSEED": seed})
        return made.stdout.strip()

    first, second = digest("1"), digest("2")
    assert first == second
    assert len(first) == hashlib.sha256().digest_size * 2


def test_the_order_of_keys_changes_nothing_but_the_order(client, question):
    path, body = question
    turned = dict(reversed(body.items()))
    assert client.post(path, json=body).data == client.post(path, data=json.dumps(turned), content_type=JSON).data


def test_null_means_absent(client, question):
    path, body = question
    with_null = client.post(path, json={**body, "limit_percent": None, "rule_set": None}).json
    without = client.post(path, json=body).json
    assert with_null["results"] == without["results"]


def test_no_answer_calls_anything_safe_or_dead(client, cases):
    for check, listed in cases.items():
        for case in listed:
            for language, words in (("en", ("is dead", "is safe", "safe to")), ("es", ("está muerto", "es seguro", "sin tensión confirmada"))):
                answer = client.post(f"/v1/checks/{check}", json=case["input"], headers={"Accept-Language": language}).json
                said = " ".join(finding["sentence"].lower() for finding in answer["findings"])
                assert not any(word in said for word in words), said

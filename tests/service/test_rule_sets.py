"""Released rule sets: exact bytes under their digest, validators that hold, and pins."""
import base64
import hashlib

import pytest
from precontact_rules import released

ROWS = released.listing()


@pytest.mark.parametrize("name", [name for row in ROWS for name in (row["version"], row["digest"])])
def test_the_bundle_is_the_bytes_of_its_digest(client, name):
    row = next(row for row in ROWS if name in row.values())
    response = client.get(f"/v1/rule-sets/{name}/bundle")
    assert response.status_code == 200
    assert response.data == (released.FOLDER / f"{row['version']}.json").read_bytes()
    sha256 = hashlib.sha256(response.data)
    assert row["digest"] == f"sha-256:{sha256.hexdigest()}"
    assert response.headers["ETag"] == f'"{row["digest"]}"'
    assert response.headers["Repr-Digest"] == f"sha-256=:{base64.b64encode(sha256.digest()).decode()}:"
    assert "immutable" in response.headers["Cache-Control"] and "max-age=31536000" in response.headers["Cache-Control"]
    assert response.headers["Precontact-Rule-Set"] == f'"{row["version"]}"; digest="{row["digest"]}"'
    assert response.content_type == "application/json"


def test_the_list_and_each_of_its_addresses(client):
    listed = client.get("/v1/rule-sets").json
    assert [(row["version"], row["digest"]) for row in listed["rule_sets"]] == [(row["version"], row["digest"]) for row in ROWS]
    assert listed["latest"] == ROWS[-1]["version"]
    for row in listed["rule_sets"]:
        one = client.get(row["href"]).json
        assert one["digest"] == row["digest"]
        assert len(client.get(one["bundle"]["href"]).data) == one["bundle"]["bytes"]


@pytest.mark.parametrize("path", ["/v1/rule-sets", "/v1/rule-sets/1.0.0", "/v1/rule-sets/1.0.0/bundle", "/v1/catalogues", "/v1/catalogues/instruments",
                                  "/v1/checks", "/v1/checks/loading-error", "/v1/keys", "/v1/keys/seal", "/v1/rule-sets/1.0.0/seal",
                                  "/field/rule-set/latest.json", "/field/rule-set/1.0.0.json", "/field/rule-set/keys.json", "/v1/openapi.json", "/", "/style.css"])
def test_conditional_requests(client, path):
    plain = client.get(path)
    etag = plain.headers["ETag"]
    assert etag.startswith('"sha-256:') and client.get(path).data == plain.data
    for matching in (etag, f'"other", {etag}', f"W/{etag}", "*"):
        unchanged = client.get(path, headers={"If-None-Match": matching})
        assert unchanged.status_code == 304 and not unchanged.data
        assert unchanged.headers["ETag"] == etag
    assert client.get(path, headers={"If-None-Match": '"other"'}).status_code == 200
    assert client.get(path, headers={"If-Match": etag}).status_code == 200
    assert client.get(path, headers={"If-Match": "*"}).status_code == 200
    assert client.get(path, headers={"If-Match": '"other"'}).status_code == 412
    assert client.get(path, headers={"If-Match": f"W/{etag}"}).status_code == 412


def test_head_has_the_headers_and_no_body(client):
    head, get = client.head("/v1/rule-sets/1.0.0/bundle"), client.get("/v1/rule-sets/1.0.0/bundle")
    assert not head.data and head.headers["Content-Length"] == str(len(get.data)) and head.headers["ETag"] == get.headers["ETag"]


@pytest.mark.parametrize("path", ["/v1/rule-sets/0.0.0", "/v1/rule-sets/0.0.0/bundle", "/v1/rule-sets/sha-256:0"])
def test_an_unknown_rule_set_lists_what_is_released(client, path):
    response = client.get(path)
    assert response.status_code == 404
    assert ROWS[-1]["version"] in response.json["detail"] and ROWS[-1]["digest"] in response.json["detail"]


@pytest.mark.parametrize("name", [ROWS[-1]["version"], ROWS[-1]["digest"]])
def test_a_pinned_question_has_the_answer_of_that_rule_set(client, question, name):
    path, body = question
    pinned, free = client.post(path, json={**body, "rule_set": name}), client.post(path, json=body)
    assert pinned.data == free.data          # the pin is no part of the question
    assert pinned.headers["Precontact-Rule-Set"] == free.headers["Precontact-Rule-Set"]


def test_a_pinned_catalogue(client):
    response = client.get("/v1/catalogues/instruments", query_string={"rule_set": ROWS[0]["digest"]})
    assert response.json["rule_set"]["digest"] == ROWS[0]["digest"]

"""Seals over HTTP: what is served verifies, says which keys made it, and says loudly when they are made up."""
import json

import pytest
from precontact_rules import released, sealing
from precontact_service import create_app
from precontact_service.seals import Seals
from serving import raw, served

JOSE = "application/jose+json"


@pytest.fixture(scope="module")
def key_file(tmp_path_factory):
    """(path of a key file with two valid keys and a revoked one, its kids in that order)."""
    from precontact_rules.sealing import key_file
    path = tmp_path_factory.mktemp("keys") / "keys.json"
    revoked, first, second = key_file.make(path), key_file.add(path), key_file.add(path)
    key_file.revoke(path, revoked, "made for the test")
    return path, [first, second, revoked]


@pytest.fixture(scope="module")
def keyed(key_file):
    """A client of a service with that key file."""
    return create_app(access_log=False, seals=Seals(sealing.KeyRing.read(key_file[0]))).test_client()


def test_what_is_served_verifies(keyed, key_file):
    _, (first, second, revoked) = key_file
    keys = sealing.KeyList.read(keyed.get("/v1/keys").data)
    assert list(keys.keys) == [first, second] and keys.revoked == {revoked: "made for the test"} and keys.serial == 4 and not keys.development
    sealing.check(keys.bytes, keyed.get("/v1/keys/seal").data, keys, sealing.KEYS)
    one = keyed.get("/v1/rule-sets/1.0.0").json
    assert one["seal"] == {"href": "/v1/rule-sets/1.0.0/seal", "keys": "/v1/keys"}
    bundle, seal = keyed.get(one["bundle"]["href"]).data, keyed.get(one["seal"]["href"])
    assert seal.content_type == JOSE and keyed.get("/v1/keys/seal").content_type == JOSE
    assert sealing.opened(bundle, seal.data, keys).digest == one["digest"]
    assert len(seal.json["signatures"]) == 2
    assert keyed.get(f"/v1/rule-sets/{one['digest']}/seal").data == seal.data


def test_no_private_key_is_ever_served(keyed, key_file):
    secrets = [jwk["d"] for jwk in json.loads(key_file[0].read_text())["keys"]]
    for path in ("/v1/keys", "/v1/keys/seal", "/v1/rule-sets/1.0.0/seal", "/field/rule-set/keys.json", "/v1/openapi.json", "/"):
        text = keyed.get(path).text
        assert not any(secret in text for secret in secrets), path


def test_the_document_is_the_same_whatever_the_keys(keyed, client):
    assert keyed.get("/v1/openapi.json").data == client.get("/v1/openapi.json").data
    assert sealing.EXAMPLE["x"] in keyed.get("/v1/openapi.json").text


def test_a_development_key_is_one_for_all_workers_and_says_so(tmp_path, monkeypatch):
    monkeypatch.delenv("PRECONTACT_KEYS", raising=False)
    monkeypatch.setenv("WEB_CONCURRENCY", "3")
    ask = b"GET /v1/keys HTTP/1.1\r\nHost: x\r\n\r\n"
    with served(tmp_path / "errors") as (port, _):
        answers = {raw(port, ask)[2] for _ in range(12)}
    assert len(answers) == 1 and json.loads(answers.pop())["development"] is True
    said = [json.loads(line) for line in (tmp_path / "errors").read_text().splitlines()]
    assert [line["event"] for line in said].count("development-key") == 1
    assert "DEVELOPMENT KEY" in next(line["warning"] for line in said if line["event"] == "development-key")


def test_a_key_file_is_used_and_its_keys_are_named_in_the_log(tmp_path, monkeypatch, key_file):
    path, (first, second, revoked) = key_file
    monkeypatch.setenv("PRECONTACT_KEYS", str(path))
    with served(tmp_path / "errors") as (port, _):
        keys = sealing.KeyList.read(raw(port, b"GET /v1/keys HTTP/1.1\r\nHost: x\r\n\r\n")[2])
    assert list(keys.keys) == [first, second] and not keys.development
    said = next(line for line in map(json.loads, (tmp_path / "errors").read_text().splitlines()) if line["event"] == "keys")
    assert said["keys"] == [first, second] and said["revoked"] == [revoked]
    assert json.loads(path.read_text())["keys"][0]["d"] not in (tmp_path / "errors").read_text()


def test_a_key_file_that_cannot_be_used_ends_the_start_in_one_line(tmp_path, monkeypatch):
    monkeypatch.setenv("PRECONTACT_KEYS", str(tmp_path / "none.json"))
    with pytest.raises(RuntimeError), served(tmp_path / "errors"):
        pass
    line, = (tmp_path / "errors").read_text().splitlines()
    assert json.loads(line)["event"] == "not-started" and "none.json" in json.loads(line)["because"]


@pytest.mark.parametrize("path", ["/v1/rule-sets/1.0.0/bundle", "/field/rule-set/1.0.0.json"])
def test_the_bundle_travels_compressed_where_that_is_accepted(client, path):
    import gzip
    exact = (released.FOLDER / "1.0.0.json").read_bytes()
    plain, small = client.get(path), client.get(path, headers={"Accept-Encoding": "br, gzip"})
    assert plain.data == exact and "Content-Encoding" not in plain.headers
    assert small.headers["Content-Encoding"] == "gzip" and gzip.decompress(small.data) == exact and len(small.data) * 8 < len(exact)
    assert plain.headers["Vary"] == small.headers["Vary"] == "Accept-Encoding"
    assert plain.headers["ETag"] != small.headers["ETag"] and plain.headers["Repr-Digest"] != small.headers["Repr-Digest"]
    for accepted in ("gzip;q=0", "identity", "gzip;q=0.5, identity", "*;q=0", "br"):
        assert client.get(path, headers={"Accept-Encoding": accepted}).data == exact, accepted
    for accepted in ("gzip", "*", "gzip, identity", "identity;q=0.5, gzip"):
        assert client.get(path, headers={"Accept-Encoding": accepted}).headers.get("Content-Encoding") == "gzip", accepted


@pytest.mark.parametrize("path", ["/v1/rule-sets/1.0.0/bundle", "/field/rule-set/1.0.0.json"])
def test_whoever_holds_one_form_is_asked_about_that_form(client, path):
    plain, small = client.get(path).headers["ETag"], client.get(path, headers={"Accept-Encoding": "gzip"}).headers["ETag"]
    for held in (plain, small):
        unchanged = client.get(path, headers={"If-None-Match": held, "Accept-Encoding": "gzip"})
        assert unchanged.status_code == 304 and unchanged.headers["ETag"] == held and "Content-Encoding" not in unchanged.headers
        assert client.get(path, headers={"If-Match": held, "Accept-Encoding": "gzip"}).headers["ETag"] == held
    assert client.get(path, headers={"If-None-Match": small}).status_code == 200          # not accepted any more: the plain bytes are sent
    assert client.get(path, headers={"If-Match": small}).status_code == 412

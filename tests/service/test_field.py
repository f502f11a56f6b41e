"""What a phone fetches under /field/: the page, its runtime, and the sealed rule sets, with the headers that they need."""
import json
import re
import shutil

import pytest
from precontact_rules import released, sealing
from precontact_rules.sealing import field
from precontact_service import create_app
from precontact_service.door import FIELD_POLICY

PAGE = {"index.html": "<!doctype html><title>x</title>", "worker.js": "self", "look.css": "b {}",
        "app.webmanifest": "{}", "mark.svg": "<svg/>", "sub/part.js": "export {}"}
TYPES = {"html": "text/html", "js": "text/javascript", "css": "text/css",
         "webmanifest": "application/manifest+json", "svg": "image/svg+xml", "json": "application/json"}
BECAUSE = {"en": "1.1.0 is stricter", "es": "1.1.0 es más estricta"}


@pytest.fixture
def made_up(tmp_path, monkeypatch):
    """A client of a service whose page is made up, so that these tests stand without the real one."""
    for name, text in PAGE.items():
        path = tmp_path / "page" / name
        path.parent.mkdir(parents=True, exist_ok=True)
        path.write_text(text)
    (tmp_path / "index.js").write_text("export {}")
    page = field.page_files(tmp_path)
    monkeypatch.setattr(field, "page_files", lambda: page)
    return create_app(access_log=False).test_client()


def test_every_file_of_the_folder_is_served_as_what_it_is(made_up):
    for name, text in {**PAGE, "runtime/index.js": "export {}"}.items():
        response = made_up.get(f"/field/{name}")
        assert response.status_code == 200 and response.text == text
        assert response.mimetype == TYPES[name.rsplit(".", 1)[1]]
        assert response.headers["Cache-Control"] == "no-cache" and response.headers["X-Content-Type-Options"] == "nosniff"
        assert response.headers.getlist("Content-Security-Policy") == [FIELD_POLICY]
        unchanged = made_up.get(f"/field/{name}", headers={"If-None-Match": response.headers["ETag"]})
        assert unchanged.status_code == 304 and unchanged.headers.getlist("Content-Security-Policy") == [FIELD_POLICY]
    assert made_up.get("/field/").text == PAGE["index.html"]
    assert made_up.get("/field/?from=home").status_code == 200


def test_the_page_of_the_api_leads_to_the_page_where_there_is_one(made_up):
    assert '<a href="/field/">' in made_up.get("/").text


def test_the_address_without_its_slash_leads_to_the_page(client):
    response = client.get("/field")
    assert response.status_code == 308 and response.headers["Location"] == "/field/"


@pytest.mark.parametrize("path", ["none.js", "../index.js", "%2e%2e/index.js", "runtime/none.js", "runtime/package.json",
                                  "rule-set/9.9.9.json", "rule-set/9.9.9.seal.json", "rule-set/", "page/index.html"])
def test_nothing_else_is_served(made_up, path):
    response = made_up.get(f"/field/{path}")
    assert response.status_code == 404 and response.content_type == "application/problem+json"


def test_the_runtime_is_served_as_it_is_in_the_folder():
    files = {name: path.read_bytes() for name, path in field.page_files().items() if name.startswith("runtime/")}
    client = create_app(access_log=False).test_client()          # made now: a service keeps what it read at its start
    assert files
    for name, content in files.items():
        response = client.get(f"/field/{name}")
        assert response.data == content and response.mimetype == "text/javascript"


def test_the_policy_admits_its_own_files_alone():
    assert FIELD_POLICY.startswith("default-src 'none'; script-src 'self';")
    assert set(re.findall(r"(?:'[^']+'|\S+:\S*|\*)", FIELD_POLICY)) == {"'none'", "'self'"}


def test_the_rule_set_files_are_those_of_a_static_export(client, app):
    latest = client.get("/field/rule-set/latest.json")
    assert latest.headers["Cache-Control"] == "no-cache"
    bundle, seal = (client.get(f"/field/rule-set/{latest.json[part]}") for part in ("bundle", "seal"))
    keys = sealing.KeyList.read(client.get("/field/rule-set/keys.json").data)
    assert sealing.opened(bundle.data, seal.data, keys).digest == latest.json["digest"] == bundle.headers["ETag"].strip('"')
    sealing.check(keys.bytes, client.get("/field/rule-set/keys.seal.json").data, keys, sealing.KEYS)
    assert "immutable" in bundle.headers["Cache-Control"]
    assert seal.headers["Cache-Control"] == "no-cache" and seal.content_type == "application/jose+json"
    assert "Deprecation" not in bundle.headers and "Sunset" not in bundle.headers
    ring = sealing.KeyRing.example()
    from precontact_service.seals import Seals
    exported, served = field.rule_set_files(ring), create_app(access_log=False, seals=Seals(ring)).test_client()
    for name, content in exported.items():
        assert served.get(f"/field/{name}").data == content, name


@pytest.fixture(scope="module")
def retired(tmp_path_factory):
    """A client of a service whose only rule set is retired."""
    folder = tmp_path_factory.mktemp("released")
    for path in released.FOLDER.glob("*.json"):
        shutil.copy(path, folder)
    version = released.listing()[-1]["version"]
    (folder / "retirement.json").write_text(json.dumps({version: {"deprecated": "2026-12-01", "sunset": "2027-06-01", "because": BECAUSE}}))
    return create_app(folder, access_log=False).test_client()


def test_a_retired_rule_set_says_so_wherever_it_speaks(retired, question):
    path, body = question
    version = released.listing()[-1]["version"]
    for response in (retired.get(f"/v1/rule-sets/{version}"), retired.get(f"/v1/rule-sets/{version}/bundle"), retired.get(f"/field/rule-set/{version}.json"),
                     retired.post(path, json=body), retired.post(path, json={**body, "rule_set": version}),
                     retired.post(path, json=body, content_type="application/json; charset=utf-8")):
        assert response.status_code == 200
        assert response.headers.getlist("Deprecation") == ["@1796083200"]                         # RFC 9745
        assert response.headers.getlist("Sunset") == ["Tue, 01 Jun 2027 00:00:00 GMT"]             # RFC 8594
    said = {"deprecated": "2026-12-01", "sunset": "2027-06-01", "because": BECAUSE}
    one, listed, latest = (retired.get(path).json for path in (f"/v1/rule-sets/{version}", "/v1/rule-sets", "/field/rule-set/latest.json"))
    for shown in (one, listed["rule_sets"][-1], latest):
        assert {name: shown[name] for name in said} == said
    for path in ("/v1/rule-sets", "/", "/healthz", "/v1/checks"):
        assert "Deprecation" not in retired.get(path).headers, path


def test_a_rule_set_that_is_not_retired_says_nothing(client, question):
    response = client.post(question[0], json=question[1])
    assert "Deprecation" not in response.headers and "Sunset" not in response.headers
    assert client.get("/v1/rule-sets").json["rule_sets"][-1]["deprecated"] is None


def test_the_answer_of_a_retired_rule_set_is_the_same(retired, client, question):
    assert retired.post(question[0], json=question[1]).data == client.post(question[0], json=question[1]).data

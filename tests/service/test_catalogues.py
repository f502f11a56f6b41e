"""Catalogues: every kind, every entry, every value with its origin, and data that a question takes back."""
import pytest


def test_every_kind_is_a_catalogue(client, latest):
    listed = client.get("/v1/catalogues").json["catalogues"]
    assert {row["name"] for row in listed} == {kind["folder"] for kind in latest.data["kinds"].values()}
    assert {"instruments", "devices", "cables", "conductors"} <= {row["name"] for row in listed}
    for row in listed:
        entries = client.get(row["href"]).json["entries"]
        assert len(entries) == row["entries"] > 0
        assert [entry["id"] for entry in entries] == sorted(entry["id"] for entry in entries)


def test_every_entry_has_an_address_and_every_number_an_origin(client):
    for row in client.get("/v1/catalogues").json["catalogues"]:
        for entry in client.get(row["href"]).json["entries"]:
            alone = client.get(f"{row['href']}/{entry['id']}").json
            assert {key: alone[key] for key in entry} == entry
            numbers = {key for key, value in entry["data"].items() if isinstance(value, (int, float, dict, list)) and not isinstance(value, bool)}
            assert numbers == entry["origins"].keys()
            assert all(origin["source"] and origin["standing"] for origin in entry["origins"].values())


def test_titles_follow_the_language(client):
    english, spanish = (client.get("/v1/catalogues/instruments", headers={"Accept-Language": language}) for language in ("en", "es"))
    assert spanish.headers["Content-Language"] == "es" and english.headers["ETag"] != spanish.headers["ETag"]
    assert [entry["title"] for entry in english.json["entries"]] != [entry["title"] for entry in spanish.json["entries"]]


def test_the_data_of_an_entry_is_its_id_in_other_words(client, question):
    path, body = question
    for entry in client.get("/v1/catalogues/instruments").json["entries"]:
        by_id, by_data = (client.post(path, json={**body, "instrument": named}) for named in (entry["id"], entry["data"]))
        assert by_id.status_code == by_data.status_code == 200, by_data.text
        for key, result in by_id.json["results"].items():
            if isinstance(result.get("value"), float):
                # a value with a spread in percent is rounded once more on its way through the unit of its key
                assert by_data.json["results"][key]["value"] == pytest.approx(result["value"], rel=1e-12), (entry["id"], key)
            else:
                assert by_data.json["results"][key].get("value") == result.get("value"), (entry["id"], key)


@pytest.mark.parametrize("path, words", [("/v1/catalogues/wands", "instruments"), ("/v1/catalogues/instruments/wand", "/v1/catalogues/instruments")])
def test_what_is_not_there(client, path, words):
    response = client.get(path)
    assert response.status_code == 404 and words in response.json["detail"]


def test_a_check_is_described(client, latest):
    for name in latest.check_names:
        described = client.get(f"/v1/checks/{name}").json
        assert described["name"] == name
        assert described["inputs"] and described["results"] and described["findings"]
        assert described["rule_set"]["digest"] == latest.digest

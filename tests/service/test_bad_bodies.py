"""Bad input, item by item: each is refused with the place, what was found, and what would be right."""
import json

import pytest

PATH = "/v1/checks/loading-error"
JSON = "application/json"
GOOD = {"circuit": "thevenin", "source": {"voltage_volt": 12, "resistance_ohm": 1000}, "instrument": "multimeter-dc-volts"}


def with_source(**members):
    """The good body with other members in its source."""
    return json.dumps({**GOOD, "source": {**GOOD["source"], **members}})


def with_body(**members):
    """The good body with other members."""
    return json.dumps({**GOOD, **members})


def string_of(count):
    """A string of so many elements whose resistance and reactance are both uncertain; the supply's resistance is uncertain too."""
    part = {"resistance_ohm": {"value": 100, "half_width": 1}, "reactance_ohm": {"value": 10, "standard_uncertainty": 1}, "measured": False}
    return json.dumps({"circuit": "series-string", "elements": [*[part] * (count - 1), {**part, "measured": True}], "instrument": "multimeter-ac-volts",
                       "frequency_hertz": 50, "supply": {"voltage_volt": 12, "resistance_ohm": {"between": [1, 2]}}})


# what it is: (body, status, pointer, code, words of the detail)
BAD = {
    "unknown field": (with_body(colour="red"), 422, "/colour", "unknown-field", ("colour", "circuit")),
    "unknown nested field": (with_source(tension_volt=1), 422, "/source/tension_volt", "unknown-field", ("tension_volt", "voltage_volt")),
    "wrong type": (with_body(source=[1]), 422, "/source", "wrong-type", ("[1]", "object")),
    "number in quotes": (with_source(voltage_volt="12"), 422, "/source/voltage_volt", "wrong-type", ('"12"', "volt")),
    "boolean for a number": (with_source(voltage_volt=True), 422, "/source/voltage_volt", "wrong-type", ("true", "volt")),
    "NaN": ('{"circuit": "thevenin", "source": {"voltage_volt": NaN}}', 400, "/source/voltage_volt", "not-finite", ("NaN", "finite")),
    "infinity": ('{"source": {"voltage_volt": -Infinity}}', 400, "/source/voltage_volt", "not-finite", ("-Infinity",)),
    "beyond binary64": ('{"source": {"voltage_volt": 1e999}}', 400, "/source/voltage_volt", "not-finite", ("1e999", "1.8e308")),
    "duplicate key": ('{"circuit": "thevenin", "circuit": "divider"}', 400, "/circuit", "duplicate-key", ("more than once",)),
    "nested duplicate key": ('{"a": [{"b/c": 1, "b/c": 2}]}', 400, "/a/0/b~1c", "duplicate-key", ("more than once",)),
    "duplicate key hidden by an escape": (r'{"circuit": "thevenin", "c\u0069rcuit": "divider"}', 400, "/circuit", "duplicate-key", ()),
    "duplicate key beside an escaped colon": (r'{"a": "\u003a", "b": 1, "b": 2}', 400, "/b", "duplicate-key", ()),
    "duplicate key with colons in the lost value": ('{"a": "::", "a": "x"}', 400, "/a", "duplicate-key", ()),
    "10 000 deep": ("[" * 10_000 + "]" * 10_000, 400, "", "too-deep", ("byte 32", "32 deep")),
    "10 000 deep and never closed": ('{"a":' * 10_000, 400, "", "too-deep", ("33",)),
    "33 deep": ('{"a":' * 33 + "1" + "}" * 33, 400, "", "too-deep", ("33", "32")),
    "5 000-digit integer": ('{"source": {"voltage_volt": ' + "7" * 5000 + "}}", 400, "/source/voltage_volt", "not-finite", ("5000 digits",)),
    "integer beyond 2^53": (with_source(resistance_ohm=2 ** 53 + 2), 422, "/source/resistance_ohm", "out-of-range", ("9007199254740994",)),
    "integer beyond 2^64": (with_source(resistance_ohm=2 ** 70), 422, "/source/resistance_ohm", "out-of-range", ("1.1805916207174113e+21",)),      # as RFC 8785 writes it
    "more uncertain numbers than the point set has dimensions": (
        string_of(32), 422, "/elements/31/reactance_ohm", "too-many-uncertain", ("65", "64")),
    "bad UTF-8": (b'{"circuit": "\xff"}', 400, "", "not-utf-8", ("byte 13", "0xff")),
    "half a surrogate pair": (r'{"circuit": "\ud800"}', 400, "", "not-json", ("line 1", "surrogate")),
    "byte order mark": (b"\xef\xbb\xbf{}", 400, "", "byte-order-mark", ("byte order mark",)),
    "empty body": (b"", 400, "", "empty-body", ("empty",)),
    "blank body": (b" \n ", 400, "", "empty-body", ("empty",)),
    "not JSON": ('{"circuit": thevenin}', 400, "", "not-json", ("line 1, column 13",)),
    "two values": ("{} {}", 400, "", "not-json", ("line 1, column 4",)),
    "trailing comma": ('{"circuit": "thevenin",}', 400, "", "not-json", ("line 1",)),
    "a list": ("[]", 422, "", "wrong-type", ("[]", "object")),
    "a number": ("1e20", 422, "", "wrong-type", ("object",)),
    "null": ("null", 422, "", "wrong-type", ("null", "object")),
    "unknown instrument": (with_body(instrument="crystal-ball"), 422, "/instrument", "unknown-id", ("crystal-ball", "/v1/catalogues/instruments")),
    "unknown instrument with overrides": (with_body(instrument={"id": "crystal-ball"}), 422, "/instrument/id", "unknown-id", ("crystal-ball",)),
    "unknown rule set": (with_body(rule_set="0.0.0"), 422, "/rule_set", "unknown-id", ("0.0.0", "1.0.0")),
    "rule set of the wrong type": (with_body(rule_set=1), 422, "/rule_set", "wrong-type", ("1.0.0",)),
    "negative resistance": (with_source(resistance_ohm=-1), 422, "/source/resistance_ohm", "out-of-range", ("-1", "at least 0")),
    "unknown choice": (with_body(circuit="star"), 422, "/circuit", "unknown-choice", ("star", "thevenin")),
    "contradictory choices": (with_body(supply={"voltage_volt": 5}), 422, "/supply", "not-applicable", ("thevenin", "divider")),
    "missing field": ('{"circuit": "thevenin", "source": {}}', 422, "/instrument", "missing", ()),
    "two spreads": (with_source(voltage_volt={"value": 12, "half_width": 1, "standard_uncertainty": 1}), 422, "/source/voltage_volt", "two-spreads",
                    ("half_width", "standard_uncertainty")),
    "value and between": (with_source(voltage_volt={"value": 12, "between": [1, 2]}), 422, "/source/voltage_volt/value", "two-spreads", ("between",)),
    "spread where none is possible": (with_body(contact_time_second={"value": 5, "half_width": 1}), 422, "/contact_time_second", "not-uncertain", ("second",)),
    "negative spread": (with_source(voltage_volt={"value": 12, "half_width": -1}), 422, "/source/voltage_volt/half_width", "out-of-range", ("-1",)),
    "too many items": (with_body(thresholds=[{"voltage_volt": 1, "acts": "rising"}] * 999), 422, "/thresholds", "too-many-items", ("999",)),
    "unprintable label": (with_body(thresholds=[{"label": "a\u0000b", "voltage_volt": 1, "acts": "rising"}]), 422, "/thresholds/0/label", "bad-characters", ()),
}


@pytest.mark.parametrize("name", BAD)
def test_bad_body(client, name):
    body, status, pointer, code, words = BAD[name]
    response = client.post(PATH, data=body, content_type=JSON)
    assert response.status_code == status, response.text
    assert response.content_type == "application/problem+json"
    faults = [fault for fault in response.json["errors"] if fault["pointer"] == pointer and fault["code"] == code]
    assert len(faults) == 1, response.json["errors"]
    assert all(word in faults[0]["detail"] for word in words), faults[0]
    assert client.get(f"/problems/{code}").status_code == 200


def test_every_fault_is_listed_at_once(client):
    body = {"circuit": "thevenin", "source": {"voltage_volt": "x", "resistance_ohm": -1}, "instrument": "none-such", "extra": 1}
    pointers = {fault["pointer"] for fault in client.post(PATH, json=body).json["errors"]}
    assert {"/source/voltage_volt", "/source/resistance_ohm", "/instrument", "/extra"} <= pointers


def test_what_is_shown_of_a_value_is_short(client):
    response = client.post(PATH, json={**GOOD, "circuit": "x" * 100_000})
    assert response.status_code == 422
    assert len(response.data) < 2000


@pytest.mark.parametrize("body", [
    b'{"circuit":"thevenin","source":{"voltage_volt":1.2e1,"resistance_ohm":1e3},"instrument":"multimeter-dc-volts"}',
    b' {"circuit": "th\\u0065venin", "source": {"voltage_volt": 12.0, "resistance_ohm": 1000}, "instrument": "multimeter-dc-volts"}\n'])
def test_the_same_json_written_otherwise_is_the_same_question(client, body):
    usual = client.post(PATH, json=GOOD)
    assert client.post(PATH, data=body, content_type=JSON).data == usual.data


def test_32_levels_are_read_and_refused_only_for_their_content(client):
    response = client.post(PATH, data='{"a":' * 32 + "1" + "}" * 32, content_type=JSON)
    assert response.status_code == 422


@pytest.mark.parametrize("content_type", ["", "text/plain", "application/x-www-form-urlencoded", "application/xml", "application/jsonx", "multipart/form-data"])
def test_wrong_content_type(client, content_type):
    response = client.post(PATH, data=json.dumps(GOOD), headers={"Content-Type": content_type} if content_type else {})
    assert response.status_code == 415
    assert response.headers["Accept"] == "application/json"
    assert "application/json" in response.json["detail"]


def test_compressed_body(client):
    response = client.post(PATH, data=b"\x1f\x8b", content_type=JSON, headers={"Content-Encoding": "gzip"})
    assert response.status_code == 415
    assert "gzip" in response.json["detail"]


@pytest.mark.parametrize("size, status", [(262_144, 200), (262_145, 413)])
def test_oversize_body(client, size, status):
    body = json.dumps(GOOD).encode()
    response = client.post(PATH, data=body + b" " * (size - len(body)), content_type=JSON)
    assert response.status_code == status
    if status == 413:
        assert "262144" in response.json["detail"]


def test_query_of_a_question(client):
    response = client.post(PATH + "?rule_set=1.0.0", json=GOOD)
    assert response.status_code == 422
    assert response.json["errors"][0]["parameter"] == "rule_set"


@pytest.mark.parametrize("query, parameter, code", [
    ("ruleset=1.0.0", "ruleset", "unknown-parameter"), ("rule_set=0.0.0", "rule_set", "unknown-id"), ("rule_set=1.0.0&rule_set=1.0.0", "rule_set", "duplicate-key")])
def test_query_of_a_catalogue(client, query, parameter, code):
    response = client.get(f"/v1/catalogues?{query}")
    assert response.status_code == 422
    assert [(fault["parameter"], fault["code"]) for fault in response.json["errors"]] == [(parameter, code)]


def test_as_many_uncertain_numbers_as_the_point_set_has_dimensions(client):
    answer = client.post(PATH, data=string_of(31), content_type=JSON)
    assert answer.status_code == 200 and any("low" in result for result in answer.json["results"].values())

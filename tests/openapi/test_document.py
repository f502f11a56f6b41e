"""The committed document is what the service is, its examples are answers, and they show every finding."""
import json

import jsonschema
import pytest
from openapi_spec_validator import OpenAPIV31SpecValidator
from precontact_rules import released
from precontact_service import openapi_document
from serving import ROOT

FOLDER = ROOT / "openapi"
LATEST = released.latest()


def test_nothing_drifted(app):
    differing = openapi_document.differing(FOLDER, openapi_document.files(app))
    assert not differing, f"python -m precontact_service.openapi_document openapi: {differing}"


def test_drift_is_noticed(app, tmp_path):
    texts = openapi_document.files(app)
    openapi_document.write(tmp_path, texts)
    assert not openapi_document.differing(tmp_path, texts)
    (tmp_path / "openapi.json").write_text("{}")
    (tmp_path / "examples" / "old.json").parent.mkdir(exist_ok=True)
    (tmp_path / "examples" / "old.json").write_text("{}")
    assert openapi_document.differing(tmp_path, texts) == ["examples/old.json", "openapi.json"]


def test_it_is_served_as_committed(client, document):
    assert client.get("/v1/openapi.json").json == document


def test_it_is_valid(document):
    OpenAPIV31SpecValidator(document).validate()


def schema_of(document, place):
    """A schema with everything that it refers to."""
    return {**place, "components": document["components"]}


def operations(document):
    """(path, method, operation) of all."""
    return [(path, method, operation) for path, item in document["paths"].items() for method, operation in item.items()]


def test_every_operation_has_an_executed_example(client, document):
    for path, method, operation in operations(document):
        content, = operation["responses"]["200"]["content"].values()
        assert content["examples"], (path, method)
        for example in content["examples"].values():
            value = example["value"] if "value" in example else client.get(address(example)).json
            jsonschema.validate(value, schema_of(document, content["schema"]))


def address(example):
    """Where an example kept beside the document is served."""
    reference = example["externalValue"]
    return reference if reference.startswith("/") else "/v1/" + reference


@pytest.mark.parametrize("check", LATEST.check_names)
def test_every_finding_has_an_example(client, document, check):
    operation = document["paths"][f"/v1/checks/{check}"]["post"]
    asked = operation["requestBody"]["content"]["application/json"]["examples"]
    answered = operation["responses"]["200"]["content"]["application/json"]["examples"]
    assert asked.keys() == answered.keys()
    shown = set()
    for name, example in answered.items():
        if "value" in example:
            answer = example["value"]
        else:
            answer = json.loads((FOLDER / example["externalValue"]).read_bytes())
            assert client.get(address(example)).json == answer
        shown.update(finding["code"] for finding in answer["findings"])
        assert client.post(f"/v1/checks/{check}", json=asked[name]["value"]).json == answer
    # The last finding has no condition and is what is said when no other is: there may be no question that gets it.
    declared = {finding["code"] for finding in LATEST.data["checks"][check]["findings"] if "when" in finding}
    assert declared <= shown, f"findings that no case shows: {sorted(declared - shown)}"


@pytest.mark.parametrize("case", LATEST.data["cases"], ids=lambda case: case["id"])
def test_question_and_answer_of_every_case_fit_the_schemas(client, document, case):
    operation = document["paths"][f"/v1/checks/{case['check']}"]["post"]
    jsonschema.Draft202012Validator(schema_of(document, operation["requestBody"]["content"]["application/json"]["schema"])).validate(case["input"])
    answer = client.post(f"/v1/checks/{case['check']}", json=case["input"]).json
    jsonschema.Draft202012Validator(schema_of(document, operation["responses"]["200"]["content"]["application/json"]["schema"])).validate(answer)


def strings_and_lists(schema):
    """Every schema of a string or a list inside."""
    if isinstance(schema, dict):
        if {"string", "array"} & set([schema["type"]] if isinstance(schema.get("type"), str) else schema.get("type") or ()):
            yield schema
        for value in schema.values():
            yield from strings_and_lists(value)
    elif isinstance(schema, list):
        for value in schema:
            yield from strings_and_lists(value)


def test_every_string_and_list_of_a_request_is_bounded(document):
    for name, schema in document["components"]["schemas"].items():
        if name.endswith(("Request", "Reference")):
            for bounded in strings_and_lists(schema):
                assert {"enum", "const", "maxLength", "maxItems"} & bounded.keys(), (name, bounded)


def test_requests_are_closed_and_answers_open(document):
    for name, schema in document["components"]["schemas"].items():
        text = json.dumps(schema)
        if name.endswith(("Request", "Reference")):
            assert '"additionalProperties": false' in text
        else:
            assert '"additionalProperties": false' not in text, name


def test_operation_ids_are_unique_and_summaries_said(document):
    ids = [operation["operationId"] for _, _, operation in operations(document)]
    assert len(ids) == len(set(ids))
    assert all(operation["summary"] and operation["description"] for _, _, operation in operations(document))

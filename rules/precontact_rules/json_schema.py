"""What a check asks for and answers, as JSON Schema 2020-12 components and as a description for people and forms.

Everything here is read from the bundle's declaration, the same that the validator is compiled from: what the schema admits is accepted, what it
refuses is refused.
"""
from .numbers import EXACT_WHOLE


def components(bundle):
    """{component name: schema} for every request body, catalogue reference and answer of the bundle's checks."""
    made = {"Result": _result()}
    for kind in bundle["kinds"]:
        made[_camel(kind) + "Reference"] = _reference(bundle, kind)
    for name in bundle["checks"]:
        made[_camel(name) + "Request"] = request_schema(bundle, name)
        made[_camel(name) + "Answer"] = answer_schema(bundle, name)
    return made


def request_schema(bundle, name):
    """The request body: one closed object per branch."""
    check = bundle["checks"][name]
    branch = next(f for f in check["inputs"] if f["name"] == check["branch"])
    options = [_object(check["inputs"], choice["key"], bundle, branch["key"]) for choice in branch["choices"]]
    for option, choice in zip(options, branch["choices"]):
        option["title"] = choice["meaning"]["en"]
    return {"title": check["title"]["en"], "description": check["question"]["en"], "oneOf": options}


def _object(fields, branch, bundle, branch_key=None):
    properties, required = {}, []
    for field in fields:
        if branch is not None and branch not in field.get("only", [branch]):
            properties[field["key"]] = {"type": "null", "description": "Does not apply here."}
            continue
        if field["key"] == branch_key:
            properties[field["key"]] = {"type": "string", "const": branch, "description": field["meaning"]["en"]}
            required.append(field["key"])
            continue
        needed = _needed(field, branch)
        properties[field["key"]] = _field(field, branch, bundle, needed)
        if needed:
            required.append(field["key"])
    if branch_key:
        properties["rule_set"] = {"type": ["string", "null"], "description": "Version or digest of the rule set that is to answer; the latest where absent"}
    schema = {"type": "object", "properties": properties, "additionalProperties": False}
    if required:
        schema["required"] = required
    return schema


def _needed(field, branch):
    """Whether the member must be there: required itself, or a group with a required field inside."""
    if field["kind"] == "group":
        inner = [f for f in field["fields"] if branch is None or branch in f.get("only", [branch])]
        return field["required"] or any(_needed(f, branch) for f in inner)
    return field["required"]


def _field(field, branch, bundle, needed):
    schema = _MAKERS[field["kind"]](field, branch, bundle)
    schema["description"] = _described(field)
    if needed:
        return schema
    if "oneOf" in schema:
        return {**schema, "oneOf": [*schema["oneOf"], {"type": "null"}]}
    if "anyOf" in schema:
        return {**schema, "anyOf": [*schema["anyOf"], {"type": "null"}]}
    if "enum" in schema:
        return {**schema, "type": ["string", "null"], "enum": [*schema["enum"], None]}
    if "$ref" in schema:
        return {"anyOf": [{"$ref": schema["$ref"]}, {"type": "null"}], "description": schema["description"]}
    return {**schema, "type": [schema["type"], "null"]}


def _described(field):
    text = field["meaning"]["en"]
    assume = field.get("assume")
    return text + (f". Where absent, {assume['value']} is assumed: {assume['because']['en']}" if assume else "")


def _bounded(field):
    schema = {"type": "number", "minimum": -EXACT_WHOLE, "maximum": EXACT_WHOLE}
    for key, keyword, other in (("least", "minimum", None), ("above", "exclusiveMinimum", "minimum"), ("most", "maximum", None), ("below", "exclusiveMaximum", "maximum")):
        if key in field:
            schema[keyword] = field[key]
            if other:
                schema.pop(other, None)
    return schema


def _number(field, branch, bundle):
    plain = _bounded(field)
    if not field.get("uncertain"):
        return {**plain, "x-unit": field["unit"]}
    spread = {"type": "number", "minimum": 0, "maximum": EXACT_WHOLE}
    forms = [_closed({"value": plain, name: spread}) for name in ("half_width", "half_width_percent", "standard_uncertainty")]
    forms.append(_closed({"between": {"type": "array", "items": plain, "minItems": 2, "maxItems": 2}}))
    return {"oneOf": [plain, *forms], "x-unit": field["unit"]}


def _closed(properties):
    return {"type": "object", "properties": properties, "required": list(properties), "additionalProperties": False}


def _choice(field, branch, bundle):
    keys = [c["key"] for c in field["choices"] if branch is None or branch in c.get("only", [branch])]
    return {"type": "string", "enum": keys}


def _switch(field, branch, bundle):
    return {"type": "boolean"}


def _text(field, branch, bundle):
    return {"type": "string", "maxLength": field["longest"], "pattern": "^[ -~\u00a1-\u00ac\u00ae-\u024f]*$"}


def _curve(field, branch, bundle):
    pair = {"type": "array", "items": {"type": "number", "minimum": -EXACT_WHOLE, "maximum": EXACT_WHOLE}, "minItems": 2, "maxItems": 2}
    return {"type": "array", "items": pair, "minItems": 1, "maxItems": 64, "x-units": field["units"]}


def _reference_use(field, branch, bundle):
    return {"$ref": f"#/components/schemas/{_camel(field['of'])}Reference"}


def _group(field, branch, bundle):
    return _object(field["fields"], branch, bundle)


def _list(field, branch, bundle):
    return {"type": "array", "items": _object(field["fields"], branch, bundle), "minItems": field.get("least", 0), "maxItems": field.get("most", 16)}


_MAKERS = {"number": _number, "choice": _choice, "switch": _switch, "text": _text, "curve": _curve, "reference": _reference_use, "group": _group, "list": _list}


def _reference(bundle, kind):
    fields = bundle["kinds"][kind]["fields"]
    ids = sorted(bundle["entries"].get(kind, {}))
    data = _object(fields, None, bundle)
    known = {"type": "string", "enum": ids}
    # An override may leave out what the entry supplies.
    overridden = {**data, "properties": {"id": known, **{k: _optional(v) for k, v in data["properties"].items()}}, "required": ["id"]}
    spelled = {**data, "properties": {"id": {"type": "null"}, **data["properties"]}}
    options = ([known, overridden] if ids else []) + [spelled]
    return {"description": f"{bundle['kinds'][kind]['title']['en']}: an id of the catalogue, an id with other values for some fields, or the data itself", "anyOf": options}


def _optional(schema):
    if "oneOf" in schema:
        return schema if {"type": "null"} in schema["oneOf"] else {**schema, "oneOf": [*schema["oneOf"], {"type": "null"}]}
    if isinstance(schema.get("type"), list):
        return schema
    made = {**schema, "type": [schema["type"], "null"]}
    return {**made, "enum": [*schema["enum"], None]} if "enum" in schema else made


# ---- answers -------------------------------------------------------------------------------------------------------------------------------

def answer_schema(bundle, name):
    """The answer of a check; every object is open, so that releases can add."""
    results = {f["key"]: {"$ref": "#/components/schemas/Result", "x-unit": f["unit"], "description": f["meaning"]["en"]} for f in bundle["checks"][name]["formulas"] if f["show"] == "result"}
    text, strings = {"type": "string"}, {"type": "object"}
    return {
        "type": "object", "required": ["check", "rule_set", "input_digest", "verdict", "findings", "results", "working", "assumptions", "cautions", "unverified"],
        "properties": {
            "check": text, "input_digest": text,
            "rule_set": {"type": "object", "properties": {"version": text, "digest": text}, "required": ["version", "digest"]},
            "verdict": {"type": "string", "examples": ["acceptable", "conditional", "unacceptable", "undetermined"]},
            "findings": {"type": "array", "items": {**strings, "properties": {"code": text, "verdict": text, "sentence": text}, "required": ["code", "verdict", "sentence"]}},
            "results": {"type": "object", "properties": results},
            "working": {"type": "array", "items": {**strings, "properties": {"name": text, "value": {}, "unit": {"type": ["string", "null"]}, "formula": text, "source": text},
                                                   "required": ["name", "value", "unit", "formula", "source"]}},
            "assumptions": {"type": "array", "items": {**strings, "properties": {"input": text, "value": {}, "unit": {"type": ["string", "null"]}, "because": text}, "required": ["because"]}},
            "cautions": {"type": "array", "items": {**strings, "properties": {"id": text, "word": text, "text": text}, "required": ["id", "word", "text"]}},
            "unverified": {"type": "array", "items": {**strings, "properties": {"name": text, "source": text, "standing": text}}},
        },
    }


def _result():
    one = {"type": "object", "required": ["value"], "properties": {
        "value": {"type": ["number", "boolean", "string", "null"]}, "low": {"type": ["number", "null"]}, "high": {"type": ["number", "null"]},
        "reason": {"type": "string"}, "title": {"type": "string"}, "id": {"type": "string"}}}
    return {"description": "A value, with the ends of its interval where it is uncertain, or null with the reason; a list of them where the question had a list",
            "oneOf": [one, {"type": "array", "items": {"$ref": "#/components/schemas/Result"}}]}


# ---- description ---------------------------------------------------------------------------------------------------------------------------

def describe(bundle, name):
    """A check for people and forms: inputs as declared, catalogue kinds spelled out, results, findings."""
    check = bundle["checks"][name]
    shown = [f for f in sorted(check["formulas"], key=lambda f: f["order"]) if f["show"] == "result"]
    kinds = {f["of"] for f in _all_fields(check["inputs"]) if f["kind"] == "reference"}
    return {
        "name": name, "title": check["title"], "question": check["question"], "branch": check["branch"], "inputs": check["inputs"],
        "catalogues": {kind: {"title": bundle["kinds"][kind]["title"], "fields": bundle["kinds"][kind]["fields"], "ids": sorted(bundle["entries"].get(kind, {}))} for kind in sorted(kinds)},
        "results": [{"key": f["key"], "unit": f["unit"], "meaning": f["meaning"], "formula": f["text"], "source": f["source"]} for f in shown],
        "findings": [{"code": f["code"], "verdict": f["verdict"], "when": f.get("when_text"), "sentence": f["sentence"]} for f in check["findings"]],
        "units": bundle["units"],
    }


def _all_fields(fields):
    for field in fields:
        yield field
        yield from _all_fields(field.get("fields", ()))


def _camel(name):
    return "".join(part.capitalize() for part in name.replace("_", "-").split("-"))

"""What the API page shows of the OpenAPI document: operations by tag, with parameters, members, examples and a command to repeat each."""
import json
import shlex

from precontact_rules.numbers import EXACT_WHOLE


def view(document):
    """Template values."""
    operations = [_operation(document, path, method, item[method]) for path, item in document["paths"].items() for method in ("post", "get") if method in item]
    tags = [{"name": tag["name"], "anchor": tag["name"].replace(" ", "-"), "description": tag["description"],
             "operations": [o for o in operations if tag["name"] in o["tags"]]} for tag in document["tags"]]
    return {"info": document["info"], "tags": tags}


def _operation(document, path, method, operation):
    return {
        "id": operation["operationId"], "method": method.upper(), "path": path, "summary": operation["summary"], "tags": operation["tags"],
        "description": operation.get("description", ""), "parameters": operation.get("parameters", []),
        "members": _members(document, operation), "examples": _examples(path, method, operation),
        "answers": [(status, _description(document, response)) for status, response in operation["responses"].items()],
    }


def _description(document, response):
    if "$ref" in response:
        response = document["components"]["responses"][response["$ref"].rsplit("/", 1)[1]]
    return response["description"]


def _examples(path, method, operation):
    answered = next(iter(operation["responses"]["200"]["content"].values())).get("examples", {})
    asked = operation.get("requestBody", {}).get("content", {}).get("application/json", {}).get("examples", {})
    shown = []
    for name, response in answered.items():
        request = asked.get(name)
        address = path if request else response["summary"].removeprefix("GET ")
        shown.append({"title": request["summary"] if request else "", "outcome": response["summary"] if request else "",
                      "command": _command(address, request and request["value"]), "long": _address(response.get("externalValue")),
                      "answer": None if "externalValue" in response else json.dumps(response["value"], indent=2, ensure_ascii=False)})
    return shown


def _address(reference):
    """An example's address as seen from the page, not from the document."""
    return reference if reference is None or reference.startswith("/") else f"/v1/{reference}"


def _command(address, body):
    line = f"curl -s http://127.0.0.1:8080{address}"
    if body is None:
        return line
    return f"{line} -H 'Content-Type: application/json' -d {shlex.quote(json.dumps(body, ensure_ascii=False))}"


def _members(document, operation):
    """Rows (key, unit, what) of a request body, branch by branch."""
    content = operation.get("requestBody", {}).get("content", {}).get("application/json")
    if not content:
        return []
    schema = document["components"]["schemas"][content["schema"]["$ref"].rsplit("/", 1)[1]]
    return [{"title": option.get("title", ""), "rows": list(_rows(option, ""))} for option in schema["oneOf"]]


def _rows(schema, prefix):
    for key, member in schema["properties"].items():
        if member.get("type") == "null":
            continue
        place = f"{prefix}{key}"
        yield {"key": place, "needed": key in schema.get("required", ()), "about": member.get("description", ""), "form": _form(member)}
        for inner, mark in ((member, "."), (member.get("items", {}), "[].")):
            if "properties" in inner:
                yield from _rows(inner, place + mark)


def _form(member):
    options = member.get("oneOf", member.get("anyOf", [member]))
    first = options[0]
    if "$ref" in first:
        return "id, data, or id with other values"
    if "const" in first:
        return f'"{first["const"]}"'
    if "enum" in first:
        words = [str(word) for word in first["enum"] if word is not None]
        return "one of " + ", ".join(words) if len(words) < 20 else "one of many"
    kinds = first.get("type")
    kind = kinds if isinstance(kinds, str) else next((k for k in kinds or () if k != "null"), "")
    return {"array": "list", "object": "group"}.get(kind, kind) + _range(first) + (", may be uncertain" if "oneOf" in member and kind == "number" else "")


def _range(schema):
    parts = []
    for keyword, words in (("minimum", "at least"), ("exclusiveMinimum", "above"), ("maximum", "at most"), ("exclusiveMaximum", "below")):
        if keyword in schema and abs(schema[keyword]) < EXACT_WHOLE:
            parts.append(f"{words} {schema[keyword]:g}")
    return " " + " and ".join(parts) if parts else ""

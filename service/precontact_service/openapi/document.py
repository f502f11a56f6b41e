"""The OpenAPI document as it is served and committed."""
from .examples import add_examples

_METHODS = ("get", "post")
_PREFIX = "#/components/schemas/"


def build(app, api_spec, editions):
    """(document of `app` with its executed examples, {case id: bytes} of the answers kept beside it)."""
    document = api_spec.to_dict()
    document["paths"] = dict(sorted(document["paths"].items()))
    for item in document["paths"].values():
        for method in [m for m in item if m not in _METHODS]:
            del item[method]
        for operation in item.values():
            operation["responses"].pop("default", None)      # flask-smorest promises an error body that is never sent
    _drop_unused(document)
    return document, add_examples(document, app, editions)


def _drop_unused(document):
    """Keep those schemas that an operation reaches; a kind that no check refers to has none."""
    schemas = document["components"]["schemas"]
    reached, queue = set(), [document["paths"], document["components"]["responses"]]
    while queue:
        value = queue.pop()
        if isinstance(value, dict):
            name = str(value.get("$ref", "")).removeprefix(_PREFIX)
            if name in schemas and name not in reached:
                reached.add(name)
                queue.append(schemas[name])
            queue.extend(value.values())
        elif isinstance(value, list):
            queue.extend(value)
    document["components"]["schemas"] = {name: schema for name, schema in sorted(schemas.items()) if name in reached}

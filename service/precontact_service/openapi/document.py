"""The OpenAPI document as it is served and committed."""
from .examples import add_examples

_METHODS = ("get", "post")


def build(app, api_spec, editions):
    """The document of `app` with its executed examples, a dict."""
    document = api_spec.to_dict()
    document["paths"] = dict(sorted(document["paths"].items()))
    for item in document["paths"].values():
        for method in [m for m in item if m not in _METHODS]:
            del item[method]
        for operation in item.values():
            operation["responses"].pop("default", None)      # flask-smorest promises an error body that is never sent
    add_examples(document, app, editions)
    return document

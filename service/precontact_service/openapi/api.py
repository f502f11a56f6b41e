"""flask-smorest's Api, mended where the document it makes would be wrong or untidy."""
from apispec.ext.marshmallow import MarshmallowPlugin
from apispec.ext.marshmallow.common import resolve_schema_cls
from flask_smorest import Api
from precontact_rules import json_schema

from .operations import problem_responses, released_names

TITLE = "Precontact"
VERSION = "1.0.0"       # of the API, not of a rule set
_DESCRIPTION = """\
Before a probe touches a live circuit: will the reading be true, will connecting the instrument trip a protective device, shift a process
signal, and what does an unexpected voltage mean? Each check is a pure function of its body and of a released, immutable rule set.

Nothing that this service answers says that a conductor is dead or that work on it is safe.
"""


def _component_name(schema):
    return resolve_schema_cls(schema).__name__


class DocumentedApi(Api):
    """No error handlers, no pagination, no default responses: problems are documents of their own."""

    def __init__(self, app, editions):
        app.config.update(API_TITLE=TITLE, API_VERSION=VERSION, OPENAPI_VERSION="3.1.0")
        self._editions = editions
        super().__init__(app, spec_kwargs={
            "marshmallow_plugin": MarshmallowPlugin(schema_name_resolver=_component_name),
            "info": {"description": _DESCRIPTION, "contact": {"name": "Precontact maintainers"}, "license": {"name": "Proprietary", "identifier": "LicenseRef-Proprietary"}},
            "servers": [{"url": "/", "description": "The service that serves this document"}],
            "security": [],
        })
        for name, response in problem_responses().items():
            self.spec.components.response(name, response)
        for name, schema in json_schema.components(editions.latest.rule_set.data).items():
            self.spec.components.schema(name, self._pinned(schema))

    def _pinned(self, schema):
        """A request names a rule set that exists; the engine's own schema cannot know which do."""
        names = released_names(self._editions)
        for option in schema.get("oneOf", ()):
            pin = option.get("properties", {}).get("rule_set")
            if pin is not None:
                pin["enum"] = [*names, None]
        return schema

    def _register_error_handlers(self):
        pass

    def _register_responses(self):
        pass

    def _register_pagination_header(self):
        pass

    def _register_etag_headers(self):
        pass

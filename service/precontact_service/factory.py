"""The application factory."""
from flask import Flask
from flask.json.provider import JSONProvider
import orjson
from precontact_rules import released

from . import problems
from .door import Door
from .editions import Editions
from .intake import LIMIT
from .openapi.api import DocumentedApi
from .resources import catalogues, checks, health, pages, rule_sets


class _Json(JSONProvider):
    def dumps(self, obj, **kwargs):
        return orjson.dumps(obj).decode()

    def loads(self, s, **kwargs):
        return orjson.loads(s)


class _Application(Flask):
    json_provider_class = _Json


def create_app(folder=released.FOLDER, access_log=True):
    """The WSGI application that serves the rule sets released in `folder`."""
    app = _Application(__name__, static_folder=None)
    app.config["MAX_CONTENT_LENGTH"] = LIMIT
    app.url_map.merge_slashes = False
    app.url_map.redirect_defaults = False
    editions = Editions(folder)
    problems.register(app)
    api = DocumentedApi(app, editions)
    for resource in (checks, rule_sets, catalogues, health):
        api.register_blueprint(resource.blueprint(editions))
    app.register_blueprint(pages.blueprint(api.spec, editions))
    app.wsgi_app = Door(app.wsgi_app, editions.latest, access_log)
    return app

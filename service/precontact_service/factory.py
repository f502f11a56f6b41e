"""The application factory."""
from functools import lru_cache, partial

import orjson
from flask import Flask
from flask.json.provider import JSONProvider
from precontact_rules import released

from . import problems
from .door import Door
from .editions import Editions
from .express import Express
from .openapi import document as openapi_document
from .openapi.api import DocumentedApi
from .questions import questions
from .resources import catalogues, checks, field, health, keys, pages, rule_sets
from .seals import seals_of_environment


class _Json(JSONProvider):
    def dumps(self, obj, **kwargs):
        return orjson.dumps(obj).decode()

    def loads(self, s, **kwargs):
        return orjson.loads(s)


class _Application(Flask):
    json_provider_class = _Json


def create_app(folder=released.FOLDER, access_log=True, seals=None):
    """The WSGI application that serves the rule sets released in `folder`, sealed by the keys of the environment unless `seals` are given."""
    app = _Application(__name__, static_folder=None)
    app.url_map.merge_slashes = False
    app.url_map.redirect_defaults = False
    editions, seals = Editions(folder), seals or seals_of_environment()
    seals.of(editions.latest), editions.latest.bundle       # made once, before there are workers
    problems.register(app)
    api = DocumentedApi(app, editions)
    asked = questions(editions)
    api.register_blueprint(checks.blueprint(editions, asked))
    api.register_blueprint(rule_sets.blueprint(editions, seals))
    api.register_blueprint(keys.blueprint(seals))
    for resource in (catalogues, health):
        api.register_blueprint(resource.blueprint(editions))
    document = app.extensions["precontact-document"] = lru_cache(maxsize=1)(partial(openapi_document.build, app, api.spec, editions))
    app.register_blueprint(pages.blueprint(document))
    app.register_blueprint(field.blueprint(editions, seals))
    express = Express(app.wsgi_app, {f"/v1/checks/{name}": question for name, question in asked.items()})
    app.wsgi_app = Door(express, editions.latest, access_log)
    return app

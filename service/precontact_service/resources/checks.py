"""The checks: what each asks for, and its answer."""
from flask_smorest import Blueprint
from precontact_rules import Problem, json_schema

from ..door import EDITION
from ..intake import read_body
from ..language import chosen
from ..openapi import checks as documented
from ..parameters import edition_of_request
from ..problems import ProblemError
from ..reply import answer, language_of_request, resource
from flask import request


def blueprint(editions):
    """Routes of every check of the latest rule set; a new check in a new release needs no code here."""
    made = Blueprint("checks", __name__, url_prefix="/v1/checks", description="The questions, and their answers")
    made.add_url_rule("", "list", documented.listing(made, _listing(editions), editions))
    for name in editions.latest.rule_set.check_names:
        made.add_url_rule(f"/{name}", f"describe {name}", documented.description(made, _description(editions, name), editions, name))
        made.add_url_rule(f"/{name}", f"ask {name}", documented.question(made, _question(editions, name), editions, name), methods=["POST"])
    return made


def _listing(editions):
    def list_checks():
        edition, language = edition_of_request(editions), language_of_request()
        checks = edition.rule_set.data["checks"]
        return resource({"rule_set": edition.identity, "checks": [
            {"name": name, "title": checks[name]["title"][language], "question": checks[name]["question"][language], "href": f"/v1/checks/{name}"}
            for name in edition.rule_set.check_names]}, language)

    return list_checks


def _description(editions, name):
    def describe_check():
        edition, language = edition_of_request(editions), language_of_request()
        _known(edition, name, "?rule_set")
        return resource({"rule_set": edition.identity, **json_schema.describe(edition.rule_set.data, name)})

    return describe_check


def _question(editions, name):
    latest = editions.latest
    ask_latest = latest.rule_set.question(name).answer

    def ask():
        body, language = read_body(), chosen(request.environ)
        if type(body) is dict and "rule_set" in body:
            edition = request.environ[EDITION] = editions.pinned(body.pop("rule_set"))
            _known(edition, name, "/rule_set")
            return answer(edition.rule_set.answer(name, body, language), language)
        return answer(ask_latest(body, language), language)

    return ask


def _known(edition, name, pointer):
    if name not in edition.rule_set.data["checks"]:
        known = ", ".join(edition.rule_set.check_names)
        raise ProblemError("invalid-input", "The rule set named does not hold this check.",
                           [Problem(pointer, "unknown-id", f"rule set {edition.version} has no check {name}; it has {known}")])

"""The checks: what each asks for, and its answer."""
from flask import Response, request
from flask_smorest import Blueprint
from precontact_rules import json_schema

from ..editions import PIN
from ..intake import read_body
from ..openapi import checks as documented
from ..parameters import edition_of_request
from ..reply import language_of_request, resource


def blueprint(editions, questions):
    """Routes of every check of the latest rule set; a new check in a new release needs no code here."""
    made = Blueprint("checks", __name__, url_prefix="/v1/checks", description="The questions, and their answers")
    made.add_url_rule("", "list", documented.listing(made, _listing(editions), editions))
    for name, question in questions.items():
        made.add_url_rule(f"/{name}", f"describe {name}", documented.description(made, _description(editions, name, question), editions, name))
        made.add_url_rule(f"/{name}", f"ask {name}", documented.question(made, _question(question), editions, name), methods=["POST"])
    return made


def _listing(editions):
    def list_checks():
        edition, language = edition_of_request(editions), language_of_request()
        checks = edition.rule_set.data["checks"]
        return resource({"rule_set": edition.identity, "checks": [
            {"name": name, "title": checks[name]["title"][language], "question": checks[name]["question"][language], "href": f"/v1/checks/{name}"}
            for name in edition.rule_set.check_names]}, language)

    return list_checks


def _description(editions, name, question):
    def describe_check():
        edition = edition_of_request(editions)
        question.require(edition, f"?{PIN}")
        return resource({"rule_set": edition.identity, **json_schema.describe(edition.rule_set.data, name)})

    return describe_check


def _question(question):
    def ask():
        content, headers = question.answer(request.environ, read_body())
        return Response(content, 200, headers)

    return ask

"""Alive, and ready: the second answers a known question and names the rule set that answered."""
from flask_smorest import Blueprint

from .. import log
from ..known_answers import first_wrong, one_of_each
from ..openapi import health as documented
from ..parameters import query
from ..problems import ProblemError
from ..reply import resource


def blueprint(editions):
    """Routes of the two probes."""
    made = Blueprint("health", __name__, description="For those who run the service")
    made.add_url_rule("/healthz", "alive", documented.alive(made, alive))
    made.add_url_rule("/readyz", "ready", documented.ready(made, _ready(editions)))
    return made


def alive():
    """Checks nothing: the process answers."""
    query()
    return resource({"status": "alive"}, caching="no-store")


def _ready(editions):
    rule_set = editions.latest.rule_set
    # The first time every case, which also compiles what ordinary questions need; afterwards one of each check.
    state = {"cases": rule_set.data["cases"]}

    def ready():
        query()
        wrong = first_wrong(rule_set, state["cases"])
        if wrong:
            log.event("not-ready", case=wrong)
            raise ProblemError("not-ready", f"Case {wrong} of rule set {rule_set.version} is not answered as it must be.")
        state["cases"] = one_of_each(rule_set)
        return resource({"status": "ready", "rule_set": editions.latest.identity}, caching="no-store")

    return ready

"""Asking one check: from the bytes of a body to the bytes of its answer. Knows no framework, so that two doors can share it."""
import orjson
from precontact_rules import Problem

from .body import read_json
from .digests import digest
from .door import EDITION
from .editions import PIN
from .language import chosen
from .problems import ProblemError


class Question:
    """One check of the released rule sets."""

    def __init__(self, editions, name):
        self._editions, self._name = editions, name
        self._ask_latest = editions.latest.rule_set.question(name).answer
        self._latest_headers = editions.latest.answer_headers

    def answer(self, environ, raw):
        """(content, headers) of the answer to the body `raw`. Raises ProblemError and InputProblems."""
        body, language = read_json(raw), chosen(environ)
        ask, headers = self._ask_latest, self._latest_headers
        if type(body) is dict and PIN in body:
            edition = environ[EDITION] = self._editions.pinned(body.pop(PIN))
            self.require(edition, f"/{PIN}")
            ask, headers = edition.rule_set.question(self._name).answer, edition.answer_headers
        return orjson.dumps(ask(body, language, digest)), headers[language]

    def require(self, edition, pointer):
        """Raise ProblemError if the edition does not hold this check."""
        known = edition.rule_set.check_names
        if self._name not in known:
            raise ProblemError("invalid-input", "The rule set named does not hold this check.",
                               [Problem(pointer, "unknown-id", f"rule set {edition.version} has no check {self._name}; it has {', '.join(known)}")])


def questions(editions):
    """{name: Question} of every check of the latest rule set."""
    return {name: Question(editions, name) for name in editions.latest.rule_set.check_names}

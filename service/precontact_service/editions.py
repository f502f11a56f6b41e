"""The released rule sets as the service hands them out: found by version or digest, with their headers made once."""
from datetime import datetime, timezone
from functools import cached_property

from precontact_rules import Problem, released
from precontact_rules.retirement import retirements
from werkzeug.http import http_date

from .language import LANGUAGES
from .problems import ProblemError
from .representation import JSON, Representation

HEADER = "Precontact-Rule-Set"
PIN = "rule_set"
_LISTED = 20        # so many released versions are named in a message


class Edition:
    """One released rule set, and what its responses say about it."""

    def __init__(self, rule_set, retirement):
        self.rule_set, self.retirement = rule_set, retirement
        self.version, self.digest = rule_set.version, rule_set.digest
        # Structured field (RFC 9651): a string with a parameter.
        self.header = (HEADER, f'"{self.version}"; digest="{self.digest}"')
        self.retirement_headers = _retirement_headers(retirement)
        self.answer_headers = {language: [
            ("Content-Type", JSON), ("Content-Language", language), ("Vary", "Accept-Language"), ("Cache-Control", "no-store"), *self.retirement_headers,
        ] for language in LANGUAGES}

    @property
    def identity(self):
        """What an answer says of its rule set."""
        return {"version": self.version, "digest": self.digest}

    @cached_property
    def bundle(self):
        """The exact bytes as they are sent: plain or compressed."""
        return Representation(self.rule_set.bytes, JSON)


def _retirement_headers(retirement):
    """Deprecation (RFC 9745: a structured-field date) and Sunset (RFC 8594: an HTTP date), both at the beginning of the day in UTC."""
    headers = []
    if retirement["deprecated"]:
        headers.append(("Deprecation", f"@{int(_midnight(retirement['deprecated']).timestamp())}"))
    if retirement["sunset"]:
        headers.append(("Sunset", http_date(_midnight(retirement["sunset"]))))
    return headers


def _midnight(day):
    return datetime.fromisoformat(day).replace(tzinfo=timezone.utc)


class Editions:
    """Every released rule set of one folder; each is loaded when first asked for."""

    def __init__(self, folder=released.FOLDER):
        self._folder = folder
        self.listing = released.listing(folder)
        self.retirements = retirements(folder, [row["version"] for row in self.listing])
        self._editions = {}
        self.latest = self.find(self.listing[-1]["version"])

    def find(self, name):
        """The edition of a version or digest. Raises KeyError."""
        edition = self._editions.get(name)
        if edition is None:
            rule_set = released.load(name, self._folder)
            edition = Edition(rule_set, self.retirements[rule_set.version])
            self._editions[edition.version] = self._editions[edition.digest] = edition
        return edition

    def pinned(self, name, pointer=f"/{PIN}"):
        """The edition that a request names, the latest for None. Raises ProblemError listing what there is."""
        if name is None:
            return self.latest
        if type(name) is not str:
            self._refuse(Problem(pointer, "wrong-type", f"a rule set is named by its version or digest, a string; {self.available}"))
        try:
            return self.find(name)
        except KeyError:
            self._refuse(Problem(pointer, "unknown-id", f"no released rule set is named {name[:80]!r}; {self.available}"))

    @staticmethod
    def _refuse(problem):
        raise ProblemError("invalid-input", "The request names a rule set that is not here.", [problem]) from None

    @property
    def available(self):
        """The newest released rule sets in words."""
        rows = self.listing[-_LISTED:]
        return "released: " + ", ".join(f"{row['version']} ({row['digest']})" for row in reversed(rows))

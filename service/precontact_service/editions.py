"""The released rule sets as the service hands them out: found by version or digest, with their headers made once."""
import base64
import hashlib

from precontact_rules import Problem, released

from .problems import ProblemError

HEADER = "Precontact-Rule-Set"
PIN = "rule_set"
_LISTED = 20        # so many released versions are named in a message


class Edition:
    """One released rule set, and what its responses say about it."""

    def __init__(self, rule_set):
        self.rule_set = rule_set
        self.version, self.digest = rule_set.version, rule_set.digest
        # Structured field (RFC 9651): a string with a parameter.
        self.header = (HEADER, f'"{self.version}"; digest="{self.digest}"')
        self.etag = f'"{self.digest}"'
        sha256 = base64.b64encode(hashlib.sha256(rule_set.bytes).digest()).decode()
        self.repr_digest = f"sha-256=:{sha256}:"

    @property
    def identity(self):
        """What an answer says of its rule set."""
        return {"version": self.version, "digest": self.digest}


class Editions:
    """Every released rule set of one folder; each is loaded when first asked for."""

    def __init__(self, folder=released.FOLDER):
        self._folder = folder
        self.listing = released.listing(folder)
        self._editions = {}
        self.latest = self.find(self.listing[-1]["version"])

    def find(self, name):
        """The edition of a version or digest. Raises KeyError."""
        edition = self._editions.get(name)
        if edition is None:
            edition = Edition(released.load(name, self._folder))
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

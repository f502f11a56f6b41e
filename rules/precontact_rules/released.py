"""The released rule sets that travel with this package: immutable, each loadable by version or digest, for ever."""
import json
from functools import lru_cache
from pathlib import Path

from .engine import RuleSet

FOLDER = Path(__file__).parent / "released"


def listing(folder=FOLDER):
    """[{"version", "digest"}, ...] in the order of release."""
    return json.loads((folder / "index.json").read_bytes())


@lru_cache(maxsize=None)
def _loaded(version, folder):
    return RuleSet((folder / f"{version}.json").read_bytes())


def load(name, folder=FOLDER):
    """The rule set of a version ("1.0.0") or digest ("sha-256:..."). Raises KeyError for one that was never released."""
    for row in listing(folder):
        if name in (row["version"], row["digest"]):
            return _loaded(row["version"], folder)
    raise KeyError(name)


def latest(folder=FOLDER):
    """The newest released rule set."""
    return _loaded(listing(folder)[-1]["version"], folder)

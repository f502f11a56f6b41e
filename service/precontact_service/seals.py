"""The seals of the released rule sets and of the key list, made once and kept."""
from precontact_rules.sealing import KEYS, KeyRing, seal

from . import log
from .representation import JSON, Representation

JOSE = "application/jose+json"
SEALS = "precontact.seals"        # the examples of the document leave seals by the example key here


class Seals:
    """What one ring of keys has sealed."""

    def __init__(self, ring):
        self._ring, self._by_digest = ring, {}
        self.development = ring.development
        keys = ring.key_list()
        self.keys = Representation(keys.bytes, JSON)
        self.keys_seal = Representation(seal(keys.bytes, ring, KEYS), JOSE)

    def of(self, edition):
        """The seal of one edition."""
        found = self._by_digest.get(edition.digest)
        if found is None:
            found = self._by_digest[edition.digest] = Representation(seal(edition.rule_set.bytes, self._ring), JOSE)
        return found


def seals_of_environment():
    """Seals by the ring in the file that PRECONTACT_KEYS names, or by a key made now, which is said loudly. Raises KeyFault."""
    ring = KeyRing.of_environment()
    if ring.development:
        log.event("development-key", warning="DEVELOPMENT KEY: made for this process, kept nowhere, gone when it ends. What it seals must not be relied "
                                             "upon. For anything else set PRECONTACT_KEYS to a key file: DEVELOPERS.md, Keys.", keys=list(ring.keys))
    else:
        log.event("keys", serial=ring.serial, keys=list(ring.keys), revoked=list(ring.revoked))
    return Seals(ring)

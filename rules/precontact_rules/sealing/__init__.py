"""Seals: who vouches for the bytes of a rule set. Ed25519 signatures (RFC 7515, 7797, 9864) by a ring of keys that can be rotated and revoked.

For an embedder:

    from precontact_rules import sealing
    keys = sealing.KeyList.read(pinned_bytes)
    rule_set = sealing.opened(bundle_bytes, seal_bytes, keys)       # raises Refused
    keys = sealing.succeeding(newer_bytes, newer_seal_bytes, keys)  # raises Refused
"""
from .keys import EXAMPLE, KeyFault, KeyList, KeyRing, Refused
from .seals import KEYS, RULE_SET, check, opened, seal, succeeding

__all__ = ["EXAMPLE", "KEYS", "RULE_SET", "KeyFault", "KeyList", "KeyRing", "Refused", "check", "opened", "seal", "succeeding"]

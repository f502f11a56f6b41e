"""A seal: detached Ed25519 signatures over exact bytes, one for each valid key, in the general JSON form of a JWS.

The payload is not encoded (RFC 7797): what is signed is the header, a dot, and the very bytes. One good signature by a trusted key is enough, so that a
publisher can seal with an old and a new key while the new one spreads.
"""
import json
import re

from joserfc import jws
from joserfc.errors import JoseError
from joserfc.jwk import OKPKey
from joserfc.util import urlsafe_b64decode

from ..canonical import canonical_bytes
from ..engine import RuleSet
from .keys import CURVE, KeyList, Refused

RULE_SET, KEYS = "precontact-rule-set", "precontact-keys"      # what is sealed, so that one can never be passed off as the other
_MOST_SIGNATURES = 16
_LONGEST = 20_000        # bytes of a seal
_SIGNATURE = 64          # bytes of an Ed25519 signature
_BASE64URL = re.compile(r"[A-Za-z0-9_-]+", re.ASCII)
# Where several signatures are no good, the reason that tells most is given.
_TELLING = ("bytes-changed", "revoked-key", "wrong-type", "wrong-algorithm", "unknown-key", "malformed-seal")


class _Registry(jws.JWSRegistry):
    max_payload_length = 1 << 26


_REGISTRY = _Registry(algorithms=[CURVE], strict_check_header=False)        # what is not critical may be there, and is not heeded (RFC 7515, 4)


def seal(payload, ring, typ=RULE_SET):
    """The seal of `payload` (bytes) by every valid key of the ring: canonical JSON, bytes."""
    signatures = []
    for kid, key in ring.keys.items():
        header = {"alg": CURVE, "b64": False, "crit": ["b64"], "kid": kid, "typ": typ}
        signatures += jws.serialize_json([{"protected": header}], payload, key, registry=_REGISTRY)["signatures"]
    return canonical_bytes({"signatures": signatures})


def check(payload, seal, keys, typ=RULE_SET):
    """The kid of the key in `keys` (a KeyList) that vouches for `payload` as a `typ`. Raises Refused."""
    refusals = []
    for index, signature in enumerate(_signatures(seal)):
        try:
            return _checked(payload, signature, keys, typ, f"signatures[{index}]")
        except Refused as refused:
            refusals.append(refused)
    raise min(refusals, key=lambda refused: _TELLING.index(refused.code))


def opened(content, seal, keys):
    """The RuleSet in the bytes `content`, once a key of `keys` has vouched for them. Raises Refused and UnknownLanguage."""
    check(content, seal, keys, RULE_SET)
    return RuleSet(content)


def succeeding(content, seal, keys):
    """The KeyList in the bytes `content`, which is to take the place of `keys` and is sealed by one of them; what was revoked stays so. Raises Refused."""
    newer = KeyList.read(content)
    check(content, seal, keys, KEYS)
    if newer.serial <= keys.serial:
        raise Refused("not-newer", f"the key list has serial {newer.serial}; one above {keys.serial} is right")
    return KeyList(content, newer.serial, newer.keys, {**newer.revoked, **keys.revoked}, newer.development)


def _malformed(detail):
    return Refused("malformed-seal", detail)


def _signatures(seal):
    if len(seal) > _LONGEST:
        raise _malformed(f"the seal is {len(seal)} bytes long; at most {_LONGEST} are read")
    try:
        data = json.loads(seal)
    except (ValueError, RecursionError) as error:
        raise _malformed(f"the seal is not JSON: {error}") from None
    found = data.get("signatures") if isinstance(data, dict) else None
    if not isinstance(found, list) or not 1 <= len(found) <= _MOST_SIGNATURES:
        raise _malformed(f"the seal has no list of 1 to {_MOST_SIGNATURES} signatures")
    if "payload" in data:
        raise _malformed("the seal carries a payload of its own; a detached one has none")
    return found


def _checked(payload, signature, keys, typ, place):
    if not isinstance(signature, dict) or signature.keys() != {"protected", "signature"}:
        raise _malformed(f"{place} is not an object of protected and signature alone")
    header = _header(_decoded(signature["protected"], f"{place}.protected"), f"{place}.protected")
    if len(_decoded(signature["signature"], f"{place}.signature")) != _SIGNATURE:
        raise _malformed(f"{place}.signature is not {_SIGNATURE} bytes of base64url")
    if header.get("alg") != CURVE:
        raise Refused("wrong-algorithm", f"{place} is made with {str(header.get('alg'))[:40]!r}; {CURVE} is right")
    if header.get("b64") is not False or header.get("crit") != ["b64"]:
        raise _malformed(f"{place} does not sign the bytes as they are (b64 false, crit [\"b64\"])")
    if header.get("typ") != typ:
        raise Refused("wrong-type", f"{place} seals a {str(header.get('typ'))[:40]!r}; {typ!r} is right")
    kid = header.get("kid")
    if not isinstance(kid, str) or not kid.strip():
        raise _malformed(f"{place} names no key")
    if kid in keys.revoked:
        raise Refused("revoked-key", f"the key {kid} is revoked: {keys.revoked[kid]}")
    if kid not in keys.keys:
        raise Refused("unknown-key", f"the key {kid[:60]} is not trusted; trusted: {', '.join(k for k in keys.keys if k not in keys.revoked) or 'none'}")
    if not _verifies(payload, signature, OKPKey.import_key(keys.keys[kid])):
        raise Refused("bytes-changed", f"the signature of the key {kid} is not over these bytes: they or the seal were changed, or are not whole")
    return kid


def _decoded(text, place):
    try:
        if not isinstance(text, str) or not _BASE64URL.fullmatch(text):
            raise ValueError
        return urlsafe_b64decode(text.encode())
    except ValueError:
        raise _malformed(f"{place} is not base64url") from None


def _header(content, place):
    try:
        header = json.loads(content)
    except (ValueError, RecursionError):
        raise _malformed(f"{place} does not hold JSON") from None
    if not isinstance(header, dict):
        raise _malformed(f"{place} does not hold an object")
    return header


def _verifies(payload, signature, key):
    try:
        jws.deserialize_json({"payload": payload.decode(), **signature}, key, registry=_REGISTRY)
    except (JoseError, ValueError):      # also bytes that are no text: what is sealed is always JSON
        return False
    return True

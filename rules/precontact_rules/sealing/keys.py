"""Keys: the ring that seals (private, one file of the publisher) and the list that is trusted (public, one document for everybody)."""
import json
import os
import re
from pathlib import Path

from joserfc.errors import JoseError
from joserfc.jwk import OKPKey

from ..canonical import canonical_bytes

VARIABLE = "PRECONTACT_KEYS"
CURVE = "Ed25519"
_PUBLIC = ("kty", "crv", "x", "kid", "alg", "use")
_BASE64URL_32 = re.compile(r"[A-Za-z0-9_-]{43}", re.ASCII)

# The key of RFC 8037, appendix A: printed for examples, known to everybody, and so refused everywhere else.
EXAMPLE = {"kty": "OKP", "crv": CURVE, "x": "11qYAYKxCrfVS_7TyWQHOg7hcvPapiMlrwIaaPcHURo", "d": "nWGxne_9WmC6hEr0kuwsxERJxWl7MmkZcDusAxyuf2A"}


class KeyFault(ValueError):
    """A key, or a file of keys, that cannot be used: what and where it is, and what would be right."""


class Refused(ValueError):
    """Bytes that are not vouched for: a code, and the reason in words."""

    def __init__(self, code, detail):
        super().__init__(f"{code}: {detail}")
        self.code, self.detail = code, detail


def kid_of(x):
    """The name of a public key: its SHA-256 thumbprint (RFC 7638)."""
    return OKPKey.import_key({"kty": "OKP", "crv": CURVE, "x": x}).thumbprint()


def made_key():
    """A new private key as a JWK."""
    return _dressed(OKPKey.generate_key(CURVE))


def _dressed(key):
    return {**key.as_dict(private=True), "kid": key.thumbprint(), "alg": CURVE, "use": "sig"}


def _object(value, place, members):
    if not isinstance(value, dict):
        raise KeyFault(f"{place} is {_named(value)}; an object with {', '.join(members)} is right")
    return value


def _named(value):
    return "absent" if value is None else f"{json.dumps(value, ensure_ascii=False)[:40]}"


def _public(jwk, place):
    """Check the public members of a JWK."""
    _object(jwk, place, _PUBLIC)
    for name, right in (("kty", "OKP"), ("crv", CURVE), ("alg", CURVE), ("use", "sig")):
        found = jwk.get(name, right if name in ("alg", "use") else None)
        if found != right:
            raise KeyFault(f"{place}.{name} is {_named(found)}; \"{right}\" is right")
    if not isinstance(jwk.get("x"), str) or not _BASE64URL_32.fullmatch(jwk["x"]):
        raise KeyFault(f"{place}.x is {_named(jwk.get('x'))}; the public key in 43 base64url characters is right")
    try:
        kid = kid_of(jwk["x"])
    except (JoseError, ValueError) as error:
        raise KeyFault(f"{place}.x cannot be read as a public key: {error}") from None
    if jwk.get("kid", kid) != kid:
        raise KeyFault(f"{place}.kid is {_named(jwk['kid'])}; {kid}, the thumbprint of the key, is right")
    return kid


def _private(jwk, place):
    """The key of a private JWK, checked: its public part must be the one that its private part has."""
    kid = _public(jwk, place)
    if "d" not in jwk:
        raise KeyFault(f"{place} ({kid}) is a public key; sealing needs the private one, with its member d")
    if not isinstance(jwk["d"], str) or not _BASE64URL_32.fullmatch(jwk["d"]):
        raise KeyFault(f"{place}.d is not the private key in 43 base64url characters")      # never shown
    try:
        key = OKPKey.import_key({name: jwk[name] for name in ("kty", "crv", "x", "d")})
        same = OKPKey(key.private_key, key.private_key).thumbprint() == kid
    except (JoseError, ValueError) as error:
        raise KeyFault(f"{place} ({kid}) cannot be read as a private key: {error}") from None
    if not same:
        raise KeyFault(f"{place}: d is the private part of another key than x ({kid})")
    return key


def _parsed(content, what):
    try:
        return json.loads(content)
    except (ValueError, RecursionError) as error:
        raise KeyFault(f"{what} is not JSON: {error}") from None


def _serial(data, what):
    serial = data.get("serial")
    if type(serial) is not int or not 1 <= serial < 2 ** 53:
        raise KeyFault(f"{what}.serial is {_named(serial)}; a whole number from 1 upwards is right")
    return serial


def _list(data, name, what):
    found = data.get(name)
    if not isinstance(found, list):
        raise KeyFault(f"{what}.{name} is {_named(found)}; a list is right")
    return found


def _revoked(data, what):
    rows = {}
    for index, row in enumerate(_list(data, "revoked", what)):
        place = f"{what}.revoked[{index}]"
        _object(row, place, ("kid", "because"))
        for name in ("kid", "because"):
            if not isinstance(row.get(name), str) or not row[name].strip():
                raise KeyFault(f"{place}.{name} is {_named(row.get(name))}; a text is right")
        rows[row["kid"]] = row["because"]
    return rows


class KeyList:
    """The public keys that may vouch, and those that never again may. Immutable."""

    def __init__(self, content, serial, keys, revoked, development):
        self.bytes, self.serial, self.development = content, serial, development
        self.keys, self.revoked = keys, revoked         # {kid: public JWK}, {kid: because}

    @classmethod
    def read(cls, content):
        """The key list in these bytes. Raises Refused."""
        try:
            return cls._read(content)
        except KeyFault as fault:
            raise Refused("malformed-keys", str(fault)) from None

    @classmethod
    def _read(cls, content):
        what = "the key list"
        data = _object(_parsed(content, what), what, ("serial", "keys", "revoked", "development"))
        serial, revoked, keys = _serial(data, what), _revoked(data, what), {}
        for index, jwk in enumerate(_list(data, "keys", what)):
            place = f"{what}.keys[{index}]"
            kid = _public(jwk, place)
            if "d" in jwk:
                raise KeyFault(f"{place} ({kid}) holds a private key; a list that is given away holds public ones")
            keys[kid] = {"kty": "OKP", "crv": CURVE, "x": jwk["x"]}
        if type(data.get("development")) is not bool:
            raise KeyFault(f"{what}.development is {_named(data.get('development'))}; true or false is right")
        return cls(content, serial, keys, revoked, data["development"])


class KeyRing:
    """The private keys of a publisher: every one that is not revoked seals."""

    def __init__(self, data, what="the keys", development=False):
        """`data`: {"serial", "keys": [private JWK], "revoked": [{"kid", "because"}]}. Raises KeyFault."""
        _object(data, what, ("serial", "keys", "revoked"))
        self.serial, self.revoked, self.development = _serial(data, what), _revoked(data, what), development
        given = [_private(jwk, f"{what}.keys[{index}]") for index, jwk in enumerate(_list(data, "keys", what))]
        self.keys = {kid: key for key in given if (kid := key.thumbprint()) not in self.revoked}
        if not self.keys:
            raise KeyFault(f"{what}: {'every key is revoked' if given else 'there is no key'}; nothing can be sealed without one that is valid")

    @classmethod
    def read(cls, path):
        """The ring in a key file. Raises KeyFault."""
        ring = cls(read_file(path), str(path))
        if kid_of(EXAMPLE["x"]) in ring.keys:
            raise KeyFault(f"{path} holds the example key of RFC 8037, which everybody knows; `precontact-rules cut` makes one of your own")
        return ring

    @classmethod
    def ephemeral(cls):
        """A ring for development: its key is made now, kept nowhere, and gone with this process."""
        return cls({"serial": 1, "keys": [made_key()], "revoked": []}, development=True)

    @classmethod
    def example(cls):
        """The ring of printed examples: its key is everybody's."""
        return cls({"serial": 1, "keys": [EXAMPLE], "revoked": []}, development=True)

    @classmethod
    def of_environment(cls):
        """The ring in the file that PRECONTACT_KEYS names; an ephemeral one where it names none. Raises KeyFault."""
        path = os.environ.get(VARIABLE)
        return cls.read(Path(path)) if path else cls.ephemeral()

    def key_list(self):
        """The KeyList to give away."""
        keys = [{**key.as_dict(private=False), "kid": kid, "alg": CURVE, "use": "sig"} for kid, key in self.keys.items()]
        revoked = [{"kid": kid, "because": because} for kid, because in self.revoked.items()]
        return KeyList.read(canonical_bytes({"serial": self.serial, "keys": keys, "revoked": revoked, "development": self.development}))


def read_file(path):
    """The JSON object in a key file, unchecked. Raises KeyFault."""
    try:
        content = path.read_bytes()
    except FileNotFoundError:
        raise KeyFault(f"there is no key file {path}; `precontact-rules cut --new {path}` makes one") from None
    except OSError as error:
        raise KeyFault(f"the key file {path} cannot be read: {error.strerror}") from None
    return _object(_parsed(content, str(path)), str(path), ("serial", "keys", "revoked"))

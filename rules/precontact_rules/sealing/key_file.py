"""The publisher's key file: making it, adding a key, revoking one. Readable by its owner alone, and replaced whole or not at all."""
import json
import os
import tempfile

from .keys import KeyFault, KeyRing, kid_of, made_key, read_file


def make(path):
    """Write a new key file with one key; its kid. Raises KeyFault."""
    if path.exists():
        raise KeyFault(f"{path} is there already; without --new a key is added to it")
    key = made_key()
    _write(path, {"serial": 1, "keys": [key], "revoked": []})
    return key["kid"]


def add(path):
    """Add a key to the file, beside those that are there; its kid. Raises KeyFault."""
    data = _valid(path)
    key = made_key()
    _write(path, {**data, "serial": data["serial"] + 1, "keys": [*data["keys"], key]})
    return key["kid"]


def revoke(path, kid, because):
    """Revoke a key for ever and drop its private part from the file. Raises KeyFault."""
    data = _valid(path)
    ring = KeyRing(data, str(path))
    if not because.strip():
        raise KeyFault("a key is revoked for a reason; --because is empty")
    if kid in ring.revoked:
        raise KeyFault(f"the key {kid} is revoked already: {ring.revoked[kid]}")
    if kid not in ring.keys:
        raise KeyFault(f"{path} has no key {kid}; it has {', '.join(ring.keys)}")
    if len(ring.keys) == 1:
        raise KeyFault(f"{kid} is the only valid key; add another one first, or nobody could be told of the revocation")
    kept = [jwk for jwk in data["keys"] if kid_of(jwk["x"]) != kid]
    _write(path, {**data, "serial": data["serial"] + 1, "keys": kept, "revoked": [*data["revoked"], {"kid": kid, "because": because}]})


def _valid(path):
    data = read_file(path)
    KeyRing(data, str(path))
    return data


def _write(path, data):
    try:
        handle, name = tempfile.mkstemp(prefix=f".{path.name}.", dir=path.parent)       # made with mode 0600
    except OSError as error:
        raise KeyFault(f"{path} cannot be written: {error.strerror}") from None
    try:
        with open(handle, "w") as file:
            file.write(json.dumps(data, indent=1) + "\n")
            file.flush()
            os.fsync(file.fileno())
        os.replace(name, path)
    except OSError as error:
        os.unlink(name)
        raise KeyFault(f"{path} cannot be written: {error.strerror}") from None

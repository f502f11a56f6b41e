"""Seals and keys without a server: what is accepted, what is refused and why, rotation, revocation, and the files."""
import base64
import json
import stat

import pytest
from joserfc import jws
from joserfc.jwk import OKPKey
from precontact_rules import released, sealing
from precontact_rules.canonical import canonical_bytes
from precontact_rules.sealing import KeyFault, KeyList, KeyRing, Refused, key_file

BUNDLE = released.latest().bytes


def ring_of(path):
    return KeyRing.read(path)


@pytest.fixture
def path(tmp_path):
    """A key file with one key."""
    key_file.make(tmp_path / "keys.json")
    return tmp_path / "keys.json"


@pytest.fixture(scope="module")
def ring():
    """Two valid keys."""
    one, other = KeyRing.ephemeral(), KeyRing.ephemeral()
    data = [{**key.as_dict(private=True)} for key in (*one.keys.values(), *other.keys.values())]
    return KeyRing({"serial": 7, "keys": data, "revoked": []})


def refusal(*arguments):
    with pytest.raises(Refused) as refused:
        sealing.check(*arguments)
    return refused.value


# ---- the form ----------------------------------------------------------------------------------------------------------------------


def test_a_seal_has_exactly_the_agreed_form(ring):
    seal = json.loads(sealing.seal(BUNDLE, ring))
    assert seal.keys() == {"signatures"} and len(seal["signatures"]) == 2
    for signature, (kid, key) in zip(seal["signatures"], ring.keys.items(), strict=True):
        header = json.loads(base64.urlsafe_b64decode(signature["protected"] + "=="))
        assert header == {"alg": "Ed25519", "b64": False, "crit": ["b64"], "kid": kid, "typ": "precontact-rule-set"}
        raw = base64.urlsafe_b64decode(signature["signature"] + "==")
        key.public_key.verify(raw, signature["protected"].encode() + b"." + BUNDLE)          # raises where it does not hold
    assert sealing.seal(BUNDLE, ring) == sealing.seal(BUNDLE, ring)


def test_the_example_key_has_the_thumbprint_that_the_standard_prints():
    assert list(KeyRing.example().keys) == ["kPrK_qmxVWaYVA9wwBF6Iuo3vVzz7TxHCTwXBygrS4k"]        # RFC 8037, appendix A.3


def test_the_key_list_is_canonical_and_public(ring):
    keys = ring.key_list()
    assert canonical_bytes(json.loads(keys.bytes)) == keys.bytes
    assert all(jwk.keys() == {"kty", "crv", "x", "kid", "alg", "use"} for jwk in json.loads(keys.bytes)["keys"])
    assert KeyRing.ephemeral().key_list().development and not keys.development


def test_an_opened_bundle_answers(ring):
    rule_set = sealing.opened(BUNDLE, sealing.seal(BUNDLE, ring), ring.key_list())
    assert rule_set.digest == released.latest().digest


# ---- refusals ----------------------------------------------------------------------------------------------------------------------


def flipped(content, place):
    return content[:place] + bytes([content[place] ^ 1]) + content[place + 1:]


@pytest.mark.parametrize("changed", [flipped(BUNDLE, 0), flipped(BUNDLE, len(BUNDLE) // 2), flipped(BUNDLE, len(BUNDLE) - 1), BUNDLE[:-1], BUNDLE[:1000],
                                     b"", BUNDLE + b"\n", b"\xff\xfe" + BUNDLE])
def test_changed_bytes(ring, changed):
    assert refusal(changed, sealing.seal(BUNDLE, ring), ring.key_list()).code == "bytes-changed"


def test_an_unknown_key_names_those_that_are_trusted(ring):
    refused = refusal(BUNDLE, sealing.seal(BUNDLE, KeyRing.ephemeral()), ring.key_list())
    assert refused.code == "unknown-key" and all(kid in refused.detail for kid in ring.keys)


def test_a_key_list_is_no_rule_set_and_the_other_way_round(ring):
    assert refusal(BUNDLE, sealing.seal(BUNDLE, ring, sealing.KEYS), ring.key_list()).code == "wrong-type"
    assert refusal(BUNDLE, sealing.seal(BUNDLE, ring), ring.key_list(), sealing.KEYS).code == "wrong-type"


def seal_with(ring, change=lambda header: None, spoil=lambda signature: None):
    """The seal of one key, with a header as `change` leaves it."""
    kid, key = next(iter(ring.keys.items()))
    header = {"alg": "Ed25519", "b64": False, "crit": ["b64"], "kid": kid, "typ": "precontact-rule-set"}
    change(header)
    protected = base64.urlsafe_b64encode(json.dumps(header).encode()).rstrip(b"=")
    raw = key.private_key.sign(protected + b"." + BUNDLE)
    signature = {"protected": protected.decode(), "signature": base64.urlsafe_b64encode(raw).rstrip(b"=").decode()}
    spoil(signature)
    return json.dumps({"signatures": [signature]}).encode()


def test_the_hand_made_seal_is_good_as_long_as_nothing_is_changed(ring):
    assert sealing.check(BUNDLE, seal_with(ring), ring.key_list()) in ring.keys


@pytest.mark.parametrize("change, code", [
    (lambda h: h.update(alg="EdDSA"), "wrong-algorithm"), (lambda h: h.update(alg="none"), "wrong-algorithm"), (lambda h: h.update(alg="HS256"), "wrong-algorithm"),
    (lambda h: h.pop("alg"), "wrong-algorithm"), (lambda h: h.update(typ="JWT"), "wrong-type"), (lambda h: h.pop("typ"), "wrong-type"),
    (lambda h: h.update(b64=True), "malformed-seal"), (lambda h: h.pop("b64"), "malformed-seal"), (lambda h: h.pop("crit"), "malformed-seal"),
    (lambda h: h.update(crit=["b64", "exp"]), "malformed-seal"), (lambda h: h.pop("kid"), "malformed-seal"), (lambda h: h.update(kid=7), "malformed-seal"),
    (lambda h: h.update(kid="other"), "unknown-key"), (lambda h: h.update(kid=""), "malformed-seal")])
def test_headers_that_are_not_the_agreed_one(ring, change, code):
    assert refusal(BUNDLE, seal_with(ring, change), ring.key_list()).code == code


def test_what_a_header_says_beyond_that_is_not_heeded(ring):
    stranger = KeyRing.ephemeral()
    brought, = json.loads(stranger.key_list().bytes)["keys"]
    assert sealing.check(BUNDLE, seal_with(ring, lambda h: h.update(jwk=brought, more=1)), ring.key_list()) in ring.keys
    # No key is trusted for being brought along.
    assert refusal(BUNDLE, seal_with(stranger, lambda h: h.update(jwk=brought)), ring.key_list()).code == "unknown-key"


@pytest.mark.parametrize("spoil, code", [
    (lambda s: s.update(signature="A" * 86), "bytes-changed"), (lambda s: s.update(signature="A" * 85 + "B"), "malformed-seal"),
    (lambda s: s.update(signature=s["signature"][:-2]), "malformed-seal"), (lambda s: s.update(signature=""), "malformed-seal"),
    (lambda s: s.update(signature=s["signature"] + "=="), "malformed-seal"), (lambda s: s.update(signature=None), "malformed-seal"),
    (lambda s: s.update(protected="e30"), "wrong-algorithm"), (lambda s: s.update(protected="!"), "malformed-seal"),
    (lambda s: s.update(protected="AAAA"), "malformed-seal"),
    (lambda s: s.pop("protected"), "malformed-seal"), (lambda s: s.update(header={"kid": "x"}), "malformed-seal")])
def test_signatures_that_are_none(ring, spoil, code):
    assert refusal(BUNDLE, seal_with(ring, spoil=spoil), ring.key_list()).code == code


@pytest.mark.parametrize("seal", [b"", b"{}", b"[]", b"null", b"not json", b"\xff", b'{"signatures": []}', b'{"signatures": {}}', b'{"signatures": [1]}',
                                  b'{"signatures": ' + b"[" * 5000 + b"]" * 5000 + b"}", b" " * 20_001])
def test_a_seal_that_is_none(ring, seal):
    assert refusal(BUNDLE, seal, ring.key_list()).code == "malformed-seal"


def test_a_seal_with_a_payload_of_its_own(ring):
    seal = {**json.loads(sealing.seal(BUNDLE, ring)), "payload": "e30"}
    assert refusal(BUNDLE, json.dumps(seal).encode(), ring.key_list()).code == "malformed-seal"


def test_the_reason_that_tells_most_is_given(ring):
    strange = json.loads(sealing.seal(BUNDLE, KeyRing.ephemeral()))["signatures"]
    ours = json.loads(sealing.seal(BUNDLE[:-1], ring))["signatures"]
    assert refusal(BUNDLE, json.dumps({"signatures": strange + ours}).encode(), ring.key_list()).code == "bytes-changed"


# ---- rotation and revocation -------------------------------------------------------------------------------------------------------


def test_two_keys_are_valid_at_once(path):
    old = ring_of(path).key_list()
    added = key_file.add(path)
    both = ring_of(path)
    seal = sealing.seal(BUNDLE, both)
    assert added in both.keys and len(both.keys) == 2
    assert sealing.check(BUNDLE, seal, old) in old.keys                      # who knows only the old key
    only_new = KeyList(b"", 1, {added: both.key_list().keys[added]}, {}, False)
    assert sealing.check(BUNDLE, seal, only_new) == added                    # who knows only the new one


def test_a_device_follows_a_rotation_and_a_revocation_list_by_list(path):
    trusted = ring_of(path).key_list()
    first, = trusted.keys
    old_seal = sealing.seal(BUNDLE, ring_of(path))
    second = key_file.add(path)
    trusted = sealing.succeeding(*published(path), trusted)
    assert list(trusted.keys) == [first, second] and trusted.serial == 2
    sealing.check(BUNDLE, old_seal, trusted)
    key_file.revoke(path, first, "lost")
    trusted = sealing.succeeding(*published(path), trusted)
    assert list(trusted.keys) == [second] and trusted.serial == 3
    refused = refusal(BUNDLE, old_seal, trusted)
    assert refused.code == "revoked-key" and "lost" in refused.detail
    assert sealing.check(BUNDLE, sealing.seal(BUNDLE, ring_of(path)), trusted) == second


def published(path):
    """(key list, its seal) of a key file."""
    ring = ring_of(path)
    keys = ring.key_list().bytes
    return keys, sealing.seal(keys, ring, sealing.KEYS)


def test_a_key_list_must_be_newer_and_sealed_by_a_key_that_is_trusted_now(path):
    before, seal = published(path)
    trusted = KeyList.read(before)
    with pytest.raises(Refused) as same:
        sealing.succeeding(before, seal, trusted)
    assert same.value.code == "not-newer" and "serial 1" in same.value.detail
    stranger = KeyRing.ephemeral()
    forged = canonical_bytes({**json.loads(stranger.key_list().bytes), "serial": 9})
    with pytest.raises(Refused) as unknown:
        sealing.succeeding(forged, sealing.seal(forged, stranger, sealing.KEYS), trusted)
    assert unknown.value.code == "unknown-key"


def test_a_revoked_key_cannot_come_back(path):
    first, = ring_of(path).keys
    key_file.add(path)
    stolen = json.loads(path.read_text())
    trusted = KeyList.read(published(path)[0])
    key_file.revoke(path, first, "stolen")
    trusted = sealing.succeeding(*published(path), trusted)
    thief = KeyRing({"serial": 50, "keys": stolen["keys"][:1], "revoked": []})
    forged = thief.key_list().bytes
    with pytest.raises(Refused) as refused:
        sealing.succeeding(forged, sealing.seal(forged, thief, sealing.KEYS), trusted)
    assert refused.value.code == "revoked-key"
    # Not even a list that a valid key has sealed takes a revocation back.
    both = KeyRing({"serial": 51, "keys": stolen["keys"], "revoked": []})
    trusted = sealing.succeeding(both.key_list().bytes, sealing.seal(both.key_list().bytes, both, sealing.KEYS), trusted)
    assert refusal(BUNDLE, sealing.seal(BUNDLE, thief), trusted).code == "revoked-key"


# ---- key files and key lists -------------------------------------------------------------------------------------------------------


def test_key_files_are_for_their_owner_alone(path):
    key_file.add(path)
    assert stat.S_IMODE(path.stat().st_mode) == 0o600
    assert [entry.name for entry in path.parent.iterdir()] == ["keys.json"]


def test_revoking_drops_the_private_part(path):
    first, = ring_of(path).keys
    secret = json.loads(path.read_text())["keys"][0]["d"]
    key_file.add(path)
    key_file.revoke(path, first, "old")
    assert secret not in path.read_text() and json.loads(path.read_text())["serial"] == 3


@pytest.mark.parametrize("act, words", [
    (lambda path, kid: key_file.make(path), "is there already"),
    (lambda path, kid: key_file.revoke(path, kid, "because"), "only valid key"),
    (lambda path, kid: key_file.revoke(path, "nobody", "because"), "has no key nobody; it has"),
    (lambda path, kid: key_file.revoke(path, kid, " "), "--because is empty"),
    (lambda path, kid: key_file.add(path.with_name("absent.json")), "cut --new"),
    (lambda path, kid: key_file.make(path.parent / "absent" / "keys.json"), "cannot be written")])
def test_what_cannot_be_done_to_a_key_file(path, act, words):
    kid, = ring_of(path).keys
    before = path.read_bytes()
    with pytest.raises(KeyFault, match=words):
        act(path, kid)
    assert path.read_bytes() == before


OTHER = KeyRing.ephemeral()


def first_key(data):
    return data["keys"][0]


@pytest.mark.parametrize("change, words", [
    (lambda d: d.pop("serial"), "serial is absent"), (lambda d: d.update(serial="1"), "a whole number from 1"), (lambda d: d.update(serial=True), "a whole number"),
    (lambda d: d.update(serial=0), "a whole number"), (lambda d: d.pop("keys"), "keys is absent; a list"), (lambda d: d.update(keys=[]), "there is no key"),
    (lambda d: d.pop("revoked"), "revoked is absent"), (lambda d: d.update(revoked=[{"kid": "a"}]), r"revoked\[0\].because is absent"),
    (lambda d: d.update(revoked=[{"kid": first_key(d)["kid"], "because": "x"}]), "every key is revoked"),
    (lambda d: first_key(d).pop("d"), "is a public key; sealing needs the private one"),
    (lambda d: first_key(d).update(crv="X25519"), 'crv is "X25519"; "Ed25519" is right'),
    (lambda d: first_key(d).update(crv="Ed448"), "Ed25519"), (lambda d: first_key(d).update(kty="EC"), 'kty is "EC"'),
    (lambda d: first_key(d).update(alg="EdDSA"), "alg"),
    (lambda d: first_key(d).update(x="short"), "43 base64url"), (lambda d: first_key(d).update(d="short"), "d is not the private key"),
    (lambda d: first_key(d).update(kid="mine"), "thumbprint"), (lambda d: first_key(d).update(use="enc"), "use"),
    (lambda d: first_key(d).update(d=next(iter(OTHER.keys.values())).as_dict(private=True)["d"]), "another key than x"),
    (lambda d: d.update(keys=[sealing.EXAMPLE]), "example key of RFC 8037"), (lambda d: d.update(keys=["key"]), r"keys\[0\] is \"key\"")])
def test_key_files_that_cannot_be_used(path, change, words):
    data = json.loads(path.read_text())
    secret = first_key(data)["d"]
    change(data)
    path.write_text(json.dumps(data))
    with pytest.raises(KeyFault, match=words) as fault:
        KeyRing.read(path)
    assert str(path) in str(fault.value) and secret not in str(fault.value)


@pytest.mark.parametrize("content, words", [(b"{", "is not JSON"), (b"[]", "is \\[\\]"), (b"\xff", "is not JSON")])
def test_a_key_file_that_is_none(tmp_path, content, words):
    (tmp_path / "keys.json").write_bytes(content)
    with pytest.raises(KeyFault, match=words):
        KeyRing.read(tmp_path / "keys.json")


@pytest.mark.parametrize("change", [
    lambda d: d.update(serial=1.5), lambda d: d.update(keys=None), lambda d: d.update(revoked=None), lambda d: d.pop("development"),
    lambda d: first_key(d).update(d="A" * 43), lambda d: first_key(d).update(x="A" * 42 + "!"), 
    lambda d: first_key(d).update(kid="other"), lambda d: first_key(d).update(crv="P-256")])
def test_a_malformed_key_list_is_refused(ring, change):
    data = json.loads(ring.key_list().bytes)
    change(data)
    with pytest.raises(Refused) as refused:
        KeyList.read(json.dumps(data).encode())
    assert refused.value.code == "malformed-keys"


def test_another_library_call_reads_our_seals(ring):
    # The same seal through joserfc's own reader of the flattened form, with the payload put back.
    registry = jws.JWSRegistry(algorithms=["Ed25519"])
    registry.max_payload_length = len(BUNDLE)
    for signature, key in zip(json.loads(sealing.seal(BUNDLE, ring))["signatures"], ring.keys.values(), strict=True):
        public = OKPKey.import_key(key.as_dict(private=False))
        jws.deserialize_json({"payload": BUNDLE.decode(), **signature}, public, registry=registry)

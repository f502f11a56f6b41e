"""Response bodies that the rule set does not describe itself, as marshmallow schemas. All open: a release may add members."""
from marshmallow import INCLUDE, Schema, fields, validate

_MOST = 2 ** 31 - 1


class Open(Schema):
    """Base of every response: unknown members are possible."""

    class Meta:
        unknown = INCLUDE


def text(description, **more):
    """A required string."""
    return fields.String(required=True, metadata={"description": description, **more})


def number(description):
    """A required count."""
    return fields.Integer(required=True, validate=validate.Range(min=0, max=_MOST), metadata={"description": description, "format": "int32"})


def many(inner, description):
    """A required list."""
    return fields.List(inner, required=True, metadata={"description": description})


class Fault(Open):
    """One fault of a request."""

    pointer = fields.String(metadata={"description": "JSON pointer (RFC 6901) of the place in the body; empty for the whole body"})
    parameter = fields.String(metadata={"description": "Name of the query parameter, where the fault is there"})
    code = text("Kind of fault; `/problems/<code>` explains it", examples=["out-of-range"])
    detail = text("What was found, and what would be right")


class Problem(Open):
    """Why a request was refused (RFC 9457)."""

    type = text("Kind of problem, an address that explains it", format="uri-reference", examples=["/problems/invalid-input"])
    title = text("The kind in words")
    status = fields.Integer(required=True, validate=validate.Range(min=400, max=599), metadata={"description": "The HTTP status", "format": "int32"})
    detail = text("This case in words")
    errors = fields.List(fields.Nested(Fault), metadata={"description": "Every fault found"})
    traceparent = fields.String(metadata={"description": "The caller's trace context, echoed"})


class Identity(Open):
    """A rule set's name."""

    version = text("Version", examples=["1.0.0"])
    digest = text("SHA-256 of the bundle's bytes", pattern="^sha-256:[0-9a-f]{64}$")


class Retirement(Identity):
    """Whether a rule set is still for new checks. All null: it is."""

    deprecated = fields.Date(required=True, allow_none=True, metadata={"description": "Date from which another rule set is advised"})
    sunset = fields.Date(required=True, allow_none=True, metadata={"description": "Date from which it is not for new checks"})
    because = fields.Dict(keys=fields.String(), values=fields.String(), required=True, allow_none=True, metadata={"description": "Reason by language"})


class RuleSetRow(Retirement):
    """One row of the list of rule sets."""

    href = text("Address of the rule set", format="uri-reference")


class RuleSetList(Open):
    """Released rule sets in the order of their release."""

    latest = text("Version that answers where none is named")
    rule_sets = many(fields.Nested(RuleSetRow), "Every released rule set")


class BundleLink(Open):
    """Where a bundle is."""

    href = text("Address of the exact bytes", format="uri-reference")
    bytes = number("Length of the bundle")


class SealLink(Open):
    """Where a seal is, and the keys that it is made with."""

    href = text("Address of the seal", format="uri-reference")
    keys = text("Address of the key list", format="uri-reference")


class RuleSet(Retirement):
    """One released rule set. Its bytes never change."""

    language = number("Version of the rule language")
    title = fields.Dict(keys=fields.String(), values=fields.String(), required=True, metadata={"description": "Title by language"})
    checks = many(fields.String(), "Names of its checks")
    catalogues = many(fields.String(), "Names of its catalogues")
    cases = number("Worked cases it carries, with their answers")
    bundle = fields.Nested(BundleLink, required=True)
    seal = fields.Nested(SealLink, required=True)


class Signature(Open):
    """One signature, by one key."""

    protected = text("Header in base64url: alg, b64, crit, kid, typ", pattern="^[A-Za-z0-9_-]+$")
    signature = text("64 bytes in base64url", pattern="^[A-Za-z0-9_-]{86}$")


class Seal(Open):
    """A detached JWS in general JSON form."""

    signatures = many(fields.Nested(Signature), "One for each valid key")


class PublicKey(Open):
    """A public key (RFC 7517, RFC 8037)."""

    kty = text("Always `OKP`")
    crv = text("Always `Ed25519`")
    x = text("The key in base64url", pattern="^[A-Za-z0-9_-]{43}$")
    kid = text("Its SHA-256 thumbprint (RFC 7638)", pattern="^[A-Za-z0-9_-]{43}$")
    alg = text("Always `Ed25519` (RFC 9864)")
    use = text("Always `sig`")


class RevokedKey(Open):
    """A key that never again vouches for anything."""

    kid = text("Name of the key")
    because = text("Reason")


class KeyList(Open):
    """Who may vouch for a rule set."""

    serial = number("Rises with every change")
    keys = many(fields.Nested(PublicKey), "The valid keys")
    revoked = many(fields.Nested(RevokedKey), "The revoked keys")
    development = fields.Boolean(required=True, metadata={"description": "True for a key that is gone with its server"})


class CatalogueRow(Open):
    """One row of the list of catalogues."""

    name = text("Name, as in the address")
    title = text("Title in the language asked for")
    entries = number("Number of entries")
    href = text("Address of the catalogue", format="uri-reference")


class CatalogueList(Open):
    """Catalogues of a rule set."""

    rule_set = fields.Nested(Identity, required=True)
    catalogues = many(fields.Nested(CatalogueRow), "Every catalogue")


class Origin(Open):
    """Where a value comes from."""

    source = text("Cited work and place")
    standing = text("How well the value is known: text, secondary, computed, convention, practice, informal or memory")


class Entry(Open):
    """An entry of a catalogue, stated as a question would state it."""

    id = text("Id, to be named in a question")
    catalogue = text("Name of its catalogue")
    title = text("Title in the language asked for")
    data = fields.Dict(keys=fields.String(), required=True, metadata={"description": "Values by key; the unit is part of the key"})
    origins = fields.Dict(keys=fields.String(), values=fields.Nested(Origin), required=True, metadata={"description": "Origin of each value, by the same key"})


class EntryAlone(Entry):
    """One entry, with the rule set that holds it."""

    rule_set = fields.Nested(Identity, required=True)


class Catalogue(Open):
    """One catalogue with all its entries."""

    rule_set = fields.Nested(Identity, required=True)
    name = text("Name, as in the address")
    title = text("Title in the language asked for")
    entries = many(fields.Nested(Entry), "Every entry, in order of id")


class CheckRow(Open):
    """One row of the list of checks."""

    name = text("Name, as in the address")
    title = text("Title in the language asked for")
    question = text("The question it answers")
    href = text("Address of the check", format="uri-reference")


class CheckList(Open):
    """Checks of a rule set."""

    rule_set = fields.Nested(Identity, required=True)
    checks = many(fields.Nested(CheckRow), "Every check")


class CheckDescription(Open):
    """What a check asks for and answers, as its rule set declares it, in every language."""

    rule_set = fields.Nested(Identity, required=True)
    name = text("Name of the check")
    title = fields.Dict(keys=fields.String(), values=fields.String(), required=True)
    question = fields.Dict(keys=fields.String(), values=fields.String(), required=True)
    branch = text("Name of the choice that decides which inputs apply")
    inputs = many(fields.Dict(), "Inputs in order: key, kind, unit, range, choices, what is assumed where absent")
    catalogues = fields.Dict(keys=fields.String(), values=fields.Dict(), required=True, metadata={"description": "Kinds that an input may refer to, with their fields and ids"})
    results = many(fields.Dict(), "Numbers of the answer: key, unit, meaning, formula, source")
    findings = many(fields.Dict(), "Findings from severe to mild: code, verdict, condition, sentence")
    units = fields.Dict(keys=fields.String(), values=fields.Dict(), required=True, metadata={"description": "Symbols and factors to SI of the units"})


class Alive(Open):
    """The process answers."""

    status = text("Always `alive`")


class Ready(Open):
    """Known questions were answered as they must be."""

    status = text("Always `ready`")
    rule_set = fields.Nested(Identity, required=True)

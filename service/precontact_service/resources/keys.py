"""The keys that may vouch for a rule set, and the seal of their list."""
from flask import request
from flask_smorest import Blueprint

from ..openapi import keys as documented
from ..parameters import query
from ..reply import REVALIDATE, represented
from ..seals import SEALS


def blueprint(seals):
    """Routes of the key list."""
    made = Blueprint("keys", __name__, url_prefix="/v1/keys", description="Who vouches for the rule sets: public keys, rotated and revoked by newer lists")
    made.add_url_rule("", "list", documented.listing(made, _keys(seals)))
    made.add_url_rule("/seal", "seal", documented.seal(made, _seal(seals)))
    return made


def _keys(seals):
    def list_keys():
        query()
        return represented(request.environ.get(SEALS, seals).keys, REVALIDATE)

    return list_keys


def _seal(seals):
    def keys_seal():
        query()
        return represented(request.environ.get(SEALS, seals).keys_seal, REVALIDATE)

    return keys_seal

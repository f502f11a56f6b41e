"""English or Spanish, by Accept-Language (RFC 9110, 12.5.4)."""
from functools import lru_cache

from werkzeug.datastructures import LanguageAccept
from werkzeug.http import parse_accept_header

LANGUAGES = ("en", "es")
_LONGEST = 200      # a longer header is read as far as this


def chosen(environ):
    """The language of the answer."""
    accepted = environ.get("HTTP_ACCEPT_LANGUAGE")
    return LANGUAGES[0] if accepted is None else _best(accepted[:_LONGEST])


@lru_cache(maxsize=512)
def _best(accepted):
    # A region is no reason to change the language: es-MX is Spanish, and comes before an English that is wanted less.
    wanted = [(tag.partition("-")[0], quality) for tag, quality in parse_accept_header(accepted)]
    return LanguageAccept(wanted).best_match(LANGUAGES, default=LANGUAGES[0])

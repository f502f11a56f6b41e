"""Pages for people: every operation with its examples, and what each kind of problem means. No script, nothing from elsewhere."""
import re
from functools import lru_cache
from pathlib import Path

import orjson
from flask import Blueprint, render_template
from markupsafe import Markup, escape
from precontact_rules.sealing import field

from ..openapi import page
from ..parameters import query
from ..problem_types import TYPES
from ..problems import ProblemError
from ..reply import JSON, content_response

_HTML = "text/html; charset=utf-8"
_STYLE = Path(__file__).parent.parent / "static" / "style.css"


def blueprint(document):
    """Routes of the pages and of the OpenAPI document; `document()` gives it with the answers kept beside it."""
    made = Blueprint("pages", __name__, template_folder="../templates")

    made.add_app_template_filter(_with_code, "code")

    @lru_cache(maxsize=1)
    def document_bytes():
        return orjson.dumps(document()[0])

    @lru_cache(maxsize=1)
    def page_bytes():
        return render_template("api.html", field_page="index.html" in field.page_files(), **page.view(document()[0])).encode()

    @lru_cache(maxsize=len(TYPES))
    def problem_bytes(code):
        return render_template("problem.html", code=code, kind=TYPES[code]).encode()

    @made.get("/v1/openapi.json")
    def openapi():
        query()
        return content_response(document_bytes(), JSON)

    @made.get("/v1/examples/<string:name>.json")
    def example(name):
        query()
        if name not in document()[1]:
            raise ProblemError("not-found", f"The document has no example {name[:80]!r} of its own address.")
        return content_response(document()[1][name], JSON)

    @made.get("/")
    def api_page():
        query()
        return content_response(page_bytes(), _HTML)

    @made.get("/problems/<string:code>")
    def problem_page(code):
        query()
        if code not in TYPES:
            raise ProblemError("not-found", f"No kind of problem is named {code[:80]!r}; there are {', '.join(TYPES)}.")
        return content_response(problem_bytes(code), _HTML)

    @made.get("/style.css")
    def style():
        query()
        return content_response(_STYLE.read_bytes(), "text/css; charset=utf-8")

    return made


def _with_code(text):
    """Words in backticks as code."""
    return Markup(re.sub(r"`([^`]+)`", r"<code>\1</code>", str(escape(text))))

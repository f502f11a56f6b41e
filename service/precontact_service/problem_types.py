"""Every kind of problem that a response can name: its HTTP status, and what its page says. `/problems/<code>` shows it."""
from typing import NamedTuple


class ProblemType(NamedTuple):
    """`status` is None for the code of one fault in a list of faults."""

    status: int | None
    title: str
    meaning: str
    remedy: str


TYPES = {
    "malformed-body": ProblemType(
        400, "The body is not acceptable JSON",
        "The body could not be read as one JSON value with one meaning: it is empty, not UTF-8, not JSON, names a key twice, holds a "
        "number that does not exist, or is nested too deep.",
        "Correct what `errors` names. Nothing was computed."),
    "bad-request": ProblemType(
        400, "The request could not be read", "The request line, a header or the transfer of the body is not valid HTTP.",
        "Send the request with an ordinary HTTP client."),
    "not-found": ProblemType(
        404, "Nothing here", "No resource has this address.", "The detail lists what there is; `/` describes every address."),
    "method-not-allowed": ProblemType(
        405, "The method is not allowed here", "The resource exists and does not answer this method.", "The `Allow` header lists those that it answers."),
    "precondition-failed": ProblemType(
        412, "The resource is not the one you named", "`If-Match` names another version than the one at this address.",
        "Fetch the resource and compare its `ETag`."),
    "body-too-large": ProblemType(
        413, "The body is too large", "The body is longer than this service reads.", "Send one question per request; the detail gives the limit."),
    "unsupported-media-type": ProblemType(
        415, "The body is not declared as JSON", "The `Content-Type` is missing or is not `application/json`, or the body is compressed.",
        "Send `Content-Type: application/json` and the body as it is."),
    "invalid-input": ProblemType(
        422, "The input cannot be used", "The body is JSON, and something in it is not what the check asks for.",
        "`errors` lists every fault with its place, what was found, and what would be right. `GET /v1/checks/<name>` describes the inputs."),
    "internal-error": ProblemType(
        500, "The service failed", "A fault in the service, not in the request. It has been logged.", "Repeat the request; report it with the `traceparent` if it stays."),
    "not-ready": ProblemType(
        503, "The service is not ready", "A known question is not answered as its rule set says it must be.", "Do not send questions to this instance."),

    "empty-body": ProblemType(None, "Empty body", "No JSON was sent.", "Send one JSON object."),
    "byte-order-mark": ProblemType(None, "Byte order mark", "The text starts with U+FEFF.", "Save or send the text without it."),
    "not-utf-8": ProblemType(None, "Not UTF-8", "A byte of the body cannot be UTF-8.", "Encode the body as UTF-8."),
    "not-json": ProblemType(None, "Not JSON", "The text breaks the grammar of RFC 8259.", "The detail names line and column."),
    "duplicate-key": ProblemType(
        None, "Key given twice", "One object holds the same key more than once, so it has two meanings.", "Give each key once."),
    "too-deep": ProblemType(None, "Nested too deep", "More levels of objects and lists than any question needs.", "Send the object that the check describes."),
    "not-finite": ProblemType(None, "Not a finite number", "NaN, an infinity, or a number beyond binary64.", "Give a finite number, or leave the key out."),
    "unknown-field": ProblemType(None, "Unknown field", "The object has no such member.", "The detail lists the members. Units are part of a key: `voltage_volt`."),
    "missing": ProblemType(None, "Missing", "A value is needed that was not given.", "Give it; nothing is guessed."),
    "wrong-type": ProblemType(None, "Wrong type", "The value is of another JSON type. A number in quotes is not a number.", "Give the type that the detail names."),
    "out-of-range": ProblemType(None, "Out of range", "The number lies outside what the field admits.", "The detail gives the range and the unit."),
    "unknown-choice": ProblemType(None, "Unknown choice", "The word is not one of the choices.", "The detail lists them."),
    "unknown-id": ProblemType(None, "Unknown id", "No entry of the catalogue, and no released rule set, has this id.", "`GET /v1/catalogues` and `GET /v1/rule-sets` list them."),
    "unknown-parameter": ProblemType(None, "Unknown parameter", "The address takes no such query parameter.", "The detail lists those it takes."),
    "not-applicable": ProblemType(None, "Does not apply", "The field belongs to another branch of the question and contradicts the chosen one.", "Leave it out, or choose its branch."),
    "two-spreads": ProblemType(None, "Two spreads", "One number is given two different uncertainties.", "Give one."),
    "not-uncertain": ProblemType(None, "No spread here", "The field takes a plain number only.", "Give the number alone."),
    "too-many-items": ProblemType(None, "Too many items", "The list is longer than the check admits.", "Split the question."),
    "too-many-uncertain": ProblemType(None, "Too many uncertain numbers", "More numbers are given with a spread than can be weighed together.",
                                      "Give those that matter least alone, without a spread."),
    "too-few-items": ProblemType(None, "Too few items", "The list is shorter than the check needs.", "Add items."),
    "too-long": ProblemType(None, "Too long", "The text is longer than the field admits.", "Shorten it."),
    "bad-characters": ProblemType(None, "Unprintable characters", "The text holds a control or other unprintable character.", "Send plain text on one line."),
}

BY_STATUS = {kind.status: code for code, kind in TYPES.items() if kind.status and code != "malformed-body"}

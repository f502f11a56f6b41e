"""Declared inputs and catalogue fields, from source to bundle."""
from . import units
from .reader import Map

_COMMON = ("meaning", "required", "only", "assume")
_FORMS = {
    "unit": ("number", ("unit", "least", "most", "above", "below", "uncertain")),
    "choices": ("choice", ("choices",)),
    "switch": ("switch", ("switch",)),
    "text": ("text", ("text",)),
    "reference": ("reference", ("reference",)),
    "curve": ("curve", ("curve", "between", "below", "above")),
    "item": ("list", ("item", "fields", "least", "most")),
    "fields": ("group", ("fields",)),
}


def declared(source, mapping, branches, inside=None):
    """FIELD records of a mapping of fields; `branches` are the keys that `only` may name, `inside` list or None."""
    made = []
    for name, content in mapping.items():
        if not isinstance(content, Map):
            source.fault(mapping.file, mapping.at(name), f"the field {name!r} is not a mapping", "unit, choices, switch, text, reference, curve, fields or item")
            continue
        if not name.replace("_", "a").isalnum() or name != name.lower():
            source.fault(mapping.file, mapping.at(name), f"the name {name!r}", "lower case with underscores")
        made.append(_field(source, name, content, branches, inside))
    return [field for field in made if field]


def _field(source, name, content, branches, inside):
    form = next((form for form in _FORMS if form in content), None)
    if form is None:
        source.fault(content.file, content.line, f"the field {name!r} has no form", f"one of {', '.join(_FORMS)}")
        return None
    kind, own = _FORMS[form]
    source.keys(content, _COMMON + own)
    field = {"name": name, "key": name, "kind": kind, "meaning": source.text(content, "meaning"), "required": bool(content.get("required", False))}
    if "only" in content:
        field["only"] = _branches(source, content, branches)
    if field["required"] and "assume" in content:
        source.fault(content.file, content.at("assume"), "both required and assume", "one of them")
    _MAKERS[kind](source, field, content, branches, inside)
    if kind in ("number", "choice", "switch") and "assume" in content:
        field["assume"] = _assumed(source, field, content["assume"])
    return field


def _branches(source, content, branches):
    for key in content["only"]:
        if key not in branches:
            source.fault(content.file, content.at("only"), f"only names {key!r}", f"a branch: {', '.join(branches) or 'a kind has none'}")
    return list(content["only"])


def _number(source, field, content, branches, inside):
    unit = content["unit"]
    if units.dimension(unit) is None:
        source.fault(content.file, content.at("unit"), f"the unit {unit!r}", f"one of {', '.join(units.names())}")
        unit = "ratio"
    field.update(unit=unit, key=f"{field['name']}_{unit}", uncertain=bool(content.get("uncertain", False)))
    for bound in ("least", "most", "above", "below"):
        if bound in content:
            if isinstance(content[bound], bool) or not isinstance(content[bound], (int, float)):
                source.fault(content.file, content.at(bound), f"{bound}: {content[bound]!r}", "a number in the field's own unit")
                continue
            field[bound] = content[bound]
    low, high = field.get("least", field.get("above")), field.get("most", field.get("below"))
    if low is not None and high is not None and low > high:
        source.fault(content.file, content.line, f"a range from {low} to {high}", "the lower bound first")


def _choice(source, field, content, branches, inside):
    field["choices"] = []
    for key, meaning in content["choices"].items():
        choice = {"key": key, "meaning": {"en": meaning.get("en", ""), "es": meaning.get("es", "")}}
        if not (choice["meaning"]["en"] and choice["meaning"]["es"]):
            source.fault(content.file, content["choices"].at(key), f"the choice {key!r} lacks a language", "{en: ..., es: ...}")
        if "only" in meaning:
            choice["only"] = _branches(source, meaning, branches)
        field["choices"].append(choice)


def _switch(source, field, content, branches, inside):
    pass


def _text(source, field, content, branches, inside):
    field["longest"] = content["text"]


def _reference(source, field, content, branches, inside):
    field["of"] = content["reference"]
    if field["of"] not in source.kinds:
        source.fault(content.file, content.at("reference"), f"the kind {field['of']!r}", f"one of {', '.join(source.kinds)}")


def _curve(source, field, content, branches, inside):
    field["units"] = list(content["curve"])
    for unit in field["units"]:
        if units.dimension(unit) is None:
            source.fault(content.file, content.at("curve"), f"the unit {unit!r}", f"one of {', '.join(units.names())}")
    for key, allowed in (("between", ("linear", "step")), ("below", ("absent", "hold")), ("above", ("absent", "hold"))):
        field[key] = content.get(key)
        if field[key] not in allowed:
            source.fault(content.file, content.line, f"{key}: {field[key]!r}", " or ".join(allowed))


def _group(source, field, content, branches, inside):
    field["fields"] = declared(source, content["fields"], branches, inside)
    _hand_down(field)


def _hand_down(field):
    # What restricts a group or a list restricts its fields.
    for inner in field["fields"]:
        if "only" in field:
            inner["only"] = [b for b in inner.get("only", field["only"]) if b in field["only"]]


def _list(source, field, content, branches, inside):
    if inside:
        source.fault(content.file, content.line, "a list inside a list", "lists stand at the top")
    field.update(item=content["item"], least=content.get("least", 0), most=content.get("most", 16))
    field["fields"] = declared(source, content["fields"], branches, "list")
    _hand_down(field)
    for inner in field["fields"]:
        if inner["kind"] in ("group", "list", "curve"):
            source.fault(content.file, content.line, f"a {inner['kind']} inside the list", "numbers, choices, switches, texts, references")


_MAKERS = {"number": _number, "choice": _choice, "switch": _switch, "text": _text, "reference": _reference, "curve": _curve, "group": _group, "list": _list}


def _assumed(source, field, content):
    if not isinstance(content, Map):
        return None
    source.keys(content, ("value", "unit", "because", "source", "standing", "cautious_in"), ("value", "because", "source", "standing"))
    value = content.get("value")
    if field["kind"] == "number":
        if isinstance(value, bool) or not isinstance(value, (int, float)):
            source.fault(content.file, content.line, f"assumes {value!r}", "a number")
            value = 0
        if content.get("unit", field["unit"]) != field["unit"]:
            source.fault(content.file, content.at("unit"), f"assumes in {content['unit']}", f"the field's own unit, {field['unit']}")
    elif field["kind"] == "choice" and value not in [c["key"] for c in field["choices"]]:
        source.fault(content.file, content.at("value"), f"assumes {value!r}", "one of the field's choices")
    return {"value": value, "because": source.text(content, "because"), **source.origin(content)}

"""Constants, tables, entries and cautions, from source to bundle."""
from . import units
from .reader import Map, Seq

WORDS = ("danger", "warning", "caution", "notice")
_ORIGIN = ("source", "standing", "cautious_in")
_SPREADS = ("half_width", "half_width_percent", "standard_uncertainty")


def si(source, value, mapping, key, unit, target):
    """A number of a data file in SI, or 0 after a fault."""
    if isinstance(value, bool) or not isinstance(value, (int, float)):
        source.fault(mapping.file, mapping.at(key), f"{value!r} is not a number", f"a number of {unit}")
        return 0.0
    try:
        return units.to_si(value, unit, target)
    except ValueError as error:
        source.fault(mapping.file, mapping.at("unit"), str(error), f"a unit of {target}")
        return 0.0


def constants(source, mapping, prefix=""):
    """Named constants with their origin."""
    made = {}
    for name, content in mapping.items():
        if not isinstance(content, Map):
            source.fault(mapping.file, mapping.at(name), f"the constant {name!r} is a bare value", "{value, unit, source, standing, meaning}")
            continue
        source.keys(content, ("value", "unit", "meaning") + _ORIGIN, ("value", "unit"))
        unit = content.get("unit")
        target = unit if units.dimension(unit) is not None else None
        if target is None:
            target = next((u for u in ("volt", "ampere", "ohm", "farad", "second", "metre", "hertz") if _fits(unit, u)), "ratio")
        made[prefix + name] = {"value": si(source, content.get("value"), content, "value", unit, target), "unit": target,
                               "meaning": source.text(content, "meaning"), **source.origin(content)}
    return made


def _fits(unit, target):
    try:
        units.to_si(1, unit, target)
        return True
    except (ValueError, TypeError):
        return False


def table(source, mapping):
    """A table in SI; the first column is the one looked up."""
    source.keys(mapping, ("meaning", "columns", "rows", "between", "below", "above", "hold_because") + _ORIGIN, ("columns", "rows", "between", "below", "above"))
    columns, rows = mapping.get("columns", Map()), mapping.get("rows", [])
    made = {"columns": [], "data": {}, "meaning": source.text(mapping, "meaning"), **source.origin(mapping)}
    for key in ("between", "below", "above"):
        made[key] = mapping.get(key)
    if "hold" in (made["below"], made["above"]):
        made["hold_because"] = source.text(mapping, "hold_because")
    for place, (name, column) in enumerate(columns.items()):
        unit = column.get("unit")
        target = unit if units.dimension(unit) is not None else None
        if target is None:
            source.fault(mapping.file, columns.at(name), f"the unit {unit!r}", f"one of {', '.join(units.names())}")
            target = unit = "ratio"
        made["columns"].append({"name": name, "unit": target})
        values = []
        for number, row in enumerate(rows):
            if not isinstance(row, Seq) or len(row) != len(columns):
                source.fault(mapping.file, rows.at(number), f"a row of {len(row) if isinstance(row, Seq) else 1} values", f"{len(columns)}, one per column")
                return made
            values.append(units.to_si(row[place], unit, target))
        made["data"][name] = values
    first = next(iter(made["data"].values()), [])
    for number, (a, b) in enumerate(zip(first, first[1:])):
        if a >= b:
            source.fault(mapping.file, rows.at(number + 1), f"{b} after {a} in the first column", "a column that rises strictly")
    return made


def entry(source, kind_fields, mapping):
    """One catalogue entry against the fields of its kind."""
    source.keys(mapping, ("title", "fields"), ("title", "fields"))
    made = {"title": source.text(mapping, "title"), "fields": {}}
    known = {field["name"]: field for field in kind_fields}
    content = mapping.get("fields", Map())
    source.keys(content, list(known))
    for name, value in content.items():
        if name in known:
            made["fields"][name] = _VALUES[known[name]["kind"]](source, known[name], value, content)
    for field in kind_fields:
        if field["required"] and field["name"] not in content:
            source.fault(mapping.file, mapping.at("fields"), f"no {field['name']!r}", "the kind requires it")
    return made


def _number(source, field, value, content):
    if not isinstance(value, Map):
        source.fault(content.file, content.at(field["name"]), f"{field['name']} is a bare value", "{value, unit, source, standing}")
        return {"value": 0.0, "source": "", "standing": "memory"}
    source.keys(value, ("value", "unit", "between") + _SPREADS + _ORIGIN, ("unit",))
    unit, target = value.get("unit"), field["unit"]
    made = {}
    if "between" in value:
        low, high = (si(source, v, value, "between", unit, target) for v in value["between"])
        made.update(value=low + (high - low) * 0.5, half_width=(high - low) * 0.5)
    else:
        made["value"] = si(source, value.get("value"), value, "value", unit, target)
    for key in _SPREADS:
        if key == "half_width_percent" and key in value:
            made["half_width"] = abs(made["value"]) * (value[key] / 100.0)
        elif key in value:
            made[key] = si(source, value[key], value, key, unit, target)
    if len([k for k in _SPREADS + ("between",) if k in value]) > 1:
        source.fault(content.file, content.at(field["name"]), "two spreads", "one of half_width, half_width_percent, standard_uncertainty, between")
    return {**made, **source.origin(value)}


def _choice(source, field, value, content):
    keys = [c["key"] for c in field["choices"]]
    if value not in keys:
        source.fault(content.file, content.at(field["name"]), f"{field['name']}: {value!r}", f"one of {', '.join(keys)}")
    return value


def _switch(source, field, value, content):
    if not isinstance(value, bool):
        source.fault(content.file, content.at(field["name"]), f"{field['name']}: {value!r}", "true or false")
    return bool(value)


def _text(source, field, value, content):
    return source.text(content, field["name"]) if isinstance(value, Map) else str(value)


def _curve(source, field, value, content):
    if not isinstance(value, Map):
        source.fault(content.file, content.at(field["name"]), f"{field['name']} is not a curve", "{points: [[x, y], ...], source, standing}")
        return {"points": []}
    source.keys(value, ("points", "units") + _ORIGIN, ("points",))
    given = value.get("units", field["units"])
    points = [[units.to_si(v, unit, target) for v, unit, target in zip(point, given, field["units"])] for point in value.get("points", [])]
    if any(a[0] >= b[0] for a, b in zip(points, points[1:])):
        source.fault(content.file, value.at("points"), "points that do not rise", "every x above the one before")
    return {"points": points, **source.origin(value)}


_VALUES = {"number": _number, "choice": _choice, "switch": _switch, "text": _text, "curve": _curve}


def caution(source, mapping):
    """One caution."""
    source.keys(mapping, ("word", "text", "source", "standing"), ("word", "text", "source"))
    if mapping.get("word") not in WORDS:
        source.fault(mapping.file, mapping.at("word"), f"the signal word {mapping.get('word')!r}", f"one of {', '.join(WORDS)} (ANSI Z535.4)")
    return {"word": mapping.get("word"), "text": source.text(mapping, "text"), "source": source.source(mapping)}

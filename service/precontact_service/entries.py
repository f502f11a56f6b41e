"""A catalogue entry as a question would state it: in the units of its keys, with the origin of every value beside it."""


def shown(bundle, kind, id_, language):
    """The entry of a kind as JSON data. `data` may be sent back as the data of a question."""
    entry = bundle["entries"][kind][id_]
    data, origins = {}, {}
    for field in bundle["kinds"][kind]["fields"]:
        stored = entry["fields"].get(field["name"])
        if stored is None:
            continue
        key = field["key"]
        data[key] = _value(field, stored, bundle["units"], language)
        if isinstance(stored, dict) and "source" in stored:
            origins[key] = {"source": stored["source"], "standing": stored["standing"]}
    return {"id": id_, "catalogue": bundle["kinds"][kind]["folder"], "title": entry["title"][language], "data": data, "origins": origins}


def _value(field, stored, units, language):
    if field["kind"] == "number":
        factor = units[field["unit"]]["factor"]
        number = _scaled(stored["value"], factor)
        for spread in ("half_width", "standard_uncertainty"):
            if stored.get(spread):
                return {"value": number, spread: _scaled(stored[spread], factor)}
        return number
    if field["kind"] == "curve":
        x, y = (units[unit]["factor"] for unit in field["units"])
        return [[_scaled(a, x), _scaled(b, y)] for a, b in stored["points"]]
    if field["kind"] == "text" and isinstance(stored, dict):
        return stored[language]
    return stored


def _scaled(value, factor):
    return value if factor == 1 else value / factor

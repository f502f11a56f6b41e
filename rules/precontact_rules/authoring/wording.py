"""Whether the places in a sentence can be filled."""
from ..phrase import Template


def place_faults(sentence, scope, inference):
    """[(found, expected), ...] of a sentence's places; names that are legal are marked as used."""
    found = []
    for kind, content in Template(sentence).parts:
        if kind == "name":
            found.extend(_name(content, scope, inference))
        elif kind == "list":
            found.extend(_listed(*content, scope, inference))
    return found


def _name(name, scope, inference):
    scope.used.add(name)
    if name in scope.references or name in scope.texts or name in scope.constants:
        return []
    if name in scope.formulas or name in scope.inputs:
        axes = (inference.formula(name) if name in scope.formulas else scope.inputs[name]).axes - {"samples"}
        return [(f"{{{name}}} runs along {', '.join(sorted(axes))}", "a single value, or {axis.label | condition}")] if axes else []
    return [(f"the place {{{name}}}", "a formula, input, constant or reference of this check")]


def _listed(name, condition, scope, inference):
    axis = name.split(".")[0]
    scope.used.add(condition)
    if axis not in scope.axes:
        return [(f"the list {{{name} | {condition}}}", f"an axis: {', '.join(scope.axes)}")]
    if condition not in scope.formulas:
        return [(f"the condition {condition!r} of a list", "a boolean formula on that axis")]
    found = inference.formula(condition)
    if condition in inference.failed:
        return []          # already a fault of the formula
    if found.kind != "boolean" or "samples" in found.axes or found.axes - {axis}:
        return [(f"{condition} as the condition of a list", f"a boolean along {axis} alone, without samples")]
    return []

"""Reading one value of a request: a number, a choice, a switch, a text or a curve."""
import re
from operator import itemgetter

from .numbers import EXACT_WHOLE, number_reader
from .problems import Problem, shown

# Controls, spaces other than the plain one, the soft hyphen, marks that are not seen or change the direction of text, separators of lines,
# surrogates, private use, the noncharacters of the basic plane: written out, since what a runtime calls printable changes with its Unicode version.
_NOT_PRINTED = re.compile("[\0-\x1f\x7f-\xa0\xad\u061c\u1680\u180e\u2000-\u200f\u2028-\u202f\u205f-\u206f\u3000\ud800-\uf8ff"
                          "\ufdd0-\ufdef\ufeff\ufff0-\ufffb\ufffe\uffff\U000e0000-\U0010ffff]")


def reader(field, slot):
    """read(x, run, pointer) -> the value as the intake holds it, or None after a problem."""
    kind = field["kind"]
    if kind == "number":
        number = number_reader(slot)
        return lambda x, run, pointer: number(x, run.problems, pointer)
    if kind == "choice":
        return _choice_reader(field)
    if kind == "switch":
        return _switch_reader
    if kind == "text":
        return _text_reader(field["longest"])
    return _curve_reader(field)


def _choice_reader(field):
    only = {choice["key"]: choice.get("only") for choice in field["choices"]}
    listed = ", ".join(only)

    def read(x, run, pointer):
        if type(x) is not str or x not in only:
            code = "unknown-choice" if type(x) is str else "wrong-type"
            run.problems.append(Problem(pointer, code, f"{shown(x)} is not one of the choices; they are {listed}"))
        elif only[x] is not None and run.branch is not None and run.branch not in only[x]:
            run.problems.append(Problem(pointer, "not-applicable", f"{x} does not go with {run.branch}; it belongs to {', '.join(only[x])}"))
        else:
            return x
        return None

    return read


def _switch_reader(x, run, pointer):
    if type(x) is bool:
        return x
    run.problems.append(Problem(pointer, "wrong-type", f"{shown(x)} is neither true nor false"))
    return None


def _text_reader(longest):
    def read(x, run, pointer):
        if type(x) is not str:
            run.problems.append(Problem(pointer, "wrong-type", f"{shown(x)} is not text"))
        elif len(x) > longest:
            run.problems.append(Problem(pointer, "too-long", f"{len(x)} characters; at most {longest}"))
        elif _NOT_PRINTED.search(x):
            run.problems.append(Problem(pointer, "bad-characters", "holds a character that cannot be printed; plain text on one line is right"))
        else:
            return x or None
        return None

    return read


def _curve_reader(field):
    def read(x, run, pointer):
        fine = type(x) is list and 0 < len(x) <= 64 and all(
            type(p) is list and len(p) == 2 and all(type(c) in (int, float) and abs(c) <= EXACT_WHOLE for c in p) for p in x)
        if fine:
            # The points of a curve have one order, whatever order they come in; two at one x are a step there.
            return columns(sorted(x, key=itemgetter(0)))
        run.problems.append(Problem(pointer, "wrong-type", f"{shown(x)} is not a curve; give 1 to 64 pairs of numbers [[x, y], ...]"))
        return None

    return read


def columns(points):
    """[[x, y], ...] as two lists of floats."""
    return [float(x) for x, _ in points], [float(y) for _, y in points]

"""Formula text to tree: a strict subset of Python's expression grammar, read by Python's own parser."""
import ast

LITERALS = (0, 1, 2, 3, 4, 100, 0.5)
_BINARY = {ast.Add: "add", ast.Sub: "sub", ast.Mult: "mul", ast.Div: "div"}
_COMPARE = {ast.Eq: "eq", ast.NotEq: "ne", ast.Lt: "lt", ast.LtE: "le", ast.Gt: "gt", ast.GtE: "ge"}
_WORDS = {"pi": ["pi"], "absent": ["absent"], "true": ["true"], "false": ["false"]}

# name: number of arguments; "*" any number from one
FUNCTIONS = {
    "sqrt": 1, "abs": 1, "floor": 1, "exp": 1, "ln": 1, "sin": 1, "cos": 1, "min": 2, "max": 2, "complex": 2, "re": 1, "im": 1, "conj": 1,
    "abs_squared": 1, "given": 1, "first_of": "*", "uniform": 2, "probability": 1, "mean": 1, "low_end": 1, "high_end": 1,
}
# the first argument is an axis
AXIS_FUNCTIONS = {"any_over": 2, "all_over": 2, "count_over": 2, "sum_over": 2, "least_over": 2, "greatest_over": 2, "at_least": 3,
                  "at_greatest": 3, "size_of": 1, "index_of": 1}
# four arguments, one of which is an axis or a tuple of axes: the number of arguments, each one axis, before it
AXES_FUNCTIONS = {"weighted_quantile": 0, "at_share": 0, "spread_onto": 1}


class ExpressionFault(ValueError):
    """A formula that is not in the language: `column` (0-based), `found`, `expected`."""

    def __init__(self, node, found, expected):
        super().__init__(f"{found}; {expected}")
        self.column, self.found, self.expected = getattr(node, "col_offset", 0), found, expected


def parse(text):
    """The tree of an expression, names still as ["name", dotted]. Raises ExpressionFault."""
    flat = " ".join(str(text).split())
    try:
        body = ast.parse(flat, mode="eval").body
    except SyntaxError as error:
        raise ExpressionFault(None, f"not an expression: {flat!r} ({error.msg})", "see rules/README.md section 3") from None
    return _tree(body)


def _tree(node):
    handler = _HANDLERS.get(type(node))
    if handler is None:
        raise ExpressionFault(node, f"{ast.unparse(node)!r} is not part of the language", "see rules/README.md section 3")
    return handler(node)


def _constant(node):
    value = node.value
    if isinstance(value, str):
        return ["key", value]
    if isinstance(value, bool) or not isinstance(value, (int, float)):
        raise ExpressionFault(node, f"{value!r}", "write true, false or absent in lower case")
    if value not in LITERALS:
        raise ExpressionFault(node, f"the number {value!r} without a source", "a named constant, or one of 0, 1, 2, 3, 4, 100, 0.5")
    return value


def _name(node):
    return _WORDS.get(node.id) or ["name", node.id]


def _attribute(node):
    return ["name", dotted(node)]


def dotted(node):
    """The dotted name of a node. Raises ExpressionFault where it is something else."""
    parts = []
    while isinstance(node, ast.Attribute):
        parts.append(node.attr)
        node = node.value
    if not isinstance(node, ast.Name):
        raise ExpressionFault(node, f"{ast.unparse(node)!r} before a dot", "a name such as source.voltage")
    return ".".join([node.id, *reversed(parts)])


def _unary(node):
    if isinstance(node.op, ast.Not):
        return ["not", _tree(node.operand)]
    if not isinstance(node.op, ast.USub):
        raise ExpressionFault(node, f"{ast.unparse(node)!r}", "only - and not may stand before one value")
    if isinstance(node.operand, ast.BinOp) and isinstance(node.operand.op, ast.Pow) and node.operand.col_offset == node.col_offset + 1:
        raise ExpressionFault(node, f"{ast.unparse(node)!r} can be read two ways", "write -(a ** 2) or (-a) ** 2")
    return ["neg", _tree(node.operand)]


def _binary(node):
    if isinstance(node.op, ast.Pow):
        return _power(node)
    if type(node.op) not in _BINARY:
        raise ExpressionFault(node, f"the operator in {ast.unparse(node)!r}", "one of + - * / **")
    return [_BINARY[type(node.op)], _tree(node.left), _tree(node.right)]


def _power(node):
    power, sign = node.right, 1
    if isinstance(power, ast.UnaryOp) and isinstance(power.op, ast.USub):
        power, sign = power.operand, -1
    if not (isinstance(power, ast.Constant) and type(power.value) is int and 1 <= power.value <= 4):
        raise ExpressionFault(node, f"the power in {ast.unparse(node)!r}", "a whole literal power from 1 to 4, or its negative")
    return ["pow", _tree(node.left), sign * power.value]


def _comparison(node):
    if len(node.ops) > 1:
        raise ExpressionFault(node, f"{ast.unparse(node)!r} compares twice", "join two comparisons with `and`")
    operator, right = node.ops[0], node.comparators[0]
    if isinstance(operator, ast.In):
        keys = right.elts if isinstance(right, (ast.Tuple, ast.List)) else [right]
        if not all(isinstance(k, ast.Constant) and isinstance(k.value, str) for k in keys):
            raise ExpressionFault(right, f"{ast.unparse(right)!r} after in", 'choice keys: ("a", "b")')
        return ["in", _tree(node.left), [k.value for k in keys]]
    if type(operator) not in _COMPARE:
        raise ExpressionFault(node, f"the comparison {ast.unparse(node)!r}", "one of < <= > >= == != in")
    return [_COMPARE[type(operator)], _tree(node.left), _tree(right)]


def _boolean(node):
    op = "and" if isinstance(node.op, ast.And) else "or"
    result = _tree(node.values[0])
    for value in node.values[1:]:
        result = [op, result, _tree(value)]
    return result


def _conditional(node):
    return ["if", _tree(node.test), _tree(node.body), _tree(node.orelse)]


def _call(node):
    if not isinstance(node.func, ast.Name) or node.keywords:
        raise ExpressionFault(node, f"{ast.unparse(node)!r}", "a function of the language with plain arguments")
    name, arguments = node.func.id, node.args
    if name == "lookup" and len(arguments) == 2:
        return ["lookup", dotted(arguments[0]), _tree(arguments[1])]
    if name in AXES_FUNCTIONS and len(arguments) == 4:
        before = AXES_FUNCTIONS[name]
        axes = arguments[before].elts if isinstance(arguments[before], ast.Tuple) else [arguments[before]]
        return [name, *map(dotted, arguments[:before]), [dotted(a) for a in axes], *map(_tree, arguments[before + 1:])]
    expected = FUNCTIONS.get(name, AXIS_FUNCTIONS.get(name))
    if expected is None:
        raise ExpressionFault(node, f"the function {name!r}", f"one of {', '.join(sorted([*FUNCTIONS, *AXIS_FUNCTIONS, *AXES_FUNCTIONS, 'lookup']))}")
    if not arguments or (expected != "*" and len(arguments) != expected):
        raise ExpressionFault(node, f"{name} with {len(arguments)} arguments", f"{expected if expected != '*' else 'one or more'}")
    if name in AXIS_FUNCTIONS:
        return [name, dotted(arguments[0]), *map(_tree, arguments[1:])]
    return [name, *map(_tree, arguments)]


_HANDLERS = {ast.Constant: _constant, ast.Name: _name, ast.Attribute: _attribute, ast.UnaryOp: _unary, ast.BinOp: _binary,
             ast.Compare: _comparison, ast.BoolOp: _boolean, ast.IfExp: _conditional, ast.Call: _call}


def names_in(tree):
    """Dotted names that a tree mentions, axes and tables included."""
    found = []
    if isinstance(tree, list):
        if tree and tree[0] in ("name", "ref"):
            found.append(tree[1])
        else:
            for part in tree[1:]:
                if isinstance(part, list) and part and isinstance(part[0], str) and tree[0] == "in":
                    continue
                found.extend(names_in(part))
        if tree and tree[0] == "lookup" and isinstance(tree[1], str):
            found.append(tree[1])
    return found

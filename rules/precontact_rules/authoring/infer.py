"""What an expression is: its type, dimension, axes, and whether it can be absent. Dimensions must agree wherever quantities meet."""
from decimal import Decimal
from typing import Any, NamedTuple

from .expression import AXES_FUNCTIONS, names_in
from .faults import nearest
from .units import PURE, dimension

_HALF = Decimal("0.5")
ANY = None        # the dimension of a literal 0 and of absent: whatever is asked for


class Type(NamedTuple):
    """kind: number, complex, boolean, choice or nothing; dimension; axes; absent: whether it can be; keys of a choice."""

    kind: str
    dimension: Any = PURE
    axes: frozenset = frozenset()
    absent: bool = False
    keys: tuple = ()


class Mismatch(ValueError):
    """An expression that does not fit together: what was found, what would be right."""

    def __init__(self, found, expected):
        super().__init__(f"{found}; {expected}")
        self.found, self.expected = found, expected


def shown(dim):
    """A dimension in words."""
    return "a pure number" if dim == PURE else "anything" if dim is ANY else str(dim).replace(" ** ", "^")


class Inference:
    """Types of trees within one scope; formulas are inferred once, in whatever order they are asked for."""

    def __init__(self, scope):
        self.scope, self.types, self.under_way, self.failed = scope, {}, [], {}

    def formula(self, name):
        """The Type of a formula; one that does not fit is kept in `failed` and counts as anything, so that it is reported once."""
        if name not in self.types:
            if name in self.under_way:
                raise Mismatch("a cycle: " + " -> ".join([*self.under_way[self.under_way.index(name):], name]), "formulas that do not need themselves")
            self.under_way.append(name)
            try:
                self.types[name] = self.of(self.scope.formulas[name][1])
            except Mismatch as fault:
                self.failed[name], self.types[name] = fault, Type("nothing", ANY, absent=True)
            finally:
                self.under_way.pop()
        return self.types[name]

    def of(self, tree):
        """The Type of a tree."""
        if isinstance(tree, (int, float)):
            return Type("number", ANY if tree == 0 else PURE)
        return getattr(self, "_" + tree[0])(*tree[1:])

    # ---- names ---------------------------------------------------------------------------------------------------------------------

    def _name(self, name):
        scope = self.scope
        scope.used.add(name)
        if name in scope.formulas:
            return self.formula(name)
        if name in scope.inputs:
            return scope.inputs[name]
        if name in scope.constants:
            return Type("number", dimension(scope.constants[name]["unit"]))
        known = [*scope.formulas, *scope.inputs, *scope.constants]
        raise Mismatch(f"the name {name!r} is not known", f"close: {nearest(name, known)}")

    def _key(self, key):
        raise Mismatch(f'the text "{key}"', "text only beside == or != or in, compared with a choice")

    def _pi(self):
        return Type("number")

    def _absent(self):
        return Type("nothing", ANY, absent=True)

    def _true(self):
        return Type("boolean")

    _false = _true

    # ---- arithmetic ----------------------------------------------------------------------------------------------------------------

    def _numbers(self, what, *trees):
        types = [self.of(t) for t in trees]
        for t in types:
            if t.kind not in ("number", "complex", "nothing"):
                raise Mismatch(f"{what} on a {t.kind}", "numbers")
        return types

    @staticmethod
    def _joined(types, dim, kind=None):
        kind = kind or ("complex" if any(t.kind == "complex" for t in types) else "number")
        return Type(kind, dim, frozenset().union(*(t.axes for t in types)), any(t.absent for t in types))

    @staticmethod
    def _same(what, types):
        dim = ANY
        for t in types:
            if t.dimension is ANY:
                continue
            if dim is not ANY and t.dimension != dim:
                raise Mismatch(f"{what} {shown(dim)} and {shown(t.dimension)}", "quantities of one dimension")
            dim = t.dimension
        return dim

    def _neg(self, a):
        (t,) = self._numbers("minus", a)
        return t

    def _add(self, a, b):
        types = self._numbers("+", a, b)
        return self._joined(types, self._same("adds", types))

    def _sub(self, a, b):
        types = self._numbers("-", a, b)
        return self._joined(types, self._same("subtracts", types))

    def _mul(self, a, b):
        types = self._numbers("*", a, b)
        dims = [t.dimension for t in types]
        return self._joined(types, ANY if ANY in dims else dims[0] * dims[1])

    def _div(self, a, b):
        types = self._numbers("/", a, b)
        dims = [t.dimension for t in types]
        return self._joined(types, ANY if ANY in dims else dims[0] / dims[1])

    def _pow(self, a, power):
        (t,) = self._numbers("a power", a)
        return t._replace(dimension=ANY if t.dimension is ANY else t.dimension ** power)

    def _real(self, what, *trees):
        types = self._numbers(what, *trees)
        if any(t.kind == "complex" for t in types):
            raise Mismatch(f"{what} of a complex number", "a real number: abs, re or im of it")
        return types

    def _sqrt(self, a):
        types = self._real("sqrt", a)
        return self._joined(types, ANY if types[0].dimension is ANY else types[0].dimension ** _HALF)

    def _abs(self, a):
        types = self._numbers("abs", a)
        return self._joined(types, types[0].dimension, "number")

    def _abs_squared(self, a):
        types = self._numbers("abs_squared", a)
        return self._joined(types, ANY if types[0].dimension is ANY else types[0].dimension ** 2, "number")

    def _re(self, a):
        return self._abs(a)

    _im = _re

    def _conj(self, a):
        (t,) = self._numbers("conj", a)
        return t._replace(kind="complex")

    def _floor(self, a):
        types = self._real("floor", a)
        return self._joined(types, types[0].dimension)

    def _min(self, a, b):
        types = self._real("min or max", a, b)
        return self._joined(types, self._same("compares", types))

    _max = _min

    def _complex(self, a, b):
        types = self._real("complex", a, b)
        return self._joined(types, self._same("joins", types), "complex")

    def _exp(self, a):
        types = self._real("exp, ln, sin or cos", a)
        if types[0].dimension not in (PURE, ANY):
            raise Mismatch(f"exp, ln, sin or cos of {shown(types[0].dimension)}", "a pure number: divide by a reference")
        return self._joined(types, PURE)

    _ln = _sin = _cos = _exp

    def _uniform(self, a, b):
        types = self._real("uniform", a, b)
        joined = self._joined(types, self._same("bounds of", types))
        return joined._replace(axes=joined.axes | {"samples"})

    def _lookup(self, name, x):
        scope = self.scope
        (t,) = self._real("lookup", x)
        if name in scope.curves:
            scope.used.add(name)
            wanted, given = (dimension(u) for u in scope.curves[name]["units"])
        else:
            table, _, column = name.partition(".")
            if table not in scope.source.tables or column not in scope.source.tables[table]["columns"]:
                raise Mismatch(f"no table or curve {name!r}", f"table.column or a curve; tables: {nearest(table, scope.source.tables)}")
            columns = scope.source.tables[table]["columns"]
            wanted, given = dimension(next(iter(columns.values()))["unit"]), dimension(columns[column]["unit"])
        if t.dimension not in (wanted, ANY):
            raise Mismatch(f"looks up {shown(t.dimension)}", shown(wanted))
        return Type("number", given, t.axes, True)

    # ---- truth ---------------------------------------------------------------------------------------------------------------------

    def _eq(self, a, b):
        key = next((t for t in (a, b) if isinstance(t, list) and t[0] == "key"), None)
        if key is None:
            types = [self.of(a), self.of(b)]
            if {t.kind for t in types} == {"boolean"}:
                return Type("boolean", PURE, types[0].axes | types[1].axes, any(t.absent for t in types))
            return self._lt(a, b)
        choice = self.of(b if key is a else a)
        self._one_of(choice, [key[1]])
        return Type("boolean", PURE, choice.axes, choice.absent)

    _ne = _eq

    @staticmethod
    def _one_of(choice, keys):
        if choice.kind != "choice":
            raise Mismatch(f"compares a {choice.kind} with text", "a choice")
        for key in keys:
            if key not in choice.keys:
                raise Mismatch(f'the choice "{key}"', f"one of {', '.join(choice.keys)}")

    def _in(self, a, keys):
        choice = self.of(a)
        self._one_of(choice, keys)
        return Type("boolean", PURE, choice.axes, choice.absent)

    def _lt(self, a, b):
        types = self._real("a comparison", a, b)
        self._same("compares", types)
        return self._joined(types, PURE, "boolean")

    _le = _gt = _ge = _lt

    def _truths(self, *trees):
        types = [self.of(t) for t in trees]
        for t in types:
            if t.kind not in ("boolean", "nothing"):
                raise Mismatch(f"a {t.kind} where true or false is meant", "a condition")
        return Type("boolean", PURE, frozenset().union(*(t.axes for t in types)), any(t.absent for t in types))

    def _and(self, a, b):
        return self._truths(a, b)

    _or = _and

    def _not(self, a):
        inner = self._truths(a)
        if inner.absent:
            raise Mismatch("`not` before a condition that can be absent", "the opposite comparison, or given(...) first")
        return inner

    def _given(self, a):
        if a[0] == "name" and a[1] in self.scope.texts:
            self.scope.used.add(a[1])
            return Type("boolean")
        if a[0] == "name" and a[1] in self.scope.groups:
            raise Mismatch(f"given of the group {a[1]!r}", "given of one of its fields")
        return Type("boolean", PURE, self.of(a).axes - {"samples"})

    def _first_of(self, *trees):
        types = [self.of(t) for t in trees]
        return self._chosen(types)._replace(absent=all(t.absent for t in types))

    def _if(self, condition, a, b):
        test = self._truths(condition)
        chosen = self._chosen([self.of(a), self.of(b)])
        return chosen._replace(axes=chosen.axes | test.axes)

    def _chosen(self, types):
        kinds = {t.kind for t in types} - {"nothing"}
        if len(kinds) > 1 and kinds != {"number", "complex"}:
            raise Mismatch(f"chooses between {' and '.join(sorted(kinds))}", "values of one type")
        joined = self._joined(types, self._same("chooses between", types))
        return joined._replace(kind="complex" if "complex" in kinds else next(iter(kinds), "nothing"))

    # ---- axes ----------------------------------------------------------------------------------------------------------------------

    def _axis(self, axis):
        if axis not in self.scope.axes:
            raise Mismatch(f"the axis {axis!r}", f"one of {', '.join(self.scope.axes) or 'none declared'}")
        self.scope.used.add(axis)

    def _probability(self, c):
        t = self._truths(c)
        return Type("number", PURE, t.axes - {"samples"}, t.absent)

    def _mean(self, a):
        (t,) = self._real("a summary of samples", a)
        return t._replace(axes=t.axes - {"samples"})

    _low_end = _high_end = _mean

    def _any_over(self, axis, c):
        self._axis(axis)
        return self._truths(c)._replace(axes=self._truths(c).axes - {axis}, absent=False)

    _all_over = _any_over

    def _count_over(self, axis, c):
        return self._any_over(axis, c)._replace(kind="number")

    def _sum_over(self, axis, x):
        self._axis(axis)
        (t,) = self._real("a sum or extreme", x)
        return t._replace(axes=t.axes - {axis})

    def _least_over(self, axis, x):
        return self._sum_over(axis, x)._replace(absent=True)

    _greatest_over = _least_over

    def _at_least(self, axis, key, x):
        self._axis(axis)
        types = self._real("at_least or at_greatest", key, x)
        return Type("number", types[1].dimension, (types[0].axes | types[1].axes) - {axis}, True)

    _at_greatest = _at_least

    def _size_of(self, axis):
        self._axis(axis)
        return Type("number")

    def _index_of(self, axis):
        self._axis(axis)
        return Type("number", PURE, frozenset([axis]))

    def _weighted_quantile(self, axes, x, weight, share):
        return self._from_axes("weighted_quantile", axes, x, weight, share)

    def _at_share(self, axes, x, weight, share):
        return self._from_axes("at_share", axes, x, weight, share)

    def _from_axes(self, name, axes, x, weight, share):
        for axis in axes:
            self._axis(axis)
        types = self._real(name, x, weight, share)
        if types[2].dimension not in (ANY, PURE):
            raise Mismatch(f"{name} at a share that is {shown(types[2].dimension)}", "a pure number between 0 and 1")
        if types[2].axes & frozenset(axes):
            raise Mismatch(f"{name} at a share that runs along {', '.join(sorted(types[2].axes & frozenset(axes)))}", "a share free of the axes it reduces")
        return Type("number", types[0].dimension, types[0].axes.union(types[1].axes, types[2].axes) - frozenset(axes), True)

    def _spread_onto(self, onto, axes, position, weight):
        for axis in (onto, *axes):
            self._axis(axis)
        types = self._real("spread_onto", position, weight)
        if types[0].dimension not in (ANY, PURE):
            raise Mismatch(f"spread_onto at a position that is {shown(types[0].dimension)}", "a pure number: a place along the axis")
        return Type("number", types[1].dimension, (types[0].axes | types[1].axes) - frozenset(axes) | {onto}, True)


def resolved(tree, scope):
    """The tree as the bundle holds it: names become refs or constants, look-ups say what they look into."""
    if not isinstance(tree, list):
        return tree
    if tree[0] == "name":
        return ["const", tree[1]] if tree[1] in scope.constants else ["ref", tree[1]]
    if tree[0] == "in":
        return ["in", resolved(tree[1], scope), list(tree[2])]
    if tree[0] == "lookup":
        if tree[1] in scope.curves:
            return ["lookup", "curve", tree[1], resolved(tree[2], scope)]
        return ["lookup", "table", *tree[1].split(".", 1), resolved(tree[2], scope)]
    return [tree[0], *(resolved(p, scope) if isinstance(p, list) and p and isinstance(p[0], str) and not _is_axes(tree, p) else p for p in tree[1:])]


def _is_axes(tree, part):
    return tree[0] in AXES_FUNCTIONS and part is tree[1 + AXES_FUNCTIONS[tree[0]]]


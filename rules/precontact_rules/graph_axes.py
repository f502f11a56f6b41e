"""How what runs along an axis is reduced to what does not."""
from .values import COMPARISONS, NO_VALUE, SAMPLES, Absent


class OverAxes:
    """The axis part of Graph."""

    def _probability(self, c):
        # A comparison with nothing is false, but its probability is unknown: a finding must not fire on missing data.
        missing = self._missing_in(c)
        if missing:
            return Absent(missing)
        c = self.condition(c)
        if isinstance(c, bool):
            return self.number(1.0 if c else 0.0)
        known = self._known(c)
        sampled = SAMPLES in c.axes
        return self.node("share" if sampled else "indicator", c, *known, axes=c.axes - {SAMPLES}, sure=not known)

    def _missing_in(self, tree):
        """Paths of the inputs whose absence leaves some comparison in a condition without an operand."""
        op, rest = tree[0], tree[1:]
        if op in COMPARISONS:
            return [n for v in map(self.value, rest) if isinstance(v, Absent) for n in v.needs or ("",)]
        if op in ("and", "or", "not"):
            return [n for part in rest for n in self._missing_in(part)]
        if op == "ref" and rest[0] in self.formula_of:
            return self._missing_in(self.formula_of[rest[0]]["tree"])
        return []

    def _known(self, condition):
        """[node true where every operand compared in `condition` has a value], or [] where that is certain."""
        operands, queue = [], [condition]
        while queue:
            node = queue.pop()
            if node.op in COMPARISONS:
                operands.extend(a for a in node.args if not a.sure and a not in operands)
            elif node.op in ("and", "or", "not"):
                queue.extend(node.args)
        known = None
        for operand in sorted(operands, key=lambda o: o.index):
            finite = self._has_value(operand)
            known = finite if known is None else self._and_nodes(known, finite)
        return [] if known is None else [known]

    def _of_samples(self, op, a):
        a = self.value(a)
        if isinstance(a, Absent) or SAMPLES not in a.axes:
            return a
        return self.node(op, a, axes=a.axes - {SAMPLES})

    def _mean(self, a):
        return self._of_samples("mean", a)

    def _low_end(self, a):
        return self._of_samples("low_end", a)

    def _high_end(self, a):
        return self._of_samples("high_end", a)

    def _is_empty(self, axis):
        return self.axis_of[axis]["from"] == "list" and axis not in self.filled

    def _reduce(self, op, axis, value, boolean=False, sure=False):
        axes = (value.axes | {axis}) - {axis}
        return self.node(op, value, extra=(axis,), axes=axes, boolean=boolean, sure=sure)

    def _any_over(self, axis, c):
        c = self.condition(c)
        if self._is_empty(axis):
            return False
        return c if isinstance(c, bool) or axis not in c.axes else self._reduce("any", axis, c, boolean=True, sure=True)

    def _all_over(self, axis, c):
        c = self.condition(c)
        if self._is_empty(axis):
            return True
        return c if isinstance(c, bool) or axis not in c.axes else self._reduce("all", axis, c, boolean=True, sure=True)

    def _count_over(self, axis, c):
        c = self.condition(c)
        if self._is_empty(axis) or c is False:
            return self.number(0.0)
        if c is True:
            return self._size_of(axis)
        return self._reduce("count", axis, c, sure=True)

    def _sum_over(self, axis, x):
        x = self.value(x)
        if self._is_empty(axis):
            return self.number(0.0)
        return x if isinstance(x, Absent) else self._reduce("sum", axis, x)

    def _extreme(self, op, axis, x):
        x = self.value(x)
        if isinstance(x, Absent) or self._is_empty(axis):
            return self._missing(x)
        return x if axis not in x.axes else self._reduce(op, axis, x)

    def _least_over(self, axis, x):
        return self._extreme("least", axis, x)

    def _greatest_over(self, axis, x):
        return self._extreme("greatest", axis, x)

    def _at(self, op, axis, key, x):
        key, x = self.value(key), self.value(x)
        if isinstance(key, Absent) or isinstance(x, Absent) or self._is_empty(axis):
            return self._missing(key, x)
        axes = (key.axes | x.axes | {axis}) - {axis}
        return self.node(op, key, x, extra=(axis,), axes=axes)

    def _at_least(self, axis, key, x):
        return self._at("at_least", axis, key, x)

    def _at_greatest(self, axis, key, x):
        return self._at("at_greatest", axis, key, x)

    def _size_of(self, axis):
        if self._is_empty(axis):
            return self.number(0.0)
        if self.axis_of[axis]["from"] == "list":
            return self.node("size", extra=(axis,), sure=True)
        return self.number(self.check.axis_size(axis))

    def _index_of(self, axis):
        if self._is_empty(axis):
            return NO_VALUE
        return self.node("place", extra=(axis,), axes=frozenset((axis,)), sure=True)

    def _present(self, axes, *trees):
        """(values, None), or (None, Absent) where one is absent or one of the axes is empty."""
        values = [self.value(t) for t in trees]
        if any(isinstance(v, Absent) for v in values) or any(self._is_empty(a) for a in axes):
            return None, self._missing(*values)
        return values, None

    def _weighted_quantile(self, axes, x, weight, share):
        values, missing = self._present(axes, x, weight, share)
        if missing:
            return missing
        x, weight, share = values
        left, extra = (x.axes | weight.axes) - frozenset(axes), tuple(axes)
        ranking = self.node("ranking", x, weight, extra=extra, axes=left)       # sorted once, whatever the shares asked for
        return self.node("quantile", ranking, share, extra=extra, axes=left | share.axes)

    def _at_share(self, axes, x, weight, share):
        values, missing = self._present(axes, x, weight, share)
        if missing:
            return missing
        x, weight, share = values
        left, extra = (weight.axes | share.axes) - frozenset(axes), tuple(axes)
        place = self.node("share_place", weight, share, extra=extra, axes=left)     # found once, whatever is read there
        return self.node("at_place", x, place, extra=extra, axes=left | (x.axes - frozenset(axes)))

    def _spread_onto(self, onto, axes, position, weight):
        values, missing = self._present((onto, *axes), position, weight)
        if missing:
            return missing
        left = (values[0].axes | values[1].axes) - frozenset(axes) | {onto}
        return self.node("spread_onto", *values, extra=(onto, *axes), axes=left)

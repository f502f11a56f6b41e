"""How arithmetic and functions of numbers become nodes: absence passes through, a complex number is spelled out in real operations."""
from .values import SAMPLES, Absent, Pair


class Arithmetic:
    """The arithmetic part of Graph."""

    def _both(self, a, b):
        a, b = self.value(a), self.value(b)
        if isinstance(a, Absent) or isinstance(b, Absent):
            return None, self._missing(a, b)
        return (a, b), None

    @staticmethod
    def _missing(*values):
        needs = []
        for v in values:
            if isinstance(v, Absent):
                needs.extend(n for n in v.needs if n not in needs)
        return Absent(needs)

    def _neg(self, a):
        a = self.value(a)
        if isinstance(a, Absent):
            return a
        if isinstance(a, Pair):
            return Pair(self.node("neg", a.re), self.node("neg", a.im))
        return self.node("neg", a)

    # Adding zero and multiplying by one change nothing, so they are not nodes: real numbers made complex cost no more than they must.
    # (A negative zero would become zero; it cannot be told from zero by any comparison, and is written as 0.)

    def _is(self, node, value):
        return node.op == "number" and node.extra[0] == value

    def _sum(self, op, a, b):
        if self._is(b, 0.0):
            return a
        if op == "add" and self._is(a, 0.0):
            return b
        return self.node(op, a, b)

    def _times(self, a, b):
        if self._is(a, 1.0):
            return b
        return a if self._is(b, 1.0) else self.node("mul", a, b)

    def _add(self, a, b, op="add"):
        both, missing = self._both(a, b)
        if missing:
            return missing
        a, b = both
        if isinstance(a, Pair) or isinstance(b, Pair):
            a, b = self._pair(a), self._pair(b)
            return Pair(self._sum(op, a.re, b.re), self._sum(op, a.im, b.im))
        return self._sum(op, a, b)

    def _sub(self, a, b):
        return self._add(a, b, "sub")

    def _pair(self, a):
        return a if isinstance(a, Pair) else Pair(a, self.number(0.0))

    def _mul(self, a, b):
        both, missing = self._both(a, b)
        return missing or self._product(*both)

    def _product(self, a, b):
        times, total = self._times, self._sum
        if isinstance(a, Pair) and isinstance(b, Pair):
            return Pair(total("sub", times(a.re, b.re), times(a.im, b.im)), total("add", times(a.re, b.im), times(a.im, b.re)))
        if isinstance(a, Pair):
            return Pair(times(a.re, b), times(a.im, b))
        if isinstance(b, Pair):
            return Pair(times(a, b.re), times(a, b.im))
        return times(a, b)

    def _div(self, a, b):
        both, missing = self._both(a, b)
        return missing or self._quotient(*both)

    def _quotient(self, a, b):
        n = self.node
        if isinstance(b, Pair):
            top = self._product(a, Pair(b.re, n("neg", b.im)))
            size = self._size_squared(b)
            return Pair(n("div", top.re, size), n("div", top.im, size))
        if isinstance(a, Pair):
            return Pair(n("div", a.re, b), n("div", a.im, b))
        return n("div", a, b)

    def _pow(self, a, power):
        a = self.value(a)
        if isinstance(a, Absent):
            return a
        if power == 0:
            return self.number(1.0)
        result = a
        for _ in range(abs(power) - 1):
            result = self._product(result, a)
        return self._quotient(self.number(1.0), result) if power < 0 else result

    # ---- functions of one or two numbers ------------------------------------------------------------------------------------------

    def _function(self, op, *trees):
        values = [self.value(t) for t in trees]
        if any(isinstance(v, Absent) for v in values):
            return self._missing(*values)
        return self.node(op, *values)

    def _sqrt(self, a):
        return self._function("sqrt", a)

    def _abs(self, a):
        a = self.value(a)
        if isinstance(a, Pair):
            return self.node("sqrt", self._size_squared(a))
        return a if isinstance(a, Absent) else self.node("abs", a)

    def _size_squared(self, a):
        return self._sum("add", self.node("mul", a.re, a.re), self.node("mul", a.im, a.im))

    def _abs_squared(self, a):
        a = self.value(a)
        if isinstance(a, Pair):
            return self._size_squared(a)
        return a if isinstance(a, Absent) else self.node("mul", a, a)

    def _min(self, a, b):
        return self._function("min", a, b)

    def _max(self, a, b):
        return self._function("max", a, b)

    def _floor(self, a):
        return self._function("floor", a)

    def _exp(self, a):
        return self._function("exp", a)

    def _ln(self, a):
        return self._function("ln", a)

    def _sin(self, a):
        return self._function("sin", a)

    def _cos(self, a):
        return self._function("cos", a)

    def _complex(self, re, im):
        both, missing = self._both(re, im)
        return missing or Pair(*both)

    def _part(self, a, part):
        a = self.value(a)
        if isinstance(a, Absent):
            return a
        return getattr(self._pair(a), part)

    def _re(self, a):
        return self._part(a, "re")

    def _im(self, a):
        return self._part(a, "im")

    def _conj(self, a):
        a = self.value(a)
        if isinstance(a, Absent):
            return a
        a = self._pair(a)
        return Pair(a.re, self.node("neg", a.im))

    def _lookup(self, source, name, *rest):
        if source == "table":
            column, tree = rest
            extra = ("table", name, column)
        else:
            tree = rest[0]
            index = self.slot_of[name]
            if self.states[index] == "a":
                return Absent((name,))
            extra = ("curve", index)
        x = self.value(tree)
        return x if isinstance(x, Absent) else self.node("lookup", x, extra=extra)

    def _uniform(self, low, high):
        both, missing = self._both(low, high)
        if missing:
            return missing
        axes = both[0].axes | both[1].axes | {SAMPLES}
        node = self.node("uniform", *both, extra=(len(self.uniforms),), axes=axes)
        self.uniforms.append(node)
        return node

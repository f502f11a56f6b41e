"""How comparisons, conditionals and questions of absence become nodes, or are settled by the signature."""
from .values import COMPARISONS, Absent, Key, Node, Pair


class Truth:
    """The boolean part of Graph."""

    def _compare(self, op, a, b):
        a, b = self.value(a), self.value(b)
        if isinstance(a, Absent) or isinstance(b, Absent):
            return False
        if isinstance(b, Key) or isinstance(a, Key):
            return self._compare_keys(op, a, b)
        if isinstance(a, bool) or isinstance(b, bool):
            a, b = self._boolean(a), self._boolean(b)
        return self.node(op, a, b, boolean=True, sure=True)

    def _compare_keys(self, op, a, b):
        if isinstance(a, Key) and isinstance(b, Key):
            return (a.key == b.key) == (op == "eq")
        codes, key = (a, b) if isinstance(b, Key) else (b, a)
        code = self._choice_code(codes, key.key)
        same = self.node("code_is", codes, extra=(code,), boolean=True, sure=True)
        if op == "eq":
            return same
        known = self.node("not", self.node("code_is", codes, extra=(-1,), boolean=True, sure=True), boolean=True, sure=True)
        return self._and_nodes(known, self.node("not", same, boolean=True, sure=True))

    def _choice_code(self, node, key):
        if node.op == "slot":
            choices = self.check.slots[node.extra[0]].field["choices"]
        else:
            choices = self.check.column_field(*node.extra)["choices"]
        return [c["key"] for c in choices].index(key)

    def _in(self, a, keys):
        result = False
        for key in keys:
            result = self._either(result, self._compare("eq", a, ["key", key]))
        return result

    def _and(self, a, b):
        a = self.condition(a)
        if a is False:
            return False
        b = self.condition(b)
        if a is True or b is False:
            return b
        return a if b is True else self._and_nodes(a, b)

    def _and_nodes(self, a, b):
        return self.node("and", a, b, boolean=True, sure=True)

    def _or(self, a, b):
        return self._either(self.condition(a), self.condition(b))

    def _either(self, a, b):
        if a is True or b is True:
            return True
        if a is False:
            return b
        return a if b is False else self.node("or", a, b, boolean=True, sure=True)

    def _not(self, a):
        a = self.condition(a)
        return (not a) if isinstance(a, bool) else self.node("not", a, boolean=True, sure=True)

    def _boolean(self, value):
        return self.truth(value) if isinstance(value, bool) else value

    def _given(self, a):
        a = self.value(a)
        if isinstance(a, Absent):
            return False
        if isinstance(a, (Key, bool)):
            return True
        if isinstance(a, Pair):
            return self._both_given(a.re, a.im)
        if a.op == "slot" and self.check.slots[a.extra[0]].kind == "choice":
            return self.node("not", self.node("code_is", a, extra=(-1,), boolean=True, sure=True), boolean=True, sure=True)
        return self._has_value(a)

    def _both_given(self, a, b):
        a, b = self._has_value(a), self._has_value(b)
        return b if a is True else a if b is True else self._and_nodes(a, b)

    def _has_value(self, node):
        return True if node.sure else self.node("finite", node, boolean=True, sure=True)

    def _first_of(self, *trees):
        missing = []
        options = []
        for tree in trees:
            value = self.value(tree)
            if isinstance(value, Absent):
                missing.append(value)
                continue
            options.append(value)
            sure = value.re.sure and value.im.sure if isinstance(value, Pair) else not isinstance(value, Node) or value.sure
            if sure:
                break
        if not options:
            return self._missing(*missing)
        result = options[-1]
        for value in reversed(options[:-1]):
            known = self._both_given(value.re, value.im) if isinstance(value, Pair) else self._has_value(value)
            result = self._select(known, value, result)
        return result

    def _if(self, condition, a, b):
        condition = self.condition(condition)
        if isinstance(condition, bool):
            return self.value(a if condition else b)
        a, b = self.value(a), self.value(b)
        if isinstance(a, Absent) and isinstance(b, Absent):
            return self._missing(a, b)
        return self._select(condition, a, b)

    def _select(self, condition, a, b):
        if isinstance(condition, bool):
            return a if condition else b
        if isinstance(a, Pair) or isinstance(b, Pair):
            a, b = (v if isinstance(v, Absent) else self._pair(v) for v in (a, b))
            a, b = (Pair(v, v) if isinstance(v, Absent) else v for v in (a, b))
            return Pair(self._select(condition, a.re, b.re), self._select(condition, a.im, b.im))
        boolean = isinstance(a, bool) or isinstance(b, bool) or any(isinstance(v, Node) and v.boolean for v in (a, b))
        if boolean:
            a, b = (self.truth(False) if isinstance(v, Absent) else self._boolean(v) for v in (a, b))
            return self.node("select", condition, a, b, boolean=True, sure=True)
        sure = all(isinstance(v, Node) and v.sure for v in (a, b))
        a, b = (self.node("nothing") if isinstance(v, Absent) else v for v in (a, b))
        return self.node("select", condition, a, b, sure=sure)


for _op in COMPARISONS:
    setattr(Truth, "_" + _op, lambda self, a, b, op=_op: self._compare(op, a, b))

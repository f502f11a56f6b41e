"""The things a specialised graph is made of."""

SAMPLES = "samples"
COMPARISONS = ("eq", "ne", "lt", "le", "gt", "ge")


class Node:
    """One operation: `op` on `args` (nodes) with constants in `extra`, running along `axes` (a frozenset of names)."""

    __slots__ = ("op", "args", "extra", "axes", "boolean", "sure", "index")

    def __init__(self, op, args, extra, axes, boolean, sure, index):
        self.op, self.args, self.extra, self.axes = op, args, extra, axes
        self.boolean, self.sure, self.index = boolean, sure, index


class Pair:
    """A complex value: two real nodes."""

    __slots__ = ("re", "im")

    def __init__(self, re, im):
        self.re, self.im = re, im


class Absent:
    """No value, and the paths of the inputs whose absence is the cause."""

    __slots__ = ("needs",)

    def __init__(self, needs=()):
        self.needs = tuple(needs)


class Key:
    """A choice settled by the signature."""

    __slots__ = ("key",)

    def __init__(self, key):
        self.key = key


NO_VALUE = Absent()


def sampled_leaves(node):
    """How many uncertain quantities a node without other axes rests on; a list counts as many."""
    leaves, seen, queue = 0, set(), [node]
    while queue:
        node = queue.pop()
        if node.index not in seen and SAMPLES in node.axes:
            seen.add(node.index)
            queue.extend(node.args)
            if node.op in ("slot", "uniform"):
                leaves += 1 if node.axes == {SAMPLES} else 2
    return leaves

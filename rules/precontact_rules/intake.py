"""What a valid request becomes, and how the members of an object take their parts of it: what never changes is worked out once and kept."""
from .problems import Problem, escaped, in_order, shown

_COURSES = 256    # so many sets of members are kept for each object, with what the absent ones amount to


class Intake:
    """A valid request: `states` (the signature), `values`, `sizes` of list axes, `assumed` slots, `origins` and `titles` of what came from
    the catalogue. Both sequences have one element per slot.
    """

    __slots__ = ("states", "values", "sizes", "assumed", "origins", "titles", "problems", "branch")

    def __init__(self):
        self.states, self.values, self.sizes, self.assumed = [], [], {}, []
        self.origins, self.titles, self.problems, self.branch = {}, {}, [], None


def take(step, x, run, pointer):
    """Let a step take its part of the body. What a part gives that is absent, or is only the id of an entry, never changes: it is kept."""
    if step.kept is None or not (x is None or type(x) is str and step.by_id):
        step.take(x, run, pointer)
        return
    kept = step.kept.get((run.branch, x))
    if kept is None:
        kept = Intake()
        kept.branch = run.branch
        step.take(x, kept, pointer)
        if kept.problems:
            run.problems.extend(kept.problems)
        else:
            step.kept[run.branch, x] = kept
    append(run, kept)


def append(run, kept):
    """Add what a part gave to what the run has so far."""
    run.states += kept.states
    run.values += kept.values
    if kept.assumed:
        run.assumed += kept.assumed
    if kept.sizes:
        run.sizes.update(kept.sizes)
    if kept.titles:
        run.titles.update(kept.titles)
        run.origins.update(kept.origins)


class Members:
    """The members of an object. Which are given decides what the others amount to: the stretches between those given are kept for each set of them."""

    def __init__(self, steps):
        self.steps, self.keys, self._courses = steps, frozenset(step.key for step in steps), {}

    def take(self, x, run, pointer):
        """Let every step take its member of the object `x`."""
        course = self._courses.get((run.branch, *x))
        if course is None or None in x.values():
            self._take_slowly(x, run, pointer)
            return
        for step, kept in course:
            if step is None:
                append(run, kept)
            else:
                take(step, x[step.key], run, pointer)

    def _take_slowly(self, x, run, pointer):
        for step in self.steps:
            take(step, x.get(step.key), run, pointer)
        if not x.keys() <= self.keys:
            unknown(x, self.keys, run.problems, pointer)
        elif not run.problems and None not in x.values() and len(self._courses) < _COURSES:
            self._courses[run.branch, *x] = self._course(x, run.branch)

    def _course(self, x, branch):
        """[(step, None) for a member that is given, (None, what the absent ones in between amount to)]."""
        course = []
        for step in self.steps:
            if step.key in x:
                course.append((step, None))
                continue
            if not course or course[-1][0] is not None:
                course.append((None, Intake()))
                course[-1][1].branch = branch
            take(step, None, course[-1][1], "")
        return course


def unknown(body, keys, problems, pointer):
    for key in in_order(body.keys() - keys):
        problems.append(Problem(f"{pointer}/{escaped(key)}", "unknown-field", f"{shown(key)} is not known here; the members are {', '.join(sorted(keys))}"))

"""The engine against what it could at best be: hand-written numpy, and numpy on single numbers; and against one run of a circuit simulator.

Only ratios of one run count; each is the median of alternating rounds. Run with -s to see them.
"""
import json
import statistics
import subprocess
import time
from pathlib import Path

import numpy as np
import pytest
from precontact_rules import RuleSet, exact_math
from precontact_rules.authoring.build import build, canonical
from precontact_rules.emit import Emitter
from precontact_rules.graph import Graph
from precontact_rules.points import POINTS
from precontact_rules.values import Node, Pair

EXAMPLE = Path(__file__).resolve().parents[1] / "rules" / "example"
FORMULAS = ("impedance", "factor", "loaded", "error", "phasor_sum", "root")
ROUNDS = 15


@pytest.fixture(scope="module")
def example():
    return RuleSet(canonical(build(EXAMPLE)[0]))


def body(spread):
    source = {"voltage_volt": 12, "resistance_ohm": 1e5, "reactance_ohm": 3e4}
    if spread:
        source = {key: {"value": value, "half_width_percent": 10} for key, value in source.items()}
    return {"circuit": "plain", "source": source, "instrument": {"input_resistance_ohm": {"value": 1e7, "half_width_percent": 1} if spread else 1e7}}


def compiled(rule_set, spread, lane):
    """The engine's own code for FORMULAS alone, in one lane: (function, scratch counts)."""
    question = rule_set.question("demo")
    graph = Graph(rule_set.data, question.model, question.intake(body(spread)).states, frozenset())
    wanted = []
    for name in FORMULAS:
        value = graph.formula(name)
        wanted += [(n, lane) for n in ([value] if isinstance(value, Node) else [value.re, value.im] if isinstance(value, Pair) else [])]
    fast, _, counts = Emitter(graph).compile(wanted)
    return fast, counts


def by_hand(v, r, x, rm, u, s):
    """The same formulas as a careful numpy programmer writes them, every result into scratch."""
    fr = np.divide(r, rm, out=s[0])
    fr = np.add(1.0, fr, out=s[0])
    fi = np.divide(x, rm, out=s[1])
    a = np.multiply(fr, fr, out=s[2])
    b = np.multiply(fi, fi, out=s[3])
    size = np.sqrt(np.add(a, b, out=s[2]), out=s[2])
    loaded = np.divide(v, size, out=s[2])
    error = np.subtract(np.divide(loaded, v, out=s[3]), 1.0, out=s[3])
    phase = 0.0 + (3.141592653589793 - 0.0) * u
    cos = np.multiply(loaded, exact_math.cos_array(phase), out=s[4])
    re = np.add(loaded, cos, out=s[4])
    im = np.multiply(loaded, exact_math.sin_array(phase), out=s[5])
    total = np.add(np.multiply(re, re, out=s[4]), np.multiply(im, im, out=s[5]), out=s[4])
    total = np.sqrt(total, out=s[4])
    root = np.subtract(np.multiply(loaded, loaded, out=s[5]), 4.0 * (1.0 * 1.0), out=s[5])
    return r, x, fr, fi, loaded, error, total, np.sqrt(root, out=s[5])


def alternated(one, other, repeat):
    """Median ratio of the time of `one` to that of `other`."""
    ratios = []
    for _ in range(ROUNDS):
        times = []
        for function in (one, other):
            start = time.perf_counter()
            for _ in range(repeat):
                function()
            times.append(time.perf_counter() - start)
        ratios.append(times[0] / times[1])
    return statistics.median(ratios)


def test_a_pass_over_the_points_against_hand_written_numpy(benchmark, example):
    fast, counts = compiled(example, True, "s")
    points, question = example.points, example.question("demo")
    sampled = question._sample(question.intake(body(True)), question.plan(question.intake(body(True))))[1]
    drawn = {slot.path: sampled[slot.index] for slot in question.model.slots}
    v, r, x, rm = (drawn[p] for p in ("source.voltage", "source.resistance", "source.reactance", "instrument.input_resistance"))
    u = points.uniform(4)
    f, b = [np.empty(POINTS) for _ in range(counts["f"])], [np.empty(POINTS, dtype=bool) for _ in range(counts["b"])]
    scratch = [np.empty(POINTS) for _ in range(6)]

    def engine():
        return fast(sampled, sampled, [u], None, {}, f, b)

    def hand():
        return by_hand(v, r, x, rm, u, scratch)

    for ours, theirs in zip([a.copy() for a in engine()], hand()):
        assert np.array_equal(ours, theirs)        # the same formulas, bit for bit
    ratio = benchmark.pedantic(lambda: alternated(engine, hand, 40), rounds=1, iterations=1)
    benchmark.extra_info["engine / hand-written"] = ratio
    print(f"\na pass over {POINTS} points takes {ratio:.2f} of hand-written numpy")
    assert ratio < 1.3


def test_one_exact_point_against_numpy_on_single_numbers(benchmark, example):
    scalar, _ = compiled(example, False, "a")
    arrays, counts = compiled(example, True, "s")
    question = example.question("demo")
    values = question.intake(body(False)).values
    single = [np.array([v]) if isinstance(v, float) else v for v in values]
    f, b = [np.empty(1) for _ in range(counts["f"])], [np.empty(1, dtype=bool) for _ in range(counts["b"])]
    u = [np.array([0.5])]
    exact, one = scalar(values, (), (), None, {}, (), ()), arrays(single, single, u, None, {}, f, b)
    assert [float(x) for x in exact] == [float(np.ravel(x)[0]) for x in one]
    ratio = benchmark.pedantic(lambda: alternated(lambda: arrays(single, single, u, None, {}, f, b), lambda: scalar(values, (), (), None, {}, (), ()), 300),
                               rounds=1, iterations=1)
    benchmark.extra_info["numpy on one element / scalar"] = ratio
    print(f"\none exact point is {ratio:.0f} times cheaper than numpy on one-element arrays")
    assert ratio > 20


def test_a_loading_error_against_one_run_of_a_circuit_simulator(benchmark, rule_set, tmp_path):
    netlist = tmp_path / "one.cir"
    netlist.write_text("loading\nV1 a 0 12\nR1 a b 100k\nRm b 0 10meg\n.op\n.print op v(b)\n.end\n")
    question = {"circuit": "thevenin", "source": {"voltage_volt": 12, "resistance_ohm": 1e5}, "instrument": {"function": "voltage", "input_resistance_ohm": 1e7}}
    assert json.dumps(rule_set.answer("loading-error", question))
    simulate = lambda: subprocess.run(["ngspice", "-b", str(netlist)], capture_output=True, check=True)      # noqa: E731
    answer = lambda: [rule_set.answer("loading-error", question) for _ in range(20)]                          # noqa: E731
    ratio = benchmark.pedantic(lambda: 20 * alternated(simulate, answer, 1), rounds=1, iterations=1)
    benchmark.extra_info["one simulator run / one answer"] = ratio
    print(f"\none run of the simulator costs as much as {ratio:.0f} loading errors")
    assert ratio > 5

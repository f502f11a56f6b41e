"""The arithmetic of both runtimes, number by number: exp, ln, sin, cos, the normal score, sums, shares and interval ends are the same."""
import json
import math

import numpy as np
import pytest

from precontact_rules import exact_math
from precontact_rules.coverage import coverage_ends, even_ends, share
from precontact_rules.points import POINTS

from .conftest import RUNTIME

COUNT = 200_000
SPECIAL = [0.0, -0.0, 1.0, -1.0, math.inf, -math.inf, math.nan, 5e-324, -5e-324, 2.2250738585072014e-308, 2.225073858507201e-308, 1.797e308]
FORMS = ("r", "n", "rr", "rn", "nn", "rrr", "rnrnr", "nnnnnn", "r" * 12, "rn" * 10, "n" * 33)


def about(centres, steps=3):
    """The numbers and their nearest neighbours."""
    found = []
    for centre in centres:
        found.append(centre)
        for towards in (-math.inf, math.inf):
            x = centre
            for _ in range(steps):
                x = math.nextafter(x, towards)
                found.append(x)
    return found


def any_bits(rng, count):
    """Doubles of any bit pattern: every exponent, subnormals, infinities and NaN among them."""
    return np.frombuffer(rng.bytes(8 * count), dtype="<f8")


def subnormal(rng, count):
    return rng.integers(1, 2 ** 52, count).view(np.float64) * rng.choice([-1.0, 1.0], count)


def asked(name, rng):
    """COUNT or more arguments for a function, where it is used and where it breaks."""
    if name == "exp":
        edges = about([k * exact_math.LN2_HIGH / 2 for k in range(-2160, 2060)] + [-800, 800, -745.1, 709.78])
        parts = [rng.uniform(-750, 715, COUNT // 2), rng.uniform(-748, -705, COUNT // 10), rng.normal(0, 1, COUNT // 4)]
    elif name == "ln":
        edges = about([2.0 ** k for k in range(-1074, 1024)] + [2.0 ** k * exact_math.SQRT_HALF for k in range(-1022, 1024)])
        parts = [np.exp(rng.uniform(-740, 709, COUNT // 2)), np.abs(subnormal(rng, COUNT // 10)), rng.uniform(0.5, 2, COUNT // 4)]
    elif name in ("sin", "cos"):
        edges = about([k * math.pi / 4 for k in (*range(-4000, 4000), *range(1_320_000, 1_335_088, 14))] + [2.0 ** 20, -2.0 ** 20])
        parts = [rng.uniform(-50, 50, COUNT // 2), rng.uniform(-1.1 * 2 ** 20, 1.1 * 2 ** 20, COUNT // 4), 10.0 ** rng.uniform(-320, 0, COUNT // 10)]
    else:
        edges = [*about([0.075, 0.925, 0.5, math.exp(-25), 1 - math.exp(-25), 0.025, 0.975]), 5e-324, 1e-310, 1e-300, math.nextafter(1, 0)]
        near_one = 1 - 10.0 ** rng.uniform(-15.9, -0.3, COUNT // 5)
        parts = [rng.uniform(1e-12, 1 - 1e-12, COUNT // 2), 10.0 ** rng.uniform(-320, -0.3, COUNT // 3), near_one, (np.arange(4096) + 0.5) / 4096]
        return np.concatenate([np.array([p for p in edges if 0 < p < 1]), *[p[(p > 0) & (p < 1)] for p in parts]])
    return np.concatenate([np.array(SPECIAL + edges, dtype=float), subnormal(rng, COUNT // 10), any_bits(rng, COUNT // 5), *parts])


@pytest.fixture(scope="module")
def compared(tmp_path_factory, run_script, released_set):
    """What primitives_node.js reports, after Python wrote arguments and results."""
    folder, rng = tmp_path_factory.mktemp("primitives"), np.random.default_rng(20_000)
    write = lambda name, values: (folder / name).write_bytes(np.asarray(values, dtype="<f8").tobytes())        # noqa: E731
    for name in ("exp", "ln", "sin", "cos", "normal_score"):
        x = asked(name, rng)
        write(f"{name}.x", x)
        write(f"{name}.y", list(map(getattr(exact_math, name), x.tolist())))
    lengths = [*range(200), *([4096] * 20), *rng.integers(1, 2000, 100).tolist(), *rng.integers(2, 60, COUNT).tolist()]
    terms = [rng.normal(0, 1, n) * 10.0 ** rng.uniform(-8, 8, n) for n in lengths]
    terms[50][3], terms[60][5], terms[61][4] = math.nan, math.inf, -math.inf
    write("fold_sum.n", lengths)
    write("fold_sum.x", np.concatenate(terms))
    write("fold_sum.y", [float(exact_math.fold_sum(t, 0)) for t in terms])
    samples(released_set, rng, folder, write)
    return run_script("primitives_node.js", RUNTIME, folder)


def samples(rule_set, rng, folder, write):
    """Functions of the points, smooth, kinked, stepped, constant, huge, tiny and with holes; their ends and shares as Python has them."""
    points, cases, rows, ends, even, shares = rule_set.points, [], [], [], [], []
    shapes = {
        "linear": lambda s: s, "curved": lambda s: s + 0.3 * s * s, "exponential": exact_math.exp_array, "inverse": lambda s: 1 / (s + 3),
        "kinked": np.abs, "stepped": lambda s: np.floor(s * 2) / 2, "constant": lambda s: s * 0 + 2.5, "zero": lambda s: s * 0.0,
        "huge": lambda s: s * 1e300, "beyond": lambda s: s * 1.7e308, "tiny": lambda s: s * 5e-324, "subnormal": lambda s: s * 1e-310,
        "holes": lambda s: np.where(s > 1, math.nan, s), "infinite": lambda s: np.where(s > 1, math.inf, s),
    }
    for forms in FORMS:
        drawn = points.drawn(forms)
        for name, shape in shapes.items():
            for shift in (0.0, 0.4):
                slopes = 10.0 ** rng.uniform(-3, 0, len(forms)) * rng.choice([-1, 1], len(forms))
                total = sum(c * s for c, s in zip(drawn.coordinates, slopes)) + shift * np.abs(slopes).sum()
                with np.errstate(all="ignore"):
                    row = np.asarray(shape(total), dtype=float)
                    cases.append({"forms": forms, "shape": name, "shift": shift})
                    rows.append(row)
                    ends += coverage_ends([row], drawn)[0]
                    even += even_ends(row)
                    shares += [share(row > 0, row, True, drawn), share(row < 0, row, False, drawn)]
    (folder / "cases.json").write_text(json.dumps({"components": rule_set.data["tables"]["lattice"]["data"]["component"], "cases": cases}))
    write("samples.x", np.concatenate(rows))
    write("ends.y", ends)
    write("even.y", even)
    write("share.y", shares)
    for form, coordinates in (("u", points.uniform), ("r", points.symmetric), ("n", points.normal)):
        write(f"coordinates.{form}", np.concatenate([coordinates(d) for d in range(points.dimensions)]))


NUMBERS = ("exp", "ln", "sin", "cos", "normal_score", "fold_sum", "fold_sum of a copy", "coordinates u", "coordinates r", "coordinates n")


@pytest.mark.parametrize("name, least", [*((name, COUNT) for name in NUMBERS), ("ends", 600), ("even ends", 600), ("share", 600)])
def test_the_same_bits(compared, name, least):
    found = compared[name]
    assert found["count"] >= least
    assert found["differing"] == 0, json.dumps(found["examples"], indent=1)

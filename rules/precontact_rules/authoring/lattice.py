"""Makes tables/lattice.yaml: the generating vector of the sample points.

Component by component (Sloan and Reztsov, Mathematics of Computation 71 (2002) 263-273): the first component is 1, each further one is the odd
number that keeps the worst-case error of smooth periodic integrands smallest, given those before it.  A small weight makes the
error count pairs first, then triples, and so on.  Ties go to the smaller number, so the vector is reproducible.
"""
import numpy as np

POINTS = 4096
DIMENSIONS = 64
WEIGHT = 0.02      # of the weights tried (1 to 0.01), among those with the best pairs the one with the best triples


def generating_vector(points=POINTS, dimensions=DIMENSIONS, weight=WEIGHT):
    """Return a list of `dimensions` odd whole numbers below `points`."""
    index = np.arange(points)
    x = index / points
    kernel = 2.0 * np.pi ** 2 * (x * x - x + 1.0 / 6.0)
    candidates = np.arange(1, points // 2, 2)      # z and points - z give mirrored, equally good rules
    table = kernel[(index[None, :] * candidates[:, None]) % points]
    product, chosen, best = np.ones(points), [], 0
    for _ in range(dimensions):
        chosen.append(int(candidates[best]))
        product = product * (1.0 + weight * table[best])
        error = table @ product
        error[np.isin(candidates, chosen)] = np.inf   # two equal components would move together
        best = int(np.argmin(error))
    return chosen


def main():
    print("""meaning:
  en: Generating vector of the lattice of sample points, one row per dimension
  es: Vector generador de la red de puntos de muestra, una fila por dimensión
columns:
  dimension: {unit: count}
  component: {unit: count}
rows:""")
    for dimension, component in enumerate(generating_vector()):
        print(f"  - [{dimension}, {component}]")
    print("""between: step
below: absent
above: absent
source: sloan-reztsov-2002, component-by-component construction; made by authoring/lattice.py
standing: convention""")


if __name__ == "__main__":
    main()

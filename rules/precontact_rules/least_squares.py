"""Least squares in plain floats and a stated order: small systems, the same bits everywhere."""
from .exact_math import sqrt


def cholesky(gram):
    """The lower triangular factor of a symmetric positive matrix, as lists of rows."""
    factor = [[0.0] * len(gram) for _ in gram]
    for i, row in enumerate(gram):
        for j in range(i + 1):
            rest = row[j]
            for k in range(j):
                rest -= factor[i][k] * factor[j][k]
            factor[i][j] = sqrt(rest) if i == j else rest / factor[j][j]
    return factor


def solved(factor, right):
    """The solution of factor * factor^T * x = right, in place of `right`."""
    count = len(right)
    for i in range(count):
        for k in range(i):
            right[i] -= factor[i][k] * right[k]
        right[i] /= factor[i][i]
    for i in range(count - 1, -1, -1):
        for k in range(i + 1, count):
            right[i] -= factor[k][i] * right[k]
        right[i] /= factor[i][i]
    return right

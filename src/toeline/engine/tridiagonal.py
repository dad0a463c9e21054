"""Solution with the factors of a tridiagonal matrix; the factors are made while the matrix is (`step.assemble`).

Row k: lower[k]·x[k−1] + diagonal·x[k] + upper[k]·x[k+1] = right[k]. `pivot` holds inverse pivots. No pivoting: the
matrix of storage and links is quasi-definite.
"""

from toeline.hydraulics.kernel import kernel


@kernel
def back_substitute(pivot, upper, x):
    """Second sweep, in place: x holds the right side after the first sweep."""
    last = x.size - 1
    x[last] *= pivot[last]
    for k in range(last - 1, -1, -1):
        x[k] = (x[k] - upper[k] * x[k + 1]) * pivot[k]


@kernel
def solve_with_factors(pivot, lower, upper, x):
    """Both sweeps, in place, for another right side."""
    for k in range(1, x.size):
        x[k] -= lower[k] * pivot[k - 1] * x[k - 1]
    back_substitute(pivot, upper, x)

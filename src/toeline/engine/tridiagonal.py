"""Solution with the factors of a tridiagonal matrix; the factors are made while the matrix is (`step.assemble`).

Row k: lower[k]·x[k−1] + diagonal·x[k] + upper[k]·x[k+1] = right[k]. Rows keep inverse pivots. No pivoting: the matrix
of storage and links is quasi-definite.
"""

from toeline.hydraulics.kernel import inner_kernel


@inner_kernel
def back_substitute(rows):
    """Second sweep, in place: x holds the right side after the first sweep."""
    after = 0.0
    for k in range(rows.size - 1, -1, -1):
        row = rows[k]
        after = (row.x - row.upper * after) * row.pivot
        row.x = after


@inner_kernel
def solve_with_factors(rows):
    """Both sweeps, in place, for another right side in x."""
    for k in range(1, rows.size):
        rows[k].x -= rows[k].lower * rows[k - 1].pivot * rows[k - 1].x
    back_substitute(rows)

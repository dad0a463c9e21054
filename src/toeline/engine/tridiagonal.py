"""Solution with the factors of a tridiagonal matrix; the factors are made while the matrix is (`step.assemble`).

Row k: lower[k]·x[k−1] + diagonal·x[k] + upper[k]·x[k+1] = right[k]. Rows keep the inverse pivot and, once swept
forward, upper and x times it, so that the second sweep is one multiplication and one subtraction a row. No pivoting:
the matrix of storage and links is quasi-definite.
"""

from toeline.hydraulics.kernel import kernel


@kernel
def back_substitute(rows):
    """Second sweep, in place: x holds the right side after the first sweep."""
    after = 0.0
    for k in range(rows.size - 1, -1, -1):
        row = rows[k]
        after = row.x - row.upper * after
        row.x = after


@kernel
def solve_with_factors(rows):
    """Both sweeps, in place, for another right side in x."""
    before = 0.0
    for k in range(rows.size):
        row = rows[k]
        before = (row.x - row.lower * before) * row.pivot
        row.x = before
    back_substitute(rows)

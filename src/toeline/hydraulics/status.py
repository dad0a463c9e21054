"""What an equation says of its own result. Words and places are added where people read them."""

OK = 0
NO_SOLUTION = 1
"""The physics has no such state (for example no hydraulic jump at this tailwater)."""
OUT_OF_RANGE = 2
"""The formula is not defined for this input."""
NOT_CONVERGED = 3

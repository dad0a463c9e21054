"""How large a run will be."""

from collections.abc import Mapping
from math import prod

import numpy as np

from toeline.results.variables import growing


def size_before_compression(sizes: Mapping[str, int], rows: Mapping[str, int]) -> int:
    """Bytes of the values along growing dimensions, of so many rows each; `sizes` of the labelled dimensions.

    Text, of orders alone, is not counted.
    """
    return sum(count * _row_size(dimension, sizes) for dimension, count in rows.items())


def _row_size(dimension: str, sizes: Mapping[str, int]) -> int:
    return sum(
        np.dtype(variable.dtype).itemsize * prod(sizes[other] for other in variable.dimensions[1:])
        for variable in growing(dimension)
        if variable.dtype != "text"
    )

"""Lists of different lengths in one flat array."""

import numpy as np
from numpy.typing import NDArray

Ints = NDArray[np.intp]


def counted(start: Ints, count: Ints) -> tuple[Ints, Ints]:
    """Return the integers start, start + 1, ... of each list, one list after the other.

    Args:
        start: first integer of each list, shape (m,).
        count: how many it has, not negative.

    Returns:
        Index of the list each integer belongs to, and the integers, shape (sum of count,).
    """
    owner = np.repeat(np.arange(len(start)), count)
    before = np.cumsum(count) - count
    return owner, np.arange(len(owner)) - before[owner] + start[owner]

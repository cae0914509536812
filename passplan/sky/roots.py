"""Many roots at once, each held between two places where the sign differs."""

from collections.abc import Callable

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]

_MOST_ROUNDS = 60


def roots(
    function: Callable[[Floats], tuple[Floats, Floats]],
    low: Floats,
    high: Floats,
    guess: Floats,
    low_is_above: NDArray[np.bool_],
    *,
    tolerance: float,
) -> Floats:
    """Return a root of each of m functions between `low` and `high`, shape (m,).

    Newton's method; a step that would leave the bracket halves it instead. The step is
    an honest measure of the distance left also near a double root, where a secant's is not.

    Args:
        function: values and slopes of all m functions at one place each.
        low: lower ends of the brackets, shape (m,).
        high: upper ends.
        guess: where to begin, inside the brackets.
        low_is_above: whether each function is positive at `low`, and so not at `high`.
        tolerance: stops when no root moves by more than this in a round.
    """
    place = guess
    for _ in range(_MOST_ROUNDS):
        value, slope = function(place)
        before = (value > 0.0) == low_is_above
        low = np.where(before, place, low)
        high = np.where(before, high, place)
        slope[slope == 0.0] = np.inf
        better = place - value / slope
        outside = (better < low) | (better > high)
        better[outside] = 0.5 * (low[outside] + high[outside])
        moved = np.abs(better - place).max(initial=0.0)
        place = better
        if moved < tolerance:
            break
    return place

"""Many roots at once, each held between two places where the sign differs."""

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]
Ints = NDArray[np.intp]

_MOST_ROUNDS = 60


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class Brackets:
    """Where roots are looked for, shape (m,) each.

    Attributes:
        low, high: ends of the brackets.
        guess: where to begin, inside.
        low_is_above: whether the function is positive at `low`, and so not at `high`.
    """

    low: Floats
    high: Floats
    guess: Floats
    low_is_above: NDArray[np.bool_]


def secant(low: Floats, high: Floats, at_low: Floats, at_high: Floats) -> Brackets:
    """Return brackets whose guess is where the straight line between their ends meets zero."""
    share = at_low / (at_low - at_high)
    return Brackets(low=low, high=high, guess=low + share * (high - low), low_is_above=at_low > 0.0)


def roots(
    function: Callable[[Floats, Ints | slice], tuple[Floats, Floats]], brackets: Brackets, tolerance: float
) -> Floats:
    """Return a root in each of m brackets, shape (m,).

    Newton's method; a step that would leave the bracket halves it instead. The step is
    an honest measure of the distance left also near a double root, where a secant's is not.

    Args:
        function: values and slopes at one place for each of some of the m functions, told
            by index.
        brackets: which hold a change of sign each.
        tolerance: a root is left alone once it moves by less than this.
    """
    low, high, place = brackets.low.copy(), brackets.high.copy(), brackets.guess.copy()
    active: Ints | slice = slice(None)
    for _ in range(_MOST_ROUNDS):
        here = place[active]
        value, slope = function(here, active)
        before = (value > 0.0) == brackets.low_is_above[active]
        floor = np.where(before, here, low[active])
        ceiling = np.where(before, high[active], here)
        slope[slope == 0.0] = np.inf
        better = here - value / slope
        outside = (better < floor) | (better > ceiling)
        better[outside] = 0.5 * (floor + ceiling)[outside]
        moves = np.abs(better - here) >= tolerance
        low[active], high[active], place[active] = floor, ceiling, better
        if not moves.any():
            break
        active = np.flatnonzero(moves) if isinstance(active, slice) else active[moves]
    return place

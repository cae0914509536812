"""Smooth functions known at equally spaced nodes: values and slopes between them.

A polynomial through the `POINTS` nodes around a place, half of them on either side, or
as near to that as the ends of the row allow. Places are counted in nodes: 3.25 lies a
quarter of a step after node 3. Source: Lagrange's form through equally spaced points.
"""

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]
Ints = NDArray[np.intp]

POINTS = 12
_MIDDLE = (POINTS - 1) / 2.0
_OFFSETS = np.arange(POINTS)
_TO_POWERS: Floats = np.linalg.inv(np.vander(_OFFSETS - _MIDDLE, increasing=True))
_SIDE = POINTS // 2 - 1
_CENTRAL = 2 * _SIDE + 1


def stencils(intervals: Ints, nodes: int) -> Ints:
    """Return the first of the `POINTS` nodes to use between node k and k + 1, shape (m,)."""
    return np.clip(intervals - _SIDE, 0, nodes - POINTS)


def middles(first: Ints) -> Floats:
    """Return the places that polynomials starting at nodes `first` count from."""
    return first.astype(np.float64) + _MIDDLE


def polynomials(values: Floats, rows: Ints, first: Ints) -> Floats:
    """Return coefficients, lowest power first, of the polynomials through `POINTS` nodes.

    Args:
        values: r functions at n nodes, shape (r, n), C-contiguous.
        rows: which function, shape (..., m).
        first: first node, shape (m,).

    Returns:
        Coefficients in nodes from the middle of the stencil, shape (POINTS, ..., m).
    """
    starts = rows * values.shape[1] + first
    taken = values.ravel().take(np.add.outer(_OFFSETS, starts))
    powers: Floats = (_TO_POWERS @ taken.reshape(POINTS, -1)).reshape(taken.shape)
    return powers


def expanded(coefficients: Floats, place: Floats, order: int) -> list[Floats]:
    """Return value, slope, half the bend, ... of polynomials at `place`: `order` + 1 arrays (..., m).

    Taylor's coefficients, per node, by repeated synthetic division.

    Args:
        coefficients: from `polynomials`, shape (POINTS, ..., m).
        place: counted from the polynomials' middles, shape (m,).
        order: of the highest derivative wanted.
    """
    terms = [coefficients[-1].copy(), *(np.zeros_like(coefficients[0]) for _ in range(order))]
    for coefficient in coefficients[-2::-1]:
        for k in range(order, 0, -1):
            terms[k] *= place
            terms[k] += terms[k - 1]
        terms[0] *= place
        terms[0] += coefficient
    return terms


def _derivative_weights(place: float, points: int) -> Floats:
    """Return weights of `points` nodes that give the derivative at `place`, counted from their middle."""
    offsets = np.arange(points) - (points - 1) / 2.0
    powers = np.arange(points)
    row = powers * place ** np.maximum(powers - 1, 0)
    weights: Floats = row @ np.linalg.inv(np.vander(offsets, increasing=True))
    return weights


_AT_NODE = _derivative_weights(0.0, _CENTRAL)
_AT_ENDS = np.stack([_derivative_weights(offset - _MIDDLE, POINTS) for offset in range(POINTS)], axis=1)


def slopes(values: Floats) -> Floats:
    """Return derivatives (per node) at every node of functions of shape (r, n), n >= POINTS."""
    result = np.empty_like(values)
    for row, out in zip(values, result, strict=True):
        out[_SIDE:-_SIDE] = np.correlate(row, _AT_NODE, mode="valid")
    result[:, :_SIDE] = values[:, :POINTS] @ _AT_ENDS[:, :_SIDE]
    result[:, -_SIDE:] = values[:, -POINTS:] @ _AT_ENDS[:, -_SIDE:]
    return result


def weights(places: Floats) -> tuple[Floats, Floats]:
    """Return weights of the `POINTS` nodes for value and derivative, shape (m, POINTS) each.

    Args:
        places: counted from the middle of the stencil, shape (m,).
    """
    powers = np.vander(places, POINTS, increasing=True)
    lowered = np.zeros_like(powers)
    lowered[:, 1:] = powers[:, :-1] * _OFFSETS[1:]
    return powers @ _TO_POWERS, lowered @ _TO_POWERS

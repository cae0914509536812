"""Smooth functions known at equally spaced nodes: values and slopes between them.

A polynomial through the `POINTS` nodes around a place, half of them on either side, or
as near to that as the ends of the row allow. Places are counted in nodes: 3.25 lies a
quarter of a step after node 3. Source: Lagrange's form through equally spaced points.
"""

import math

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]
Ints = NDArray[np.intp]

POINTS = 12
_MIDDLE = (POINTS - 1) / 2.0
_OFFSETS = np.arange(POINTS)
_TO_POWERS: Floats = np.linalg.inv(np.vander(_OFFSETS - _MIDDLE, increasing=True))
_CHOICES = [np.array([[math.comb(p, k)] for p in range(k, POINTS)], dtype=np.float64) for k in range(4)]
_BLOCK = 1024
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
        rows: which functions, c of them at each of m places, shape (c, m).
        first: first node, shape (m,).

    Returns:
        Coefficients in nodes from the middle of the stencil, shape (POINTS, c, m).
    """
    starts = rows * values.shape[1] + first
    taken = values.ravel().take(np.add.outer(_OFFSETS, starts))
    powers: Floats = (_TO_POWERS @ taken.reshape(POINTS, -1)).reshape(taken.shape)
    return powers


def chosen(coefficients: Floats, which: Ints | slice) -> Floats:
    """Return the polynomials of some places, told by index; `take` is far faster than brackets."""
    return coefficients[..., which] if isinstance(which, slice) else coefficients.take(which, axis=-1)


def expanded(coefficients: Floats, place: Floats, order: int) -> list[Floats]:
    """Return value, slope, half the bend, ... of polynomials at `place`: `order` + 1 arrays (c, m).

    Taylor's coefficients, per node: the k-th is sum over p of (p choose k) c[p] place^(p - k).

    Args:
        coefficients: from `polynomials`, shape (POINTS, c, m).
        place: counted from the polynomials' middles, shape (m,).
        order: of the highest derivative wanted, at most 3.
    """
    terms = np.empty((order + 1, *coefficients.shape[1:]))
    for start in range(0, len(place), _BLOCK):  # what is in hand stays in the processor's cache
        part = slice(start, start + _BLOCK)
        powers = _powers(place[part])
        for k in range(order + 1):
            lowered = _CHOICES[k] * powers[: POINTS - k]
            np.einsum("pcm,pm->cm", coefficients[k:, :, part], lowered, out=terms[k, :, part])
    return list(terms)


def _powers(place: Floats) -> Floats:
    """Return `place` to the powers 0 to POINTS - 1, shape (POINTS, m)."""
    powers = np.empty((POINTS, len(place)))
    powers[0] = 1.0
    powers[1] = place
    for p in range(2, POINTS):
        np.multiply(powers[p // 2], powers[(p + 1) // 2], out=powers[p])
    return powers


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
    powers = _powers(places)
    lowered = np.zeros_like(powers)
    np.multiply(powers[:-1], _CHOICES[1], out=lowered[1:])
    return powers.T @ _TO_POWERS, lowered.T @ _TO_POWERS

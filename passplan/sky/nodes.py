"""Smooth functions known at equally spaced nodes: values and slopes between them.

Between two nodes stands a polynomial through the `POINTS` nodes around, half of them on either
side; the `MARGIN` first and last nodes of a row serve that only. Places are counted in nodes:
3.25 lies a quarter of a step after node 3. Source: Lagrange's form through equally spaced points.

Within half a step of the polynomial's middle the highest powers count for nothing (for a low orbit and
300 s: the ninth term 0.2 mm), so only the `TERMS` lowest are kept.
"""

import math

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]
Ints = NDArray[np.intp]

POINTS = 16
TERMS = 8
MARGIN = POINTS // 2 - 1
_MIDDLE = (POINTS - 1) / 2.0
_OFFSETS = np.arange(POINTS)
_BLOCK = 1024
_CHOICES = [np.array([[math.comb(p, k)] for p in range(k, TERMS)], dtype=np.float64) for k in range(4)]


def _to_powers(points: int) -> Floats:
    """Return the matrix from values at `points` nodes to coefficients about their middle, all powers."""
    half = (points - 1) / 2.0
    scaled = np.vander((np.arange(points) - half) / half, increasing=True)  # unscaled it is ill-conditioned
    powers: Floats = np.linalg.inv(scaled) / half ** np.arange(points)[:, np.newaxis]
    return powers


_TO_POWERS = _to_powers(POINTS)[:TERMS].copy()
_SLOPE_AT_NODE = _to_powers(2 * MARGIN + 1)[1]


def stencils(intervals: Ints, nodes: int) -> Ints:
    """Return the first of the `POINTS` nodes to use between node k and k + 1, shape (m,)."""
    return np.clip(intervals - MARGIN, 0, nodes - POINTS)


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
        Coefficients in nodes from the middle of the stencil, shape (TERMS, c, m).
    """
    starts = rows * values.shape[1] + first
    taken = values.ravel().take(np.add.outer(_OFFSETS, starts))
    powers: Floats = (_TO_POWERS @ taken.reshape(POINTS, -1)).reshape(TERMS, *rows.shape)
    return powers


def chosen(coefficients: Floats, which: Ints | slice) -> Floats:
    """Return the polynomials of some places, told by index; `take` is far faster than brackets."""
    return coefficients[..., which] if isinstance(which, slice) else coefficients.take(which, axis=-1)


def expanded(coefficients: Floats, place: Floats, order: int) -> list[Floats]:
    """Return value, slope, half the bend, ... of polynomials at `place`: `order` + 1 arrays (c, m).

    Taylor's coefficients, per node: the k-th is sum over p of (p choose k) c[p] place^(p - k).

    Args:
        coefficients: from `polynomials`, shape (TERMS, c, m).
        place: counted from the polynomials' middles, shape (m,).
        order: of the highest derivative wanted, at most 3.
    """
    terms = np.empty((order + 1, *coefficients.shape[1:]))
    for start in range(0, len(place), _BLOCK):  # what is in hand stays in the processor's cache
        part = slice(start, start + _BLOCK)
        powers = _powers(place[part])
        for k in range(order + 1):
            lowered = _CHOICES[k] * powers[: TERMS - k]
            np.einsum("pcm,pm->cm", coefficients[k:, :, part], lowered, out=terms[k, :, part])
    return list(terms)


def _powers(place: Floats) -> Floats:
    """Return `place` to the powers 0 to TERMS - 1, shape (TERMS, m)."""
    powers = np.empty((TERMS, len(place)))
    powers[0] = 1.0
    powers[1] = place
    for p in range(2, TERMS):
        np.multiply(powers[p // 2], powers[(p + 1) // 2], out=powers[p])
    return powers


def slopes(values: Floats) -> Floats:
    """Return derivatives (per node) at the nodes of functions of shape (r, n), zero in the margins."""
    result = np.zeros_like(values)
    for row, out in zip(values, result, strict=True):
        out[MARGIN:-MARGIN] = np.correlate(row, _SLOPE_AT_NODE, mode="valid")
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

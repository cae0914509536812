"""One satellite over many stations: its way east, north and up of each."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from passplan.sky.nodes import middles, polynomials, slopes, stencils
from passplan.sky.propagate import Arc
from passplan.sky.sites import Sites

Floats = NDArray[np.float64]
Ints = NDArray[np.intp]


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class View:
    """East, north and up (km) of one satellite at s stations and n nodes.

    Places are counted in nodes, rates are per node.

    Attributes:
        rows: east of every station, then north, then up: shape (3 s, n).
        axes: unit vectors east, north, up of each station, shape (3, 3, s): direction, component, station.
        motion_km: Earth-fixed velocity per node, shape (3, n).
        step_s: seconds between nodes.
    """

    rows: Floats
    axes: Floats
    motion_km: Floats
    step_s: int

    @classmethod
    def of(cls, arc: Arc, sites: Sites) -> "View":
        """Return the view of an arc from places."""
        axes = np.stack((sites.east, sites.north, sites.up))
        rows = axes.reshape(-1, 3) @ arc.itrs_km
        rows -= np.einsum("asi,si->as", axes, sites.position_km).reshape(-1, 1)
        by_station = np.ascontiguousarray(axes.transpose(0, 2, 1))
        return cls(rows=rows, axes=by_station, motion_km=slopes(arc.itrs_km), step_s=arc.step_s)

    @property
    def up(self) -> Floats:
        """Heights above the tangent planes, shape (s, n)."""
        return self.rows[2 * self.axes.shape[2] :]

    def at_nodes(self, row: Ints, node: Ints) -> tuple[Floats, Floats]:
        """Return east, north, up of stations `row` at nodes, and their rates, shape (3, m) each."""
        here = self.rows.ravel().take(self._three(row) * self.rows.shape[1] + node)
        moving = np.einsum("aim,im->am", self.axes.take(row, axis=2), self.motion_km.take(node, axis=1))
        return here, moving

    def curves(self, row: Ints, interval: Ints) -> tuple[Floats, Floats]:
        """Return polynomials of east, north, up (TERMS, 3, m) after nodes `interval`, and their middles."""
        first = stencils(interval, self.rows.shape[1])
        return polynomials(self.rows, self._three(row), first), middles(first)

    def _three(self, row: Ints) -> Ints:
        """Return the indices of the three rows of each station, shape (3, m)."""
        rows: Ints = row + self.axes.shape[2] * np.arange(3)[:, np.newaxis]
        return rows

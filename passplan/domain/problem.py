"""What the optimiser is told: passes cut to what can be used, and the stocks they draw on.

Seconds of the week, joules, bytes. The planner's margins (0.5 s, 0.05 deg, 0.5 % of
capacity and of bytes) are already in these figures, so bound and plan carry the same.
"""

from dataclasses import dataclass
from typing import Literal

from passplan.domain.moments import Horizon
from passplan.domain.passes import Floats, Pass
from passplan.domain.requests import Order

Side = Literal["left", "right"]


@dataclass(frozen=True, kw_only=True, slots=True)
class Slice:
    """A stretch of a pass on one side of its peak, whole seconds, half-open.

    Attributes:
        goodput_byte_s: mean over the stretch.
        minute_s: start of the charge-grid minute it lies in.
    """

    start_s: int
    end_s: int
    side: Side
    goodput_byte_s: float
    minute_s: int


@dataclass(frozen=True, kw_only=True, slots=True)
class Option:
    """One usable piece of a pass the optimiser may choose, whole seconds."""

    start_s: int
    end_s: int


@dataclass(frozen=True, kw_only=True, slots=True)
class Reach:
    """Where in a pass a command of one least elevation may go: around the peak, whole seconds."""

    least_elevation_deg: float
    rise_s: int
    fall_s: int


@dataclass(frozen=True, kw_only=True, slots=True)
class Duty:
    """An operator who could take a pass.

    Attributes:
        operator: index into `Problem.operators`.
        options: indices of the pass's options that lie in their hours, preparation included.
        load_min: preparation and the whole pass; night_min: the part of it at night.
        days: local calendar days (ordinals) a contact of this pass may begin in.
    """

    operator: int
    options: tuple[int, ...]
    load_min: float
    night_min: float
    days: tuple[int, ...]


@dataclass(frozen=True, kw_only=True, slots=True)
class Placing:
    """A command that could go up in a pass, and the options in which it could."""

    command: int
    options: tuple[int, ...]


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class OfferedPass:
    """One pass cut to what can be used.

    Attributes:
        satellite, station: indices.
        sight: the pass above the mask.
        peak_s: whole second of best goodput; the downlink fills outwards from it.
        peak_number: 0, or 1, 2, ... for the further peaks of one visibility.
        curve_start_s, goodput_byte_s: the one-second curve, shape (n,).
        reaches: in rising least elevation, the first one for a command with no wish.
    """

    satellite: int
    station: int
    sight: Pass
    peak_s: int
    peak_number: int
    success_fraction: float
    curve_start_s: int
    goodput_byte_s: Floats
    slices: tuple[Slice, ...]
    options: tuple[Option, ...]
    reaches: tuple[Reach, ...]
    duties: tuple[Duty, ...]
    placings: tuple[Placing, ...]

    def reach(self, least_elevation_deg: float | None) -> Reach:
        """Return where a command with this least elevation may go."""
        if least_elevation_deg is None:
            return self.reaches[0]
        return next(r for r in self.reaches if r.least_elevation_deg >= least_elevation_deg)

    def byte(self, start_s: int, end_s: int) -> float:
        """Return the bytes the one-second curve carries over [start_s, end_s)."""
        first = start_s - self.curve_start_s
        return float(self.goodput_byte_s[max(0, first) : max(0, first + end_s - start_s)].sum())


@dataclass(frozen=True, kw_only=True, slots=True)
class WantedCommand:
    """A command as the optimiser sees it; `after` holds (index of the other, order)."""

    name: str
    satellite: int
    seconds: int
    reply_s: float
    must: bool
    urgent: bool
    worth: float
    deadline_s: float
    in_week: bool
    least_elevation_deg: float | None
    least_charge_fraction: float | None
    two_people: bool
    after: tuple[tuple[int, Order], ...]


@dataclass(frozen=True, kw_only=True, slots=True)
class WantedSession:
    """A payload session and the whole seconds at which it could start."""

    name: str
    satellite: int
    starts_s: tuple[int, ...]
    length_s: int
    draw_w: float
    makes: tuple[tuple[str, float], ...]
    worth: float


@dataclass(frozen=True, kw_only=True, slots=True)
class StoredKind:
    """One kind of data; weight is worth per kB, partition an index."""

    name: str
    weight: float
    halves_every_days: float | None
    made_byte_s: float
    on_board_byte: float
    partition: int


@dataclass(frozen=True, kw_only=True, slots=True)
class StoredPartition:
    """One part of the store."""

    name: str
    size_byte: float
    overwrites: bool


@dataclass(frozen=True, kw_only=True, slots=True)
class IdleSpan:
    """A stretch of constant power at the bus with no contact and no session."""

    start_s: float
    end_s: float
    sunlit: bool
    net_w: float


@dataclass(frozen=True, kw_only=True, slots=True)
class Craft:
    """One satellite's stocks.

    Attributes:
        idle: spans covering the horizon.
        draw_w: what keying adds to the load.
        capacity_j, floor_j, transmit_floor_j, start_j, end_j: of the cells; floor_j is the
            floor in force plus the planner's margin, end_j what is wanted at the end.
        charge_limit_w: most the cells take, infinite for no limit.
    """

    name: str
    idle: tuple[IdleSpan, ...]
    draw_w: float
    capacity_j: float
    floor_j: float
    transmit_floor_j: float
    start_j: float
    end_j: float
    charge_efficiency: float
    discharge_efficiency: float
    charge_limit_w: float
    kinds: tuple[StoredKind, ...]
    partitions: tuple[StoredPartition, ...]

    def stored_w(self, net_w: float) -> float:
        """Return the rate at which the cells gain (or lose) energy at `net_w` on the bus."""
        return min(
            self.charge_efficiency * net_w,
            net_w / self.discharge_efficiency,
            self.charge_efficiency * self.charge_limit_w,
        )


@dataclass(frozen=True, kw_only=True, slots=True)
class Person:
    """An operator as the optimiser sees them."""

    handle: str
    may_control: bool
    most_duties_day: int
    most_duties_week: int
    rest_s: float
    preparation_s: float
    travel_s: float


@dataclass(frozen=True, kw_only=True, slots=True)
class Site:
    """A station as the optimiser sees it."""

    code: str
    set_up_s: float


@dataclass(frozen=True, kw_only=True, slots=True)
class Terms:
    """How the week is to be planned: times of a contact, gives, and the like."""

    acquire_s: int
    close_s: int
    hand_over_gap_s: int
    sitting_gap_s: float
    give_worth_fraction: float
    give_sittings: float
    give_night_min: float


@dataclass(frozen=True, kw_only=True, slots=True)
class Unstaffed:
    """A usable pass that no licensed operator could run, kept for the words of "why not"."""

    satellite: int
    station: int
    start_s: int
    end_s: int


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class Problem:
    """One week as mathematics may see it; passes are in order of peak."""

    horizon: Horizon
    terms: Terms
    crafts: tuple[Craft, ...]
    sites: tuple[Site, ...]
    operators: tuple[Person, ...]
    passes: tuple[OfferedPass, ...]
    commands: tuple[WantedCommand, ...]
    sessions: tuple[WantedSession, ...]
    unstaffed: tuple[Unstaffed, ...] = ()

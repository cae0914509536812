"""Weeks of one satellite and a few passes, written down as problems by hand or drawn by chance.

Everything happens on the first days of one ISO week; the satellite, its stations and its
people are invented. Unless told otherwise nothing binds: a full battery that nobody
drains, a store without end, operators at any hour.
"""

import math
from collections.abc import Sequence
from dataclasses import replace
from itertools import pairwise

import numpy as np

from passplan.domain.constants import MINUTE_S, WEEK_S
from passplan.domain.moments import Horizon
from passplan.domain.passes import Floats, Pass
from passplan.domain.problem import (
    Craft,
    Duty,
    IdleSpan,
    OfferedPass,
    Option,
    Person,
    Placing,
    Problem,
    Reach,
    Site,
    Slice,
    StoredKind,
    StoredPartition,
    Terms,
    WantedCommand,
    WantedSession,
)

_GRID_S = 60
_ENDLESS_BYTE = 1e9
HORIZON = Horizon(week="2026-W50", lookahead_h=0.0)
TERMS = Terms(
    acquire_s=30,
    close_s=0,
    hand_over_gap_s=10,
    sitting_gap_s=7200.0,
    give_worth_fraction=0.0,
    give_sittings=0.0,
    give_night_min=0.0,
)
OPERATOR = Person(
    handle="qa",
    may_control=True,
    most_duties_day=9,
    most_duties_week=9,
    rest_s=0.0,
    preparation_s=0.0,
    travel_s=0.0,
)
IMAGES = StoredKind(
    name="images",
    weight=1.0,
    halves_every_days=None,
    made_byte_s=0.0,
    on_board_byte=_ENDLESS_BYTE,
    partition=0,
)
CRAFT = Craft(
    name="Speck",
    idle=(IdleSpan(start_s=0.0, end_s=WEEK_S, sunlit=True, net_w=0.0),),
    draw_w=8.0,
    capacity_j=100e3,
    floor_j=0.0,
    transmit_floor_j=0.0,
    start_j=100e3,
    end_j=0.0,
    charge_efficiency=1.0,
    discharge_efficiency=1.0,
    charge_limit_w=math.inf,
    kinds=(IMAGES,),
    partitions=(StoredPartition(name="main", size_byte=2.0 * _ENDLESS_BYTE, overwrites=False),),
)
COMMAND = WantedCommand(
    name="order",
    satellite=0,
    seconds=60,
    reply_s=0.0,
    must=False,
    urgent=False,
    worth=300.0,
    deadline_s=WEEK_S,
    in_week=True,
    least_elevation_deg=None,
    least_charge_fraction=None,
    two_people=False,
    after=(),
)
SESSION = WantedSession(
    name="look", satellite=0, starts_s=(0,), length_s=600, draw_w=0.0, makes=(), worth=300.0
)


def sight(aos_s: float, los_s: float, station: int = 0) -> Pass:
    """Return a pass above the mask; only its times count here."""
    return Pass(
        satellite="Speck",
        station=f"Q{station}",
        aos_s=aos_s,
        tca_s=(aos_s + los_s) / 2.0,
        los_s=los_s,
        aos_azimuth_deg=0.0,
        tca_azimuth_deg=90.0,
        los_azimuth_deg=180.0,
        max_elevation_deg=50.0,
        aos_range_km=2000.0,
        tca_range_km=700.0,
        los_range_km=2000.0,
        largest_range_rate_km_s=7.0,
    )


def offer(
    begin_s: int,
    end_s: int,
    *,
    rate: float | Floats = 100.0,
    peak_s: int | None = None,
    pieces: Sequence[tuple[int, int]] | None = None,
    station: int = 0,
    seen: Pass | None = None,
    peak_number: int = 0,
    success: float = 1.0,
    reaches: Sequence[tuple[float, int, int]] = (),
    commands: Sequence[int] | dict[int, Sequence[int]] = (),
    people: Sequence[int] | dict[int, Sequence[int]] = (0,),
    night_min: float = 0.0,
) -> OfferedPass:
    """Return a pass that can be used from `begin_s` to `end_s`.

    Args:
        begin_s: first usable second.
        end_s: last usable second, as `Option` has it: half-open.
        rate: byte/s, one number or a curve of end_s - begin_s numbers.
        peak_s: middle unless told.
        pieces: (start, end) of the options; the whole unless told.
        station: index.
        seen: the pass above the mask; the usable seconds unless told.
        peak_number: of several peaks of one visibility.
        success: chance that the contact works.
        reaches: (least elevation, rise, fall) of commands with a wish, in rising elevation.
        commands: that could go up, in all options or in the ones told.
        people: who could run it, in all options or in the ones told.
        night_min: of each of their duties.
    """
    curve = np.broadcast_to(np.asarray(rate, dtype=np.float64), (end_s - begin_s,)).copy()
    peak = (begin_s + end_s) // 2 if peak_s is None else peak_s
    options = tuple(Option(start_s=a, end_s=b) for a, b in (pieces or [(begin_s, end_s)]))
    everywhere = tuple(range(len(options)))
    up = commands if isinstance(commands, dict) else dict.fromkeys(commands, everywhere)
    duty = people if isinstance(people, dict) else dict.fromkeys(people, everywhere)
    above = sight(begin_s, end_s, station) if seen is None else seen
    return OfferedPass(
        satellite=0,
        station=station,
        sight=above,
        peak_s=peak,
        peak_number=peak_number,
        success_fraction=success,
        curve_start_s=begin_s,
        goodput_byte_s=curve,
        slices=_slices(begin_s, end_s, peak, curve),
        options=options,
        reaches=tuple(
            Reach(least_elevation_deg=e, rise_s=rise, fall_s=fall)
            for e, rise, fall in [(0.0, begin_s, end_s), *reaches]
        ),
        duties=tuple(
            Duty(
                operator=who,
                options=tuple(fitting),
                load_min=above.length_s / MINUTE_S,
                night_min=night_min,
                days=tuple(sorted({_day(options[number].start_s) for number in fitting})),
            )
            for who, fitting in sorted(duty.items())
        ),
        placings=tuple(Placing(command=c, options=tuple(fitting)) for c, fitting in sorted(up.items())),
    )


def week(
    passes: Sequence[OfferedPass],
    *,
    craft: Craft = CRAFT,
    commands: Sequence[WantedCommand] = (),
    sessions: Sequence[WantedSession] = (),
    people: Sequence[Person] = (OPERATOR,),
    set_up_s: float = 0.0,
    terms: Terms = TERMS,
) -> Problem:
    """Return a problem with as many stations as its passes name."""
    sites = 1 + max((one.station for one in passes), default=0)
    return Problem(
        horizon=HORIZON,
        terms=terms,
        crafts=(craft,),
        sites=tuple(Site(code=f"Q{number}", set_up_s=set_up_s) for number in range(sites)),
        operators=tuple(people),
        passes=tuple(sorted(passes, key=lambda one: one.peak_s)),
        commands=tuple(replace(c, name=f"{c.name} {n}") for n, c in enumerate(commands)),
        sessions=tuple(replace(s, name=f"{s.name} {n}") for n, s in enumerate(sessions)),
    )


def power(*spans: tuple[float, float]) -> tuple[IdleSpan, ...]:
    """Return idle spans from (end s, W) in order; the last one goes on to the end of the week."""
    begin, found = 0.0, []
    for end, net_w in [*spans[:-1], (WEEK_S, spans[-1][1])]:
        found.append(IdleSpan(start_s=begin, end_s=end, sunlit=net_w > 0.0, net_w=net_w))
        begin = end
    return tuple(found)


def _slices(begin_s: int, end_s: int, peak_s: int, curve: Floats) -> tuple[Slice, ...]:
    """Return the pass cut at whole minutes of the week and at its peak."""
    minutes = range(begin_s // _GRID_S * _GRID_S + _GRID_S, end_s, _GRID_S)
    edges = sorted({begin_s, peak_s, end_s, *minutes})
    return tuple(
        Slice(
            start_s=low,
            end_s=high,
            side="left" if high <= peak_s else "right",
            goodput_byte_s=float(curve[low - begin_s : high - begin_s].mean()),
            minute_s=low // _GRID_S * _GRID_S,
        )
        for low, high in pairwise(edges)
    )


def _day(moment_s: float) -> int:
    """Return the ordinal of the UTC day."""
    return HORIZON.utc(moment_s).toordinal()

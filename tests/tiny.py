"""Missions so small that every plan of theirs can be tried, with every limit close by.

One satellite, one to three stations, one or two operators who serve on one weekday only,
in hours that hold two to four passes; up to three commands with orders and deadlines; a
battery of a few watt-hours and a store of a few contacts. The same seed gives the same
mission for ever; draws are made in the order of the code.
"""

from dataclasses import replace
from datetime import time

import numpy as np

from passplan.domain.constants import DAY_S, MINUTE_S
from passplan.domain.elements import ElementSet
from passplan.domain.mission import Mission, Planning
from passplan.domain.moments import WEEKDAYS, Horizon, Span, WeeklyHours
from passplan.domain.people import Operator
from passplan.domain.requests import After, Command, Order
from passplan.domain.satellite import Battery, DataKind, Partition, Power, Satellite, Store, Telemetry
from passplan.domain.station import Station
from tests.draws import Draws
from tests.generated import STRONG_RADIO, WEEK, near_circular, station_between
from tests.rough_sky import UsablePass, positions_teme, shadow_spans, usable_passes

FEWEST_PASSES, MOST_PASSES = 2, 4

_NAME = "Speck"
_GRID_S = 10.0
_LEAST_PASS_S = 140.0
_DOUBTFUL_PASS_S = 100.0  # on this grid it may or may not have the least contact
_APART_S = 1800.0
_ORDERS: tuple[Order, ...] = ("after", "after_ack", "after_contact")


def tiny_mission(seed: int) -> tuple[Mission, dict[str, ElementSet]]:
    """Return a tiny mission and its element set, by satellite name."""
    draws = Draws(seed)
    elements = near_circular(draws, _NAME)
    stations = tuple(station_between(draws, f"Q{n + 1:02d}") for n in range(1 + draws.below(3)))
    lookahead_h = 24.0 * draws.below(2)
    horizon = Horizon(week=WEEK, lookahead_h=lookahead_h)
    seconds = np.arange(0.0, horizon.end_s + 1.0, _GRID_S)
    places = positions_teme(elements, horizon, seconds)
    passes = usable_passes(stations, horizon, {_NAME: (seconds, places)}, _DOUBTFUL_PASS_S)
    openings = _openings(passes)
    opening = openings[draws.below(len(openings))]
    dark = sum(end - begin for begin, end in shadow_spans(horizon, seconds, places)) / horizon.end_s
    operators = _operators(draws, stations, opening)
    mission = Mission(
        name=f"Tiny {seed}",
        pinned_week=WEEK,
        planning=Planning(
            lookahead_h=lookahead_h,
            acquire_s=30.0,
            close_s=10.0 * draws.below(2),
            least_contact_s=120.0,
            guard_s=0.0,
        ),
        satellites=(_satellite(draws, horizon, dark),),
        stations=stations,
        operators=operators,
        commands=_commands(draws, horizon, opening, pair=len(operators) == 2),
    )
    return mission, {_NAME: elements}


def _openings(passes: list[UsablePass]) -> list[Span]:
    """Return the spans (s) within one day, Tuesday to Sunday, that hold two to four passes and cut none.

    Passes within half an hour of each other are held or left together.
    """
    clusters: list[list[UsablePass]] = []
    for one in passes:
        if clusters and one.start_s - max(other.end_s for other in clusters[-1]) < _APART_S:
            clusters[-1].append(one)
        else:
            clusters.append([one])
    found = []
    for first in range(len(clusters)):
        for last in range(first, min(first + MOST_PASSES, len(clusters))):
            held = [one for cluster in clusters[first : last + 1] for one in cluster]
            span = (
                min(one.start_s for one in held) - 0.5 * _APART_S,
                max(one.end_s for one in held) + 0.25 * _APART_S,
            )
            clear = all(one.end_s - one.start_s >= _LEAST_PASS_S for one in held)
            one_day = 1 <= span[0] // DAY_S == span[1] // DAY_S <= 6
            if clear and one_day and FEWEST_PASSES <= len(held) <= MOST_PASSES:
                found.append((float(span[0]), float(span[1])))
    return found


def _operators(draws: Draws, stations: tuple[Station, ...], opening: Span) -> tuple[Operator, ...]:
    """Return one operator for the whole opening and in half of the cases a second for a part of it."""
    middle = opening[0] + draws.between(0.2, 0.8) * (opening[1] - opening[0])
    second = (opening, (opening[0], middle), (middle, opening[1]))[draws.below(3)]
    count = 1 + draws.below(2)
    return tuple(
        Operator(
            handle=f"Q{letter}",
            stations=tuple(station.code for station in stations),
            may_control=letter == "A" or draws.chance(0.7),
            time_zone="UTC",
            hours=(_weekly(span),),
            most_duties_day=1 + draws.below(4),
            most_duties_week=4,
            rest_h=round(draws.between(0.0, 2.0), 1),
            preparation_min=float(draws.below(11)),
            travel_min=float(draws.below(31)),
        )
        for letter, span in [("A", opening), ("B", second)][:count]
    )


def _weekly(span: Span) -> WeeklyHours:
    """Return weekly hours that hold `span` (s of the week, within one day) to the whole minute."""
    day, begin_s = divmod(span[0], DAY_S)
    first, last = int(begin_s // MINUTE_S), int((span[1] - day * DAY_S) // MINUTE_S)
    return WeeklyHours(
        days=(WEEKDAYS[int(day)],),
        begin=time(*divmod(first, 60)),
        end=time(*divmod(last, 60)),
    )


def _satellite(draws: Draws, horizon: Horizon, dark_fraction: float) -> Satellite:
    """Return a satellite whose array carries its bus with little to spare."""
    efficiency, bus_w = 0.95, round(draws.between(2.2, 2.5), 2)
    needed_w = bus_w * (1.0 + dark_fraction / (1.0 - dark_fraction) / efficiency**2)
    floor = round(draws.between(0.55, 0.80), 2)
    size_byte = round(draws.between(100e3, 500e3), -3)
    return Satellite(
        name=_NAME,
        radio=STRONG_RADIO,
        power=Power(
            array_w=round(needed_w + draws.between(0.05, 0.4), 2),
            attitude=1.0,
            bus_load_w=bus_w,
            transmitter_draw_w=8.0,
        ),
        battery=Battery(
            capacity_wh=round(draws.between(4.0, 12.0), 1),
            floor_fraction=floor,
            transmit_floor_fraction=round(floor + 0.05 * draws.below(2), 2),
            charge_efficiency=efficiency,
            discharge_efficiency=efficiency,
            telemetry=Telemetry(at_utc=horizon.start, charge_fraction=0.9),
        ),
        store=Store(
            partitions=(
                Partition(
                    name="main",
                    size_byte=size_byte,
                    when_full="refuse" if draws.chance(0.5) else "overwrite_oldest",
                ),
            ),
            kinds=_kinds(draws, size_byte),
        ),
    )


def _kinds(draws: Draws, size_byte: float) -> tuple[DataKind, ...]:
    """Return one or two kinds that fit the store at the start and may fill it."""
    first = DataKind(
        name="images",
        weight="low",
        made_byte_s=round(draws.between(0.0, 1.0), 2),
        on_board_byte=round(draws.between(0.0, 0.7) * size_byte),
    )
    second = DataKind(
        name="health",
        weight="normal",
        halves_every_days=2.0 if draws.chance(0.5) else None,
        made_byte_s=round(draws.between(0.0, 0.5), 2),
        on_board_byte=round(draws.between(0.0, 0.2) * size_byte),
    )
    return (first, second)[: 1 + draws.below(2)]


def _commands(draws: Draws, horizon: Horizon, opening: Span, *, pair: bool) -> tuple[Command, ...]:
    """Return up to three commands whose windows begin or end inside the opening."""
    commands: list[Command] = []
    length_s = opening[1] - opening[0]
    for index in range(draws.below(4)):
        earliest_s = round(opening[0] + draws.between(-0.5, 0.6) * length_s)
        deadline_s = round(earliest_s + draws.between(0.3, 1.2) * length_s + 300.0)
        must = draws.chance(0.3)
        command = Command(
            name=f"order {index}",
            satellite=_NAME,
            exchange_s=float(15 + draws.below(90)),
            earliest_utc=horizon.utc(earliest_s),
            deadline_utc=horizon.utc(deadline_s),
            must=must,
            urgent=draws.chance(0.5) and must,
            least_elevation_deg=float(10 + draws.below(16)) if draws.chance(0.4) else None,
            least_charge_fraction=round(draws.between(0.7, 0.95), 2) if draws.chance(0.3) else None,
            two_people=draws.chance(0.3) and pair,
        )
        waits, order = draws.chance(0.5), _ORDERS[draws.below(3)]
        if commands and waits:
            command = replace(command, after=(After(command=commands[-1].name, order=order),))
        commands.append(command)
    return tuple(commands)

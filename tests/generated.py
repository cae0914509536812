"""Weeks made by chance, the same for the same seed: what speed and quality are measured on.

A week has `satellites` on near-circular orbits and `stations` between the Mediterranean
and Scandinavia. In an *easy* week people are the bottleneck; in a *hard* one three
near-interchangeable operators a station serve at any hour, and energy and data are tight.
*Weak link* and *long uplink* are easy weeks with another rate curve and with five long
commands. What is not drawn:

- elements of Sunday noon before 2026-W50, eccentricity 0.0012, 97.4 deg, no drag;
- stations at 100 m, flat 10 deg mask, 60 s set-up, all transmitting, an antenna that needs
  no turning, everybody on UTC;
- acquire 30 s, no close, no guard time, least contact 120 s;
- 40 Wh, 2.35 W bus, 8 W transmitter, known to stand at 90 % on Monday 00:00;
  array 4.2 W and floor 0.75, in hard weeks 4.1 W and 0.80;
- 3 duties a day and 8 a week, one weekday off; rest, preparation and travel as by default.

The radio closes everywhere above the mask and carries 959 byte/s there. The weeks are
meant to be planned with `goodput_rule` in its place, which never asks for more than
0.2 % over that, so that a second reading from the mission alone still agrees.

The order of the draws, which must never change:

1. of each satellite: height, node, mean anomaly;
2. of each station: latitude, longitude;
3. of each command of each satellite: earliest, time to the deadline, seconds;
4. of each operator of each station: the weekday off;
5. in long-uplink weeks, of each long command of each satellite: earliest, time to the deadline.

So the four kinds of one seed share sky, stations and commands.
"""

import math
from collections.abc import Callable, Collection
from dataclasses import replace
from datetime import time, timedelta
from typing import Literal

import numpy as np

from passplan.domain.constants import DAY_S, EARTH_MU_KM3_S2, EARTH_RADIUS_KM, WEEK_S
from passplan.domain.elements import ElementSet
from passplan.domain.mission import Mission, Planning
from passplan.domain.moments import WEEKDAYS, Horizon, WeeklyHours
from passplan.domain.passes import Floats
from passplan.domain.people import Operator
from passplan.domain.requests import After, Command
from passplan.domain.satellite import (
    Battery,
    DataKind,
    Framing,
    Partition,
    Power,
    Radio,
    Satellite,
    Store,
    Telemetry,
)
from passplan.domain.station import FixedAntenna, GroundRadio, Station
from tests.draws import Draws

WeekKind = Literal["easy", "hard", "weak-link", "long-uplink"]
Feature = Literal["three kinds", "efficiencies", "transmit floor", "chance of success", "look-ahead"]

WEEK = "2026-W50"
FEATURES: tuple[Feature, ...] = (
    "three kinds",  # 3 % of the data weigh normal and 1 % high; without it all is `low`, worth 1 a kB
    "efficiencies",  # 0.95 into and out of the cells; without it 1
    "transmit floor",  # 0.02 above the floor; without it equal to the floor
    "chance of success",  # 0.9 a contact; without it 1
    "look-ahead",  # 24 h beyond the week, charge wanted at their end; without it 0 h
)
START_FRACTION = 0.90
COMMANDS = 25
LONG_COMMANDS = 5

_TOP_RATE_BYTE_S = 960.0
_MADE_BYTE_S = 30.0
_ENDLESS_BYTE = 1e9
STRONG_RADIO = Radio(
    down_hz=437.2e6,
    up_hz=437.2e6,
    transmit_power_w=2.4,
    expected_repeats=0.0,
    framing=Framing(frames_per_keying=9),  # 9 * 256 octets each 2.403 s: 959 byte/s
)


def generated_week(
    kind: WeekKind,
    seed: int,
    satellites: int = 1,
    stations: int = 8,
    features: Collection[Feature] = FEATURES,
) -> tuple[Mission, dict[str, ElementSet]]:
    """Return mission and element sets (by satellite name) of one generated week.

    Args:
        kind: which recipe, see the head of this file.
        seed: of the draws; the same seed gives the same week for ever.
        satellites: how many, each with its own commands.
        stations: how many, each with its own operators.
        features: what is switched on, of `FEATURES`.
    """
    draws = Draws(seed)
    horizon = Horizon(week=WEEK)
    elements = {name: near_circular(draws, name) for name in (f"Quill {n + 1}" for n in range(satellites))}
    ground = tuple(station_between(draws, f"Q{n + 1:02d}") for n in range(stations))
    commands = [c for name in elements for c in _commands(draws, name, horizon)]
    operators = tuple(person for station in ground for person in _operators(draws, station, kind))
    if kind == "long-uplink":
        commands += [c for name in elements for c in _long_commands(draws, name, horizon)]
    mission = Mission(
        name=f"Generated {kind} {seed}",
        pinned_week=WEEK,
        planning=Planning(
            lookahead_h=24.0 if "look-ahead" in features else 0.0,
            acquire_s=30.0,
            close_s=0.0,
            least_contact_s=120.0,
            guard_s=0.0,
            success_fraction=0.9 if "chance of success" in features else 1.0,
        ),
        satellites=tuple(_satellite(name, horizon, features, hard=kind == "hard") for name in elements),
        stations=ground,
        operators=operators,
        commands=tuple(commands),
    )
    return mission, elements


def goodput_rule(kind: WeekKind) -> Callable[[Floats], Floats]:
    """Return the rate curve of one kind of week: elevation (deg, any shape) to goodput (byte/s, same shape).

    Meant for elevations above the mask of 10 deg.
    """

    def near(elevation_deg: Floats) -> Floats:
        return _TOP_RATE_BYTE_S * np.minimum(1.0, np.maximum(0.25, elevation_deg / 25.0))

    def weak(elevation_deg: Floats) -> Floats:
        return _TOP_RATE_BYTE_S * np.clip((elevation_deg - 10.0) / 30.0, 0.0, 1.0)

    return weak if kind == "weak-link" else near


def near_circular(draws: Draws, name: str) -> ElementSet:
    """Return a near-circular orbit, 480 to 580 km high."""
    axis_km = EARTH_RADIUS_KM + draws.between(480.0, 580.0)
    rev_day = DAY_S * math.sqrt(EARTH_MU_KM3_S2 / axis_km**3) / math.tau
    return ElementSet(
        name=name,
        number=None,
        designator="",
        epoch=Horizon(week=WEEK).start - timedelta(hours=12),
        inclination_deg=97.4,
        node_deg=round(draws.between(0.0, 360.0), 4),
        eccentricity=0.0012,
        argument_of_perigee_deg=0.0,
        mean_anomaly_deg=round(draws.between(0.0, 360.0), 4),
        mean_motion_rev_day=round(rev_day, 8),
        bstar_per_earth_radius=0.0,
        source="generated, not an object",
    )


def station_between(draws: Draws, code: str) -> Station:
    """Return a station at latitude 36 to 62 and longitude -10 to 30 deg."""
    return Station(
        name=f"Station {code}",
        code=code,
        latitude_deg=round(draws.between(36.0, 62.0), 4),
        longitude_deg=round(draws.between(-10.0, 30.0), 4),
        altitude_m=100.0,
        time_zone="UTC",
        fixed_antenna=FixedAntenna(gain_table=((0.0, 15.0),)),
        radio=GroundRadio(antenna_gain_dbi=15.0),
        set_up_s=60.0,
    )


def _commands(draws: Draws, satellite: str, horizon: Horizon) -> list[Command]:
    """Return 25 commands; the one after every fifth waits for it and for another contact."""
    commands: list[Command] = []
    for index in range(COMMANDS):
        command = _windowed(draws, f"{satellite} command {index:02d}", satellite, horizon)
        seconds = (5.0, 10.0, 20.0, 60.0)[draws.below(4)] + 15.0
        waits = (After(command=commands[-1].name, order="after_contact"),) if index % 5 == 1 else ()
        commands.append(replace(command, exchange_s=seconds, after=waits))
    return commands


def _long_commands(draws: Draws, satellite: str, horizon: Horizon) -> list[Command]:
    """Return five commands of 150 s that want the satellite above 20 deg."""
    drawn = [_windowed(draws, f"{satellite} long {n}", satellite, horizon) for n in range(LONG_COMMANDS)]
    return [replace(command, exchange_s=150.0, least_elevation_deg=20.0) for command in drawn]


def _windowed(draws: Draws, name: str, satellite: str, horizon: Horizon) -> Command:
    """Return a command with its window drawn: from the first 70 % of the week, half to three days long."""
    earliest_s = round(draws.between(0.0, 0.7 * WEEK_S))
    deadline_s = earliest_s + round(draws.between(0.5 * DAY_S, 3.0 * DAY_S))
    return Command(
        name=name,
        satellite=satellite,
        earliest_utc=horizon.utc(earliest_s),
        deadline_utc=horizon.utc(deadline_s),
    )


def _operators(draws: Draws, station: Station, kind: WeekKind) -> list[Operator]:
    """Return two operators in two shifts, or in hard weeks three at any hour, each a weekday off."""
    shifts = [(time(0), time(0))] * 3 if kind == "hard" else [(time(6), time(14)), (time(14), time(22))]
    people = []
    for letter, (begin, end) in zip("ABC", shifts, strict=False):
        off = draws.below(7)
        days = tuple(day for index, day in enumerate(WEEKDAYS) if index != off)
        people.append(
            Operator(
                handle=f"{station.code}{letter}",
                stations=(station.code,),
                may_control=True,
                time_zone="UTC",
                hours=(WeeklyHours(days=days, begin=begin, end=end),),
                most_duties_day=3,
                most_duties_week=8,
            )
        )
    return people


def _satellite(name: str, horizon: Horizon, features: Collection[Feature], *, hard: bool) -> Satellite:
    """Return the satellite every week flies, with its power, battery and data."""
    efficiency = 0.95 if "efficiencies" in features else 1.0
    floor = 0.80 if hard else 0.75
    return Satellite(
        name=name,
        radio=STRONG_RADIO,
        power=Power(array_w=4.1 if hard else 4.2, attitude=1.0, bus_load_w=2.35, transmitter_draw_w=8.0),
        battery=Battery(
            capacity_wh=40.0,
            floor_fraction=floor,
            transmit_floor_fraction=floor + 0.02 if "transmit floor" in features else floor,
            charge_efficiency=efficiency,
            discharge_efficiency=efficiency,
            telemetry=Telemetry(at_utc=horizon.start, charge_fraction=START_FRACTION),
        ),
        store=Store(
            partitions=(Partition(name="main", size_byte=2.0 * _ENDLESS_BYTE),),
            kinds=_kinds(features, hard=hard),
        ),
    )


def _kinds(features: Collection[Feature], *, hard: bool) -> tuple[DataKind, ...]:
    """Return the data: 30 byte/s made in all in hard weeks, else some made and a backlog without end."""
    backlog = 0.0 if hard else _ENDLESS_BYTE
    made = _MADE_BYTE_S if hard else 0.0
    if "three kinds" not in features:
        return (DataKind(name="images", weight="low", made_byte_s=made, on_board_byte=backlog),)
    health, science = 0.01 * _MADE_BYTE_S, 0.03 * _MADE_BYTE_S
    return (
        DataKind(name="health", weight="high", made_byte_s=health),
        DataKind(name="science", weight="normal", made_byte_s=science),
        DataKind(
            name="images",
            weight="low",
            made_byte_s=made - health - science if hard else 0.0,
            on_board_byte=backlog,
        ),
    )

"""Joins passes, link, data, energy and people into the `Problem` the optimiser is told."""

import math
from collections.abc import Mapping, Sequence
from datetime import datetime

from passplan.budgets.duties import duties, free_spans
from passplan.budgets.energy import carry_forward, idle_profile, lowest, within_discharge_limit
from passplan.budgets.exchange_time import exchange
from passplan.budgets.pieces import options, slices
from passplan.budgets.usable import MARGIN_FRACTION, Run, open_spans, runs
from passplan.domain.constants import HOUR_S, MINUTE_S
from passplan.domain.mission import Mission
from passplan.domain.moments import Horizon, weekly_spans
from passplan.domain.passes import Sky, Track
from passplan.domain.problem import (
    Craft,
    IdleSpan,
    OfferedPass,
    Option,
    Person,
    Placing,
    Problem,
    Reach,
    Site,
    StoredKind,
    StoredPartition,
    Terms,
    Unstaffed,
    WantedCommand,
    WantedSession,
)
from passplan.domain.requests import Command, occurrences
from passplan.domain.rules import Rule
from passplan.domain.satellite import Satellite

# Kept by offering no other pass and no other place for a command.
RULES = frozenset({Rule.COMMAND_LENGTH, Rule.COMMAND_STATION, Rule.DISCHARGE_LIMIT})


def join(mission: Mission, horizon: Horizon, sky: Sky, tracks: Sequence[Track]) -> Problem:
    """Return the problem of one week.

    Args:
        mission: what people wrote.
        horizon: the week and its look-ahead.
        sky: passes, and shadows from the oldest telemetry on.
        tracks: one for each pass of `sky`, in its order.
    """
    asked = occurrences(mission.commands, horizon)
    commands = wanted_commands(mission, horizon, asked)
    found = _all_runs(mission, horizon, sky, tracks)
    offers, unstaffed = _offers(mission, horizon, found, asked, commands)
    return Problem(
        horizon=horizon,
        terms=_terms(mission),
        crafts=tuple(_craft(mission, horizon, satellite, sky) for satellite in mission.satellites),
        sites=tuple(Site(code=station.code, set_up_s=station.set_up_s) for station in mission.stations),
        operators=tuple(
            Person(
                handle=operator.handle,
                may_control=operator.may_control,
                most_duties_day=operator.most_duties_day,
                most_duties_week=operator.most_duties_week,
                rest_s=operator.rest_h * HOUR_S,
                preparation_s=operator.preparation_min * MINUTE_S,
                travel_s=operator.travel_min * MINUTE_S,
            )
            for operator in mission.operators
        ),
        passes=offers,
        commands=commands,
        sessions=_sessions(mission, horizon),
        unstaffed=unstaffed,
    )


def wanted_commands(
    mission: Mission, horizon: Horizon, asked: Sequence[Command]
) -> tuple[WantedCommand, ...]:
    """Return the commands in numbers; those chained in one window share the higher least elevation."""
    index = {command.name: number for number, command in enumerate(asked)}
    names = [satellite.name for satellite in mission.satellites]
    elevations = _chained_elevations(asked, index)
    found = []
    for number, command in enumerate(asked):
        satellite = mission.satellite(command.satellite)
        air = exchange(satellite, command)
        deadline_s = _seconds(horizon, command.deadline_utc, horizon.week_s)
        in_week = deadline_s <= horizon.week_s
        found.append(
            WantedCommand(
                name=command.name,
                satellite=names.index(command.satellite),
                seconds=air.seconds,
                reply_s=air.reply_s,
                must=command.must and in_week,
                urgent=command.urgent and in_week,
                worth=0.0 if command.must and in_week else mission.worth.of_request(command.worth),
                deadline_s=deadline_s,
                in_week=in_week,
                least_elevation_deg=elevations[number],
                least_charge_fraction=command.least_charge_fraction,
                two_people=command.two_people,
                after=tuple((index[link.command], link.order) for link in command.after),
            )
        )
    return tuple(found)


def _seconds(horizon: Horizon, moment: datetime | None, otherwise: float) -> float:
    """Return an optional moment in seconds of the week."""
    return otherwise if moment is None else horizon.seconds(moment)


def _chained_elevations(asked: Sequence[Command], index: Mapping[str, int]) -> list[float | None]:
    """Return the least elevation of each command, the highest along chains that may share a window."""
    high = [command.least_elevation_deg for command in asked]
    links = [
        (number, index[link.command])
        for number, command in enumerate(asked)
        for link in command.after
        if link.order != "after_contact"
    ]
    for _ in links:
        for one, two in links:
            told = [value for value in (high[one], high[two]) if value is not None]
            high[one] = high[two] = max(told) if told else None
    return high


def _all_runs(mission: Mission, horizon: Horizon, sky: Sky, tracks: Sequence[Track]) -> list[Run]:
    """Return every usable run, in order of peak."""
    spans = {
        (satellite.name, station.code): open_spans(station, satellite, horizon)
        for satellite in mission.satellites
        for station in mission.stations
    }
    found = [
        run
        for sight, track in zip(sky.passes, tracks, strict=True)
        if mission.station(sight.station).radio.transmits
        and within_discharge_limit(mission.satellite(sight.satellite))
        for run in runs(mission, sight, track, spans[sight.satellite, sight.station])
    ]
    return sorted(found, key=lambda run: (run.peak_s, run.sight.satellite, run.sight.station))


def _offers(
    mission: Mission,
    horizon: Horizon,
    found: Sequence[Run],
    asked: Sequence[Command],
    commands: Sequence[WantedCommand],
) -> tuple[tuple[OfferedPass, ...], tuple[Unstaffed, ...]]:
    """Return the passes with a contact option and a licensed operator, and those that lack one."""
    free = {person.handle: free_spans(person, horizon) for person in mission.operators}
    night = [mission.planning.night]
    nights = {person.handle: weekly_spans(night, person.time_zone, horizon) for person in mission.operators}
    satellites = [satellite.name for satellite in mission.satellites]
    stations = [station.code for station in mission.stations]
    offers, unstaffed = [], []
    for number, run in enumerate(found):
        station = mission.station(run.sight.station)
        pieces = options(mission, run, _overlapping(found, number))
        people = duties(mission, horizon, run.sight, pieces, free, nights)
        where = satellites.index(run.sight.satellite), stations.index(run.sight.station)
        if not any(mission.operators[duty.operator].may_control for duty in people):
            unstaffed.append(
                Unstaffed(satellite=where[0], station=where[1], start_s=run.start_s, end_s=run.end_s)
            )
            continue
        wishes = sorted({c.least_elevation_deg for c in commands if c.least_elevation_deg is not None})
        floor = station.transmit_floor_deg
        reaches = [(floor, *run.reach(floor))] + [(wish, *run.reach(max(wish, floor))) for wish in wishes]
        offers.append(
            OfferedPass(
                satellite=where[0],
                station=where[1],
                sight=run.sight,
                peak_s=run.peak_s,
                peak_number=run.number,
                success_fraction=mission.success_fraction(station),
                curve_start_s=run.track.start_s,
                goodput_byte_s=run.goodput_byte_s,
                slices=slices(run),
                options=pieces,
                reaches=tuple(Reach(least_elevation_deg=e, rise_s=r, fall_s=f) for e, r, f in reaches),
                duties=people,
                placings=_placings(horizon, run, pieces, asked),
            )
        )
    return tuple(offers), tuple(unstaffed)


def _overlapping(found: Sequence[Run], number: int) -> list[Run]:
    """Return the runs of the same satellite at other stations that overlap one, near it in the order."""
    run, near = found[number], []
    for step in (-1, 1):
        other = number + step
        # Peaks lie inside runs, so beyond an hour no run of a low orbit can overlap; high ones are few.
        while 0 <= other < len(found) and abs(found[other].peak_s - run.peak_s) < 24 * HOUR_S:
            far = found[other]
            if far.peak_s + HOUR_S < run.start_s or far.peak_s - HOUR_S > run.end_s:
                break
            same = far.sight.satellite == run.sight.satellite and far.sight.station != run.sight.station
            if same and far.start_s < run.end_s and run.start_s < far.end_s:
                near.append(far)
            other += step
    return near


def _placings(
    horizon: Horizon, run: Run, pieces: Sequence[Option], asked: Sequence[Command]
) -> tuple[Placing, ...]:
    """Return which commands could go up in which options of a run."""
    found = []
    for number, command in enumerate(asked):
        if command.satellite != run.sight.satellite or (
            command.stations and run.sight.station not in command.stations
        ):
            continue
        begin = _seconds(horizon, command.earliest_utc, 0.0)
        end = _seconds(horizon, command.deadline_utc, horizon.week_s)
        fitting = tuple(n for n, piece in enumerate(pieces) if begin <= piece.start_s and piece.end_s <= end)
        if fitting:
            found.append(Placing(command=number, options=fitting))
    return tuple(found)


def _sessions(mission: Mission, horizon: Horizon) -> tuple[WantedSession, ...]:
    """Return the sessions with the whole seconds at which each could start."""
    names = [satellite.name for satellite in mission.satellites]
    found = []
    for session in mission.sessions:
        length = math.ceil(session.length_s)
        starts: set[int] = set()
        for window in session.windows:
            begin = max(0, math.ceil(horizon.seconds(window.begin_utc)))
            last = math.floor(min(horizon.seconds(window.end_utc), horizon.end_s)) - length
            starts |= set(range(begin, last + 1, int(session.grid_s)))
        found.append(
            WantedSession(
                name=session.name,
                satellite=names.index(session.satellite),
                starts_s=tuple(sorted(starts)),
                length_s=length,
                draw_w=session.draw_w,
                makes=tuple(sorted(session.makes.items())),
                worth=mission.worth.of_request(session.worth),
            )
        )
    return tuple(found)


def _terms(mission: Mission) -> Terms:
    """Return how the week is to be planned, whole seconds rounded to the safe side."""
    planning, gives = mission.planning, mission.gives
    return Terms(
        acquire_s=math.ceil(planning.acquire_s),
        close_s=math.ceil(planning.close_s),
        hand_over_gap_s=math.ceil(planning.hand_over_gap_s),
        sitting_gap_s=planning.sitting_gap_h * HOUR_S,
        give_worth_fraction=gives.worth_fraction,
        give_sittings=gives.sittings,
        give_night_min=gives.night_min,
    )


def _craft(mission: Mission, horizon: Horizon, satellite: Satellite, sky: Sky) -> Craft:
    """Return one satellite's stocks, the planner's margin in its floors."""
    battery = satellite.battery
    shadows = sky.shadows[satellite.name]
    spans = idle_profile(satellite, shadows, 0.0, horizon.end_s)
    start_j, _ = carry_forward(satellite, shadows, horizon, mission.planning)
    idle_low_j = lowest(satellite, shadows, 0.0, horizon.end_s, start_j)
    margin_j = MARGIN_FRACTION * battery.capacity_j
    partitions = [part.name for part in satellite.store.partitions]
    return Craft(
        name=satellite.name,
        idle=tuple(IdleSpan(start_s=s.start_s, end_s=s.end_s, sunlit=s.sunlit, net_w=s.net_w) for s in spans),
        draw_w=satellite.transmitter_draw_w,
        capacity_j=battery.capacity_j,
        floor_j=min(battery.floor_fraction * battery.capacity_j + margin_j, idle_low_j),
        transmit_floor_j=battery.transmit_floor_fraction * battery.capacity_j + margin_j,
        start_j=start_j,
        end_j=min(start_j, mission.planning.end_fraction * battery.capacity_j),
        charge_efficiency=battery.charge_efficiency,
        discharge_efficiency=battery.discharge_efficiency,
        charge_limit_w=math.inf if battery.charge_limit_w is None else battery.charge_limit_w,
        kinds=tuple(
            StoredKind(
                name=kind.name,
                weight=mission.worth.of_kilobyte(kind.weight),
                halves_every_days=kind.halves_every_days,
                made_byte_s=kind.made_byte_s,
                on_board_byte=kind.on_board_byte,
                partition=partitions.index(kind.partition),
            )
            for kind in satellite.store.kinds
        ),
        partitions=tuple(
            StoredPartition(name=p.name, size_byte=p.size_byte, overwrites=p.when_full == "overwrite_oldest")
            for p in satellite.store.partitions
        ),
    )

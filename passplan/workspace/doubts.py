"""What is legal and surely unintended: told by `check` beside the mistakes, and no reason to stop."""

from collections.abc import Iterator
from pathlib import Path

from passplan.domain.constants import DAY_S
from passplan.domain.mission import Mission
from passplan.domain.moments import Horizon, away_spans, merged, outage_spans, weekly_spans, without
from passplan.domain.requests import Command, Session
from passplan.domain.station import Station
from passplan.workspace.documents import is_toml

_READ = ("mission.toml", "operators.toml", "commands.toml")
_OPPOSITE = {"right-circular": "left-circular", "left-circular": "right-circular"}
_OLD_TELEMETRY_DAYS = 7.0


def warnings(mission: Mission, folder: Path | None = None, week: str | None = None) -> list[str]:
    """Return sentences about what a team would want to know, in the order of the files.

    Args:
        mission: as read.
        folder: the workspace, to tell of files in it that nobody reads.
        week: ISO week to look at; None takes the pinned one, and without one nothing is
            said about dates.
    """
    told = [
        *(_unread(folder) if folder else ()),
        *_planning(mission),
        *_satellites(mission),
        *_stations(mission),
    ]
    told += [
        f"{person.handle}: no hours given, so they take no duty"
        for person in mission.operators
        if not person.hours
    ]
    told += [sentence for command in mission.commands for sentence in _command(mission, command)]
    told += [sentence for session in mission.sessions for sentence in _session(mission, session)]
    chosen = week or mission.pinned_week
    if chosen:
        told += _dates(mission, Horizon(week=chosen, lookahead_h=mission.planning.lookahead_h))
    return told


def _unread(folder: Path) -> Iterator[str]:
    """Yield files that look like part of the workspace and are not read."""
    for path in sorted(folder.iterdir()):
        if is_toml(path) and path.name not in _READ:
            yield f"{path.name}: not read; the files here are {', '.join(_READ)}"
    homes = [folder / "satellites", folder / "stations"]
    for path in sorted(path for home in homes if home.is_dir() for path in home.iterdir()):
        if ".toml" in path.name.lower() and not is_toml(path):
            told = "not read; its name must end in .toml and not begin with a dot"
            yield f"{path.parent.name}/{path.name}: {told}"
    for name, what in (("operators.toml", "nobody serves"), ("commands.toml", "nothing is sent up")):
        if not (folder / name).exists():
            yield f"{name}: not there, so {what}"


def _planning(mission: Mission) -> Iterator[str]:
    """Yield settings that fight each other."""
    planning = mission.planning
    if planning.least_contact_s < planning.acquire_s + planning.close_s:
        together_s = planning.acquire_s + planning.close_s
        yield (
            f"least_contact_s ({planning.least_contact_s:g} s) is shorter than acquire_s and close_s "
            f"together ({together_s:g} s): the shortest contacts would carry nothing"
        )
    if planning.refuse_age_days < planning.warn_age_days:
        yield "refuse_age_days is under warn_age_days, so nobody is warned before elements are refused"


def _satellites(mission: Mission) -> Iterator[str]:
    """Yield what would starve a satellite."""
    for satellite in mission.satellites:
        sun_w, load_w = satellite.power.sunlit_w, satellite.idle_sun_w
        if sun_w <= load_w:
            yield (
                f"{satellite.name}: {sun_w:.1f} W in full sunlight do not carry the {load_w:.1f} W "
                "that always run, so the battery only falls"
            )
        limit_w = satellite.battery.discharge_limit_w
        if limit_w is not None and satellite.idle_shadow_w + satellite.transmitter_draw_w > limit_w:
            yield f"{satellite.name}: no contact in shadow, as transmitting takes more than discharge_limit_w"


def _stations(mission: Mission) -> Iterator[str]:
    """Yield stations where no contact can come about."""
    for station in mission.stations:
        people = [person for person in mission.operators if station.code in person.stations]
        able = [person for person in people if person.may_control]
        if station.radio.transmits and able and not any(person.hours for person in able):
            yield f"{station.code}: those who may control it have no hours, so it gets no contact"
        for satellite in mission.satellites:
            if station.radio.polarisation == _OPPOSITE.get(satellite.radio.polarisation):
                yield f"{station.code}: opposite polarisation to {satellite.name}, which costs 20 dB"


def _command(mission: Mission, command: Command) -> Iterator[str]:
    """Yield what keeps a command on the ground."""
    if command.two_people:
        homes = command.stations or tuple(station.code for station in mission.stations)
        if not any(_two_people(mission, mission.station(code)) for code in homes):
            told = "wants two people, and no station it may go from has two operators, one licensed"
            yield f"{command.name}: {told}"
    by_name = {other.name: other for other in mission.commands}
    for link in command.after:
        earliest_utc, deadline_utc = by_name[link.command].earliest_utc, command.deadline_utc
        if earliest_utc is not None and deadline_utc is not None and earliest_utc >= deadline_utc:
            yield f"{command.name}: its deadline comes before {link.command}, which it waits for, may go up"


def _two_people(mission: Mission, station: Station) -> bool:
    """Return whether a transmitting station has two operators, one of whom may control."""
    people = [person for person in mission.operators if station.code in person.stations]
    return station.radio.transmits and len(people) > 1 and any(person.may_control for person in people)


def _session(mission: Mission, session: Session) -> Iterator[str]:
    """Yield what spoils a session."""
    for number, window in enumerate(session.windows):
        if (window.end_utc - window.begin_utc).total_seconds() < session.length_s:
            yield f"{session.name}: windows[{number}] is shorter than length_s, so it is never used"
    store = mission.satellite(session.satellite).store
    sizes = {part.name: part.size_byte for part in store.partitions}
    for kind in store.kinds:
        made = session.makes.get(kind.name, 0.0)
        if made > sizes[kind.partition]:
            yield f"{session.name}: makes more {kind.name} ({made:g} byte) than its partition holds"


def _dates(mission: Mission, horizon: Horizon) -> list[str]:
    """Return what the dates leave nothing of in one week."""
    return [
        *_old_telemetry(mission, horizon),
        *_never_there(mission, horizon),
        *_never_wanted(mission, horizon),
    ]


def _old_telemetry(mission: Mission, horizon: Horizon) -> Iterator[str]:
    """Yield satellites whose last reading says little about the week."""
    for satellite in mission.satellites:
        telemetry = satellite.battery.telemetry
        age_s = -horizon.seconds(telemetry.at_utc) if telemetry else 0.0
        if age_s > _OLD_TELEMETRY_DAYS * DAY_S:
            days = f"{age_s / DAY_S:.0f} days"
            yield f"{satellite.name}: the last telemetry is {days} older than {horizon.week}"


def _never_there(mission: Mission, horizon: Horizon) -> Iterator[str]:
    """Yield stations that never open and people who are always away."""
    always = [(0.0, horizon.end_s)]
    for station in mission.stations:
        hours = weekly_spans(station.hours, station.time_zone, horizon) if station.hours else always
        if not without(hours, outage_spans(station.outages, horizon)):
            yield f"{station.code}: closed all through {horizon.week}"
    for person in mission.operators:
        hours = weekly_spans(person.hours, person.time_zone, horizon)
        if hours and not without(hours, away_spans(person.away, person.time_zone, horizon)):
            yield f"{person.handle}: away all through {horizon.week}"


def _never_wanted(mission: Mission, horizon: Horizon) -> Iterator[str]:
    """Yield commands and sessions that belong to another week."""
    for command in mission.commands:
        earliest_utc, deadline_utc = command.earliest_utc, command.deadline_utc
        if deadline_utc is not None and horizon.seconds(deadline_utc) <= 0.0:
            yield f"{command.name}: its deadline is before {horizon.week}; take it out once it is done"
        if earliest_utc is not None and horizon.seconds(earliest_utc) >= horizon.end_s:
            yield f"{command.name}: its earliest moment is after {horizon.week}"
    for session in mission.sessions:
        spans = [(horizon.seconds(span.begin_utc), horizon.seconds(span.end_utc)) for span in session.windows]
        if not merged(spans, 0.0, horizon.end_s):
            yield f"{session.name}: none of its windows lies in {horizon.week}"

"""What is wanted of the week: commands to send and payload sessions to run."""

import math
from dataclasses import dataclass, replace
from datetime import datetime
from typing import Annotated, Literal

from annotated_types import Interval

from passplan.domain.checked import (
    Checked,
    Elevation,
    Fraction,
    NotNegative,
    text_fault,
)
from passplan.domain.constants import DAY_S
from passplan.domain.moments import Horizon, aware_faults
from passplan.domain.satellite import Weight

Order = Literal["after", "after_ack", "after_contact"]


@dataclass(frozen=True, kw_only=True, slots=True)
class After(Checked):
    """This command goes up only after another one.

    Attributes:
        command: the other one's name.
        order: "after" (same window allowed), "after_ack" (same window allowed, only
            once the reply was heard) or "after_contact" (in a later contact).
    """

    command: str
    order: Order = "after_ack"


@dataclass(frozen=True, kw_only=True, slots=True)
class Command(Checked):
    """One command, or one that returns each day.

    Attributes:
        satellite: whom it is for.
        exchange_s: seconds of the whole exchange, reply and expected repeats included;
            None works it out from `length_byte`.
        length_byte: octets of the command itself.
        earliest_utc, deadline_utc: the whole exchange lies between; None = the week.
        must: it has no worth, it has to go.
        urgent: a must that also goes as early as it can.
        worth: low 100, normal 300, high 1000, or a number, when it is not a must.
        after: other commands that have to be up before.
        least_elevation_deg: of the satellite all through its exchange; None = the station's own.
        least_charge_fraction: battery charge where its contact begins, of the capacity.
        every_day: it is wanted once each day of the week (UTC), named with the date.
        stations: codes allowed; empty = every transmitting station.
        two_people: two operators at the contact.
    """

    name: str
    satellite: str
    exchange_s: Annotated[float, Interval(gt=0.0, le=3600.0)] | None = None
    length_byte: Annotated[int, Interval(ge=1, le=1_000_000)] = 64
    earliest_utc: datetime | None = None
    deadline_utc: datetime | None = None
    must: bool = False
    urgent: bool = False
    worth: Weight | Annotated[float, Interval(ge=0.0, le=1e6)] = "normal"
    after: tuple[After, ...] = ()
    least_elevation_deg: Elevation | None = None
    least_charge_fraction: Fraction | None = None
    every_day: bool = False
    stations: tuple[str, ...] = ()
    two_people: bool = False

    def _faults(self) -> list[tuple[str, object, str]]:
        faults = text_fault("name", self.name) + aware_faults(self, "earliest_utc", "deadline_utc")
        if self.urgent and not self.must:
            faults.append(("urgent", self.urgent, "only a must can be urgent; add must = true"))
        return faults


@dataclass(frozen=True, kw_only=True, slots=True)
class Window(Checked):
    """A stretch of UTC time; a session lies wholly inside one."""

    begin_utc: datetime
    end_utc: datetime

    def _faults(self) -> list[tuple[str, object, str]]:
        return aware_faults(self, "begin_utc", "end_utc")


@dataclass(frozen=True, kw_only=True, slots=True)
class Session(Checked):
    """One run of the payload; the planner decides whether and when in its windows.

    Attributes:
        satellite: whose payload.
        windows: it lies wholly inside one of them.
        length_s: how long it runs.
        draw_w: what it adds to the bus load.
        makes: bytes it makes by kind of data.
        worth: low 100, normal 300, high 1000, or a number.
        grid_s: starts are tried every so many seconds of a window.
    """

    name: str
    satellite: str
    windows: tuple[Window, ...]
    length_s: Annotated[float, Interval(gt=0.0, le=86_400.0)]
    draw_w: NotNegative
    makes: dict[str, NotNegative]
    worth: Weight | Annotated[float, Interval(ge=0.0, le=1e6)] = "normal"
    grid_s: Annotated[float, Interval(ge=10.0, le=86_400.0)] = 600.0

    def _faults(self) -> list[tuple[str, object, str]]:
        faults = text_fault("name", self.name)
        if not self.windows:
            faults.append(("windows", "", "give at least one window"))
        return faults


def occurrences(commands: tuple[Command, ...], horizon: Horizon) -> tuple[Command, ...]:
    """Return the commands of one horizon: those of every day once a day, the rest as they are.

    A daily command becomes one for each UTC day of the week and the look-ahead, named
    "clock 2026-12-07"; a day's one outside its own [earliest, deadline] is left out.
    What depends on a daily command depends on that of the same day (for a single
    command the first day it may go), else on the last one before, else on the first
    one after; where the horizon has none, there is nothing to wait for.
    """
    days = {command.name: _days(command, horizon) for command in commands if command.every_day}
    result: list[Command] = []
    for command in commands:
        if command.every_day:
            result += [_on_day(command, days, horizon, day) for day in days[command.name]]
        else:
            day = _first_day(command, horizon)
            result.append(replace(command, after=_after(command, days, horizon, day)))
    return tuple(result)


def _days(command: Command, horizon: Horizon) -> list[int]:
    """Return the UTC days of the horizon (0 = Monday) that leave a daily command any time."""
    within = [_within(command, horizon, day) for day in range(math.ceil(horizon.end_s / DAY_S))]
    return [day for day, (earliest, deadline) in enumerate(within) if earliest < deadline]


def _within(command: Command, horizon: Horizon, day: int) -> tuple[datetime, datetime]:
    """Return between which moments a daily command goes up on one day."""
    begin, end = horizon.utc(day * DAY_S), horizon.utc((day + 1) * DAY_S)
    earliest = max(filter(None, (begin, command.earliest_utc)))
    deadline = min(filter(None, (end, command.deadline_utc)))
    return earliest, deadline


def _on_day(command: Command, days: dict[str, list[int]], horizon: Horizon, day: int) -> Command:
    """Return a daily command's occurrence on one day."""
    earliest, deadline = _within(command, horizon, day)
    return replace(
        command,
        name=_dated(command.name, horizon, day),
        earliest_utc=earliest,
        deadline_utc=deadline,
        every_day=False,
        after=_after(command, days, horizon, day),
    )


def _after(command: Command, days: dict[str, list[int]], horizon: Horizon, day: int) -> tuple[After, ...]:
    """Return what a command depends on, daily ones named with a day."""
    found = []
    for link in command.after:
        if link.command not in days:
            found.append(link)
        elif there := days[link.command]:
            on = max((each for each in there if each <= day), default=there[0])
            found.append(replace(link, command=_dated(link.command, horizon, on)))
    return tuple(found)


def _first_day(command: Command, horizon: Horizon) -> int:
    """Return the day of the horizon in which a single command may first go."""
    if command.earliest_utc is None:
        return 0
    return max(0, int(horizon.seconds(command.earliest_utc) // DAY_S))


def _dated(name: str, horizon: Horizon, day: int) -> str:
    """Return a daily command's name on one day of the horizon."""
    return f"{name} {horizon.utc(day * DAY_S):%Y-%m-%d}"

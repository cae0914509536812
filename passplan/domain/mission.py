"""The mission: everything people wrote, checked, in one thing."""

from dataclasses import dataclass, field
from datetime import time
from typing import Annotated, TypeVar

from annotated_types import Interval

from passplan.domain.checked import Checked, Fraction, Hours, Minutes, NotNegative, Seconds, text_fault
from passplan.domain.moments import WeeklyHours
from passplan.domain.people import Operator
from passplan.domain.requests import Command, Session
from passplan.domain.satellite import Satellite
from passplan.domain.station import Station

Noun = TypeVar("Noun")


@dataclass(frozen=True, kw_only=True, slots=True)
class Planning(Checked):
    """How the week is planned; each value has a default a newcomer can leave alone.

    Attributes:
        lookahead_h: planned beyond the week and not published.
        acquire_s: from the start of a contact until data may flow, the request included.
        close_s: at the end of a contact, to say good-bye.
        guard_s: taken off both ends of every pass for the age of the elements.
        hand_over_gap_s: between two stations' contacts with one satellite.
        sitting_gap_h: passes of one station begun within it are one sitting.
        night_begin, night_end: local hours that count as night.
        end_fraction: charge wanted at the end of the horizon, or the charge at its start if less.
        success_fraction: chance that a contact works, until the log says otherwise.
        longest_silence_h: reported; emissions must be stoppable (ITU Radio Regulations 22.1, 25.11).
        warn_age_days, refuse_age_days: of an element set at a contact.
    """

    lookahead_h: Annotated[float, Interval(ge=0.0, le=168.0)] = 24.0
    acquire_s: Seconds = 45.0
    close_s: Seconds = 10.0
    least_contact_s: Seconds = 120.0
    guard_s: Annotated[float, Interval(ge=0.0, le=600.0)] = 10.0
    hand_over_gap_s: Seconds = 10.0
    sitting_gap_h: Hours = 2.0
    night_begin: time = time(22)
    night_end: time = time(6)
    end_fraction: Fraction = 0.80
    success_fraction: Annotated[float, Interval(gt=0.0, le=1.0)] = 0.9
    longest_silence_h: Hours = 26.0
    warn_age_days: NotNegative = 5.0
    refuse_age_days: NotNegative = 14.0

    @property
    def night(self) -> WeeklyHours:
        """The night as weekly hours."""
        return WeeklyHours(begin=self.night_begin, end=self.night_end)


@dataclass(frozen=True, kw_only=True, slots=True)
class Gives(Checked):
    """How much of a step may be given away for the people's sake.

    Attributes:
        worth_fraction: of the most worth there is.
        sittings: more than the fewest.
        night_min: minutes of night duty more than the least, in whole quarter hours.
    """

    worth_fraction: Annotated[float, Interval(ge=0.0, le=0.5)] = 0.03
    sittings: NotNegative = 0.0
    night_min: Minutes = 15.0


@dataclass(frozen=True, kw_only=True, slots=True)
class Worth(Checked):
    """What the words low, normal and high stand for, in expected kB of `low` data."""

    data_low: NotNegative = 1.0
    data_normal: NotNegative = 3.0
    data_high: NotNegative = 10.0
    request_low: NotNegative = 100.0
    request_normal: NotNegative = 300.0
    request_high: NotNegative = 1000.0

    def of_kilobyte(self, weight: float | str) -> float:
        """Return the worth of one expected kilobyte of a kind."""
        return weight if isinstance(weight, int | float) else float(getattr(self, f"data_{weight}"))

    def of_request(self, worth: float | str) -> float:
        """Return the worth of one command placed or session run."""
        return worth if isinstance(worth, int | float) else float(getattr(self, f"request_{worth}"))


@dataclass(frozen=True, kw_only=True, slots=True)
class Mission(Checked):
    """All that people wrote.

    Attributes:
        name: for plans and calendars.
        pinned_week: ISO week planned when none is named; None = the next one.
        pinned_elements: satellite name to the file name of the element set to use.
    """

    name: str
    pinned_week: str | None = None
    pinned_elements: dict[str, str] = field(default_factory=dict)
    planning: Planning = field(default_factory=Planning)
    gives: Gives = field(default_factory=Gives)
    worth: Worth = field(default_factory=Worth)
    satellites: tuple[Satellite, ...]
    stations: tuple[Station, ...]
    operators: tuple[Operator, ...] = ()
    commands: tuple[Command, ...] = ()
    sessions: tuple[Session, ...] = ()

    def _faults(self) -> list[tuple[str, object, str]]:
        return text_fault("name", self.name)

    def satellite(self, name: str) -> Satellite:
        """Return the satellite of that name; KeyError if there is none."""
        return _named(self.satellites, "name", name)

    def station(self, code: str) -> Station:
        """Return the station of that code; KeyError if there is none."""
        return _named(self.stations, "code", code)

    def operator(self, handle: str) -> Operator:
        """Return the operator of that handle; KeyError if there is none."""
        return _named(self.operators, "handle", handle)

    def success_fraction(self, station: Station) -> float:
        """Return the chance that a contact at `station` works."""
        told = station.success_fraction
        return told if told is not None else self.planning.success_fraction


def _named(nouns: tuple[Noun, ...], key: str, name: str) -> Noun:
    """Return the one whose `key` is `name`."""
    for noun in nouns:
        if getattr(noun, key) == name:
            return noun
    raise KeyError(name)

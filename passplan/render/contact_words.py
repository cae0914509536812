"""One contact in words: who does what, what goes up and comes down, and its timeline."""

import math
from dataclasses import dataclass

from passplan.domain.mission import Mission
from passplan.domain.moments import Horizon
from passplan.domain.plan import Contact, Plan
from passplan.render.words import (
    LISTENING_CAUTIONS,
    SENDING_CAUTIONS,
    clock,
    compass,
    degrees,
    listed,
    safe,
    size,
    station_name,
    station_of,
)

_DATE_LENGTH = len(" 2026-12-07")


@dataclass(frozen=True, kw_only=True, slots=True)
class Moment:
    """One line of a contact's timeline.

    Attributes:
        start_s, end_s: seconds of the week; end_s is None for a moment.
        what: what happens, in words.
        look: where the satellite stands, "NNE (23 deg), 10 deg high", or "".
    """

    start_s: float
    end_s: float | None = None
    what: str
    look: str = ""


def sends(contact: Contact, mission: Mission) -> bool:
    """Return whether the station transmits in this contact."""
    station = station_of(mission, contact.station)
    return station.radio.transmits if station else bool(contact.commands)


def short_command(name: str) -> str:
    """Return a command's name without the date a daily one carries: "clock 2026-12-07" gives "clock"."""
    tail = name[-_DATE_LENGTH:]
    dated = len(name) > _DATE_LENGTH and tail[0] == " " and tail[5:9:3] == "--" and tail[1:5].isdigit()
    return safe(name[:-_DATE_LENGTH] if dated else name)


def kinds_down(contact: Contact) -> tuple[str, ...]:
    """Return ("images 290 kB", "health 20 kB"), the largest first."""
    parts = sorted(contact.downlink_byte.items(), key=lambda part: (-part[1], part[0]))
    return tuple(f"{safe(kind)} {size(byte)}" for kind, byte in parts)


def total_down(contact: Contact) -> float:
    """Return the bytes that come down if the contact works."""
    return math.fsum(part.byte for part in contact.carried)


def role(contact: Contact, operator: str, mission: Mission) -> str:
    """Return what an operator does in a contact: "you send", "you listen" or "you assist"."""
    if operator != contact.operators[0]:
        return "you assist"
    return "you send" if sends(contact, mission) else "you listen"


def preparation_s(contact: Contact, mission: Mission, operator: str = "") -> float:
    """Return the preparation of one operator, or the longest of all in the contact; 0 when unknown."""
    wanted = {operator} if operator else set(contact.operators)
    found = [person.preparation_min * 60.0 for person in mission.operators if person.handle in wanted]
    return max(found, default=0.0)


def ready_s(contact: Contact, mission: Mission, operator: str = "") -> int:
    """Return the whole second at which to be ready at the station."""
    return math.floor(contact.start_s - preparation_s(contact, mission, operator))


def up_words(contact: Contact, mission: Mission) -> str:
    """Return what goes up, in a sentence."""
    if contact.commands:
        return f"Goes up: {', '.join(map(safe, contact.commands))}."
    return "Nothing goes up but the call." if sends(contact, mission) else "Nothing goes up."


def down_words(contact: Contact) -> str:
    """Return what comes down, in a sentence."""
    kinds = kinds_down(contact)
    if not kinds:
        return "No data are planned to come down."
    return f"Comes down if all goes well: {size(total_down(contact))} ({', '.join(kinds)})."


def who(contact: Contact, mission: Mission) -> str:
    """Return "QX3AB sends", "Fern listens" or "QX3AB sends with Fern"."""
    first, *others = map(safe, contact.operators or ("nobody",))
    does = "sends" if sends(contact, mission) else "listens"
    return f"{first} {does} with {listed(others)}" if others else f"{first} {does}"


def cautions(contact: Contact, mission: Mission) -> tuple[str, ...]:
    """Return what people at the antenna have to mind."""
    return SENDING_CAUTIONS if sends(contact, mission) else LISTENING_CAUTIONS


def partner(contact: Contact, plan: Plan, mission: Mission, *, before: bool) -> str:
    """Return who has the satellite directly before or after, in a sentence, "" for nobody."""
    name = contact.hand_over_from if before else contact.hand_over_to
    other = next((each for each in plan.all_contacts if each.id == name), None)
    if other is None:
        return ""
    people = listed(map(safe, other.operators))
    place = station_name(mission, other.station)
    if before:
        until = clock(plan.horizon.utc(other.end_s), seconds=True)
        return f"Before you {people} at {place} has the satellite ({other.id}, until {until} UTC)."
    since = clock(plan.horizon.utc(other.start_s), seconds=True)
    return f"After you {people} at {place} takes over ({other.id}, from {since} UTC)."


def timeline(contact: Contact, mission: Mission, operator: str = "") -> list[Moment]:
    """Return a contact from being ready to LOS, in order of time."""
    moments = [
        Moment(start_s=ready_s(contact, mission, operator), what="be ready"),
        Moment(start_s=contact.aos_s, what="AOS, it rises", look=_azimuth(contact.aos_azimuth_deg)),
        Moment(
            start_s=contact.tca_s,
            what="highest",
            look=f"{_azimuth(contact.tca_azimuth_deg)}, {degrees(contact.max_elevation_deg)} high",
        ),
        Moment(start_s=contact.los_s, what="LOS, it sets", look=_azimuth(contact.los_azimuth_deg)),
    ]
    words = {
        "acquire": "find it and call" if sends(contact, mission) else "find it",
        "downlink": "receive",
        "close": "say good-bye" if sends(contact, mission) else "wait for the end",
    }
    for slot in contact.slots:
        what = words.get(slot.kind) or f"send {safe(slot.command)}"
        moments.append(Moment(start_s=slot.start_s, end_s=slot.end_s, what=what))
    return sorted(moments, key=lambda moment: moment.start_s)


def seen(horizon: Horizon, second: float) -> str:
    """Return the UTC clock at a second of the week, "05:12:40"."""
    return clock(horizon.utc(second), seconds=True)


def _azimuth(azimuth_deg: float) -> str:
    """Return "NNE (23 deg)"; 360 is said as 0."""
    return f"{compass(azimuth_deg)} ({round(azimuth_deg) % 360} deg)"

"""Calendars for phones: the mission's, each station's and each operator's.

They are derived from the editions alone; no file remembers what was sent before.
"""

import hashlib
import re
import unicodedata
from collections.abc import Iterable, Sequence

from passplan.domain.mission import Mission
from passplan.domain.plan import IssuedPlan
from passplan.render.calendar_file import calendar_bytes
from passplan.render.event_history import history
from passplan.render.event_words import Owner

_MOST_SLUG = 40


def calendars(
    editions: Sequence[IssuedPlan], mission: Mission, *, alarm_min: int | None = 30
) -> dict[str, bytes]:
    """Return the calendar files of the mission, of each station and of each operator.

    Args:
        editions: every edition of the weeks that matter (the week before and this one), in
            the order in which they were made. Earlier ones must not be left out: SEQUENCE
            would fall and cancelled contacts would be forgotten.
        mission: as it is now. Names, zones and preparation minutes come from it, so that a
            change of these alone shows with the next change of each contact's edition.
        alarm_min: minutes before being ready at which operators' phones ring; None = no
            alarm. The mission's and stations' calendars never ring.

    Returns:
        File name to bytes, the mission's first; nothing when there is no edition. Events to
        come that did not change keep every byte from call to call.

    Raises:
        PassplanError: a plan gives an event that no calendar may hold.
    """
    if not editions:
        return {}
    owners = _owners(editions, mission)
    return {
        name: calendar_bytes(history(editions, owner, mission), editions, owner, mission, alarm_min=alarm_min)
        for name, owner in _file_names(owners).items()
    }


def _owners(editions: Sequence[IssuedPlan], mission: Mission) -> list[Owner]:
    """Return whose calendars to write: all of the mission, then whoever only older editions name."""
    contacts = [contact for issued in editions for contact in issued.plan.contacts]
    stations = [station.code for station in mission.stations]
    people = [person.handle for person in mission.operators]
    stations += sorted(
        {code for each in contacts for code in (each.station, *each.listeners)} - set(stations)
    )
    people += sorted({handle for each in contacts for handle in each.operators} - set(people))
    return [
        Owner(kind="mission", key=mission.name),
        *(Owner(kind="station", key=code) for code in stations),
        *(Owner(kind="operator", key=handle) for handle in people),
    ]


def _file_names(owners: Iterable[Owner]) -> dict[str, Owner]:
    """Return a file name for each owner: "operator-qx3ab.ics", letters any system and address can hold.

    Of two owners whose names come out alike the later one gets a mark made from its full
    name, so that neither name changes while the order of the mission's people does not.
    """
    names: dict[str, Owner] = {}
    for owner in owners:
        plain = unicodedata.normalize("NFKD", owner.key).encode("ascii", "ignore").decode()
        slug = re.sub(r"[^a-z0-9]+", "-", plain.lower()).strip("-")[:_MOST_SLUG].strip("-")
        name = f"{owner.kind}-{slug}.ics"
        if not slug or name in names:
            mark = hashlib.sha256(owner.key.encode()).hexdigest()[:8]
            name = f"{owner.kind}-{slug}-{mark}.ics".replace("--", "-")
        names[name] = owner
    return names

"""Which element set of those in the workspace a satellite is planned with."""

import re
from collections.abc import Iterable
from datetime import datetime, timedelta

from passplan.domain.elements import ElementSet
from passplan.domain.errors import InputError, Mistake
from passplan.domain.moments import Horizon, iso
from passplan.domain.satellite import Satellite

_FOLDER = "elements/"
_PLACE = re.compile(r", (?:line|item) [0-9]+$")
_MOST_NAMED = 8


def choose(
    sets: Iterable[ElementSet], satellite: Satellite, horizon: Horizon, pinned_file: str | None = None
) -> ElementSet:
    """Return the newest set of `satellite` whose epoch is not after the start of the horizon.

    A set fits by catalogue number when the satellite has one (a set with no number
    may then fit by name), else by name, capitals and blanks set aside, else when the
    folder holds one object only.

    Args:
        sets: all element sets of the workspace.
        satellite: whose elements are wanted.
        horizon: the week; a plan must not depend on what was known only later.
        pinned_file: take the newest fitting set of this file, whatever its epoch.

    Raises:
        InputError: no set fits, several objects may be meant, or all are too new, with what to do.
    """
    found = list(sets)
    if pinned_file is not None:
        return max(_fitting(_of_file(found, satellite, pinned_file), satellite), key=_order)
    fitting = _fitting(found, satellite)
    known = [element_set for element_set in fitting if element_set.epoch <= horizon.start]
    if not known:
        oldest = min(fitting, key=_order)
        told = f"every element set is newer than the start of {horizon.week}, {iso(horizon.start)}"
        oldest_told = f"the oldest is of {iso(oldest.epoch)} ({oldest.source})"
        advice = "add an older set, plan a later week, or pin a file in mission.toml"
        raise _refused(satellite, f"{told}; {oldest_told}; {advice}")
    return max(known, key=_order)


def age_days(element_set: ElementSet, moment: datetime) -> float:
    """Return how old the set is at an aware `moment`, in days; negative before its epoch."""
    return (moment - element_set.epoch) / timedelta(days=1)


def file_of(element_set: ElementSet) -> str:
    """Return the file a set came from, as people type it: its source without the line."""
    return _PLACE.sub("", element_set.source)


def same_name(one: str, other: str) -> bool:
    """Return whether two names are one, capitals and blanks set aside."""
    return "".join(one.split()).casefold() == "".join(other.split()).casefold()


def _order(element_set: ElementSet) -> tuple[datetime, bool, str]:
    """Return what the newest set is told by; of one epoch an OMM, which has more digits, before a TLE."""
    return element_set.epoch, element_set.kind != "TLE", element_set.source


def _of_file(sets: list[ElementSet], satellite: Satellite, pinned_file: str) -> list[ElementSet]:
    """Return the sets of one file, named with or without its folder."""
    wanted = pinned_file.rpartition("/")[2]
    chosen = [one for one in sets if file_of(one).rpartition("/")[2] == wanted]
    if not chosen:
        names = sorted({file_of(one).rpartition("/")[2] for one in sets})
        raise _refused(satellite, f"pinned to {wanted}, which is not there; there are: {_listed(names)}")
    return chosen


def _fitting(sets: list[ElementSet], satellite: Satellite) -> list[ElementSet]:
    """Return the sets of the satellite, at least one."""
    if not sets:
        told = "no element set in the folder; add one with: passplan elements add FILE"
        raise _refused(satellite, told)
    named = [one for one in sets if one.name and same_name(one.name, satellite.name)]
    if satellite.number is not None:
        fitting = [one for one in sets if one.number == satellite.number]
        fitting += [one for one in named if one.number is None]
        if fitting:
            return fitting
        told = f"no element set has catalogue number {satellite.number}; the folder holds: {_objects(sets)}"
        raise _refused(satellite, f"{told}; add its elements, or correct number in the satellite's file")
    if named and len({one.number for one in named} - {None}) <= 1:
        return named
    if not named and len({_object(one) for one in sets}) == 1:
        return sets
    told = "several objects have this name" if named else "no element set has this name"
    advice = "write the number of the one meant in the satellite's file"
    raise _refused(satellite, f"{told}; the folder holds: {_objects(named or sets)}; {advice}")


def _object(element_set: ElementSet) -> tuple[int, str]:
    """Return what tells objects apart: the catalogue number, or the name where there is none."""
    if element_set.number is not None:
        return element_set.number, ""
    return 0, "".join(element_set.name.split()).casefold()


def _objects(sets: Iterable[ElementSet]) -> str:
    """Return the objects of the sets in words, each once."""
    newest = {_object(one): one for one in sorted(sets, key=_order)}
    return _listed([f"{one.number or 'no number'} {one.name}".strip() for _, one in sorted(newest.items())])


def _listed(words: list[str]) -> str:
    """Return words with commas, the first few of many."""
    more = f" and {len(words) - _MOST_NAMED} more" if len(words) > _MOST_NAMED else ""
    return ", ".join(words[:_MOST_NAMED]) + more


def _refused(satellite: Satellite, told: str) -> InputError:
    return InputError([Mistake(_FOLDER, satellite.name, "", told)])

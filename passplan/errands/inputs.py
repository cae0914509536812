"""What a week is planned or listed from: the mission, the week, and an element set for each satellite."""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from datetime import datetime
from pathlib import Path

from passplan.domain.elements import ElementSet
from passplan.domain.errors import InputError, Mistake
from passplan.domain.mission import Mission
from passplan.domain.moments import Horizon, week_after, week_start
from passplan.domain.rules import Rule
from passplan.errands.desk import Desk
from passplan.render.words import safe
from passplan.workspace.element_choice import age_days, choose, file_of
from passplan.workspace.element_files import read_folder
from passplan.workspace.read import read_workspace

RULES = frozenset({Rule.ELEMENTS_AGE})  # kept by refusing to begin

ELEMENTS = "elements"


@dataclass(frozen=True, kw_only=True, slots=True)
class Inputs:
    """One week's input.

    Attributes:
        elements: satellite name to the set used.
    """

    mission: Mission
    horizon: Horizon
    elements: Mapping[str, ElementSet]

    def element_files(self, folder: Path) -> list[Path]:
        """Return the files the sets used lie in, each once."""
        return sorted({folder / file_of(used) for used in self.elements.values()})


def read_inputs(desk: Desk, week: str | None) -> Inputs:
    """Return what a week is planned from; no week means the pinned one, else the next.

    Raises:
        InputError: mistakes in the files, or a satellite without a fitting element set.
        PassplanError: `week` is not an ISO week.
    """
    mission = read_workspace(desk.folder)
    horizon = horizon_of(mission, week, desk.clock())
    elements, mistakes = chosen(element_sets(desk.folder), mission, horizon)
    if mistakes:
        raise InputError([each for error in mistakes for each in error.mistakes])
    return Inputs(mission=mission, horizon=horizon, elements=elements)


def horizon_of(mission: Mission, week: str | None, now: datetime) -> Horizon:
    """Return the horizon of a week; of none the mission's pinned week, else the ISO week after this one.

    Raises:
        PassplanError: `week` is not an ISO week.
    """
    named = week or mission.pinned_week or week_after(now)
    week_start(named)
    return Horizon(week=named, lookahead_h=mission.planning.lookahead_h)


def element_sets(folder: Path) -> list[ElementSet]:
    """Return every element set of a workspace; none where it has no folder of them yet.

    Raises:
        InputError: the slips of all its files.
    """
    home = folder / ELEMENTS
    return read_folder(home) if home.exists() else []


def chosen(
    sets: Sequence[ElementSet], mission: Mission, horizon: Horizon
) -> tuple[dict[str, ElementSet], list[InputError]]:
    """Return the set used for each satellite by name, and why others have none."""
    used: dict[str, ElementSet] = {}
    mistakes: list[InputError] = []
    for satellite in mission.satellites:
        try:
            used[satellite.name] = choose(
                sets, satellite, horizon, mission.pinned_elements.get(satellite.name)
            )
        except InputError as error:
            mistakes.append(error)
    return used, mistakes


def warn_of_ages(desk: Desk, mission: Mission, farthest_days: Mapping[str, float]) -> None:
    """Warn of element sets that are old at a pass or a contact.

    Args:
        desk: where the warning goes.
        mission: for what it calls old.
        farthest_days: satellite name to days between its epoch and the farthest moment it is used at.
    """
    for name, days in farthest_days.items():
        if days > mission.planning.warn_age_days:
            told = f"its elements are {days:.1f} days from the last of these moments"
            desk.warn(f"{safe(name)}: {told}; look again with newer ones before then.")


def refuse_age(inputs: Inputs) -> None:
    """Refuse element sets that are too old within the week, before any time is spent on them.

    Raises:
        InputError: every such set.
    """
    most = inputs.mission.planning.refuse_age_days
    mistakes = []
    for name, days in _farthest_days(inputs).items():
        if days >= most:
            told = f"up to {days:.1f} days from a moment of {inputs.horizon.week}, and {most:g} are too many"
            advice = (
                "add newer ones with: passplan elements add FILE, or plan all the same with --old-elements"
            )
            mistakes.append(Mistake(inputs.elements[name].source, name, "", f"{told}; {advice}"))
    if mistakes:
        raise InputError(mistakes)


def _farthest_days(inputs: Inputs) -> dict[str, float]:
    """Return how many days the end of the week farther from the epoch is from it, by satellite."""
    ends = (inputs.horizon.start, inputs.horizon.utc(inputs.horizon.week_s))
    return {name: max(abs(age_days(used, end)) for end in ends) for name, used in inputs.elements.items()}

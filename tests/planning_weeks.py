"""Generated weeks made ready for the planner: sky, tracks and problem, the generator's rates in force."""

from collections.abc import Iterator
from contextlib import contextmanager
from dataclasses import dataclass, replace
from unittest.mock import patch

import numpy as np

from passplan.budgets import usable
from passplan.budgets.join import join
from passplan.domain.elements import ElementSet
from passplan.domain.mission import Mission
from passplan.domain.moments import Horizon
from passplan.domain.passes import Floats, Sky, Track
from passplan.domain.problem import Problem
from passplan.domain.satellite import Satellite
from passplan.domain.station import Station
from passplan.week import sky_of
from tests.generated import WEEK, WeekKind, generated_week, goodput_rule


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class Week:
    """One week, joined; tracks stand in the order of the passes of `sky`."""

    mission: Mission
    horizon: Horizon
    elements: dict[str, ElementSet]
    sky: Sky
    tracks: list[Track]
    problem: Problem


@contextmanager
def rates_of(kind: WeekKind) -> Iterator[None]:
    """Plan with the rate curve of one kind of week in the place of the link."""
    rule = goodput_rule(kind)

    def goodput_byte_s(_: Satellite, station: Station, track: Track) -> Floats:
        up = track.elevation_deg >= station.least_receive_elevation_deg
        return np.where(up, rule(track.elevation_deg), 0.0)

    with patch.object(usable, "goodput_byte_s", goodput_byte_s):
        yield


def joined_week(kind: WeekKind, seed: int, *, stations: int = 8, give_fraction: float | None = None) -> Week:
    """Return one generated week of one satellite.

    Args:
        kind: which recipe.
        seed: of its draws.
        stations: how many.
        give_fraction: of the worth, in the place of the mission's own.
    """
    mission, elements = generated_week(kind, seed, stations=stations)
    if give_fraction is not None:
        mission = replace(mission, gives=replace(mission.gives, worth_fraction=give_fraction))
    horizon = Horizon(week=WEEK, lookahead_h=mission.planning.lookahead_h)
    sky, ways = sky_of(mission, horizon, elements)
    with rates_of(kind):
        problem = join(mission, horizon, sky, ways)
    return Week(mission=mission, horizon=horizon, elements=elements, sky=sky, tracks=ways, problem=problem)

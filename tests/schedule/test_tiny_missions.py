"""Tiny missions from their files' nouns to a laid-out plan, held to every plan of theirs."""

import pytest

from passplan.budgets.join import join
from passplan.domain.moments import Horizon
from passplan.domain.problem import Problem
from passplan.sky.survey import survey
from passplan.sky.tracks import tracks
from tests.hold_plans import hold_to_all_plans, tried
from tests.tiny import tiny_mission


def tiny_problem(seed: int) -> Problem:
    """Return the problem of one tiny mission."""
    mission, elements = tiny_mission(seed)
    horizon = Horizon(week=mission.pinned_week or "", lookahead_h=mission.planning.lookahead_h)
    sky = survey(elements, mission.stations, horizon)
    return join(mission, horizon, sky, tracks(elements, mission.stations, sky.passes, horizon))


@pytest.mark.parametrize("seed", range(12))
def test_no_plan_of_a_tiny_mission_beats_the_bound_and_the_lay_out_reaches_the_best(seed: int) -> None:
    hold_to_all_plans(tried(tiny_problem(seed)))


@pytest.mark.long
@pytest.mark.parametrize("seed", range(12, 60))
def test_more_tiny_missions(seed: int) -> None:
    hold_to_all_plans(tried(tiny_problem(seed)))

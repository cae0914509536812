"""The model, its bound and its lay-out held to every plan of small weeks, tried one by one."""

import pytest

from tests.drawn_weeks import drawn_week
from tests.hold_plans import hold_to_all_plans, tried


@pytest.mark.parametrize("seed", range(40))
def test_no_plan_of_a_drawn_week_beats_the_bound_and_the_lay_out_reaches_the_best(seed: int) -> None:
    hold_to_all_plans(tried(drawn_week(seed)))


@pytest.mark.long
@pytest.mark.parametrize("seed", range(40, 340))
def test_three_hundred_more_drawn_weeks(seed: int) -> None:
    hold_to_all_plans(tried(drawn_week(seed)))

"""Weeks of one to three contacts worked out by hand, each in a comment: people."""

from dataclasses import replace

import pytest

from passplan.schedule.solve import solve
from tests.by_hand import contacts, step, worth
from tests.small_weeks import COMMAND, CRAFT, IMAGES, OPERATOR, TERMS, offer, sight, week


def test_the_chance_of_success_leaves_the_rest_on_board() -> None:
    # 10 kB on board, chance 0.6: the first contact asks for all, 6 kB are expected, 4 kB stay and
    # the second one is expected to bring 2.4 kB.
    craft = replace(CRAFT, kinds=(replace(IMAGES, on_board_byte=10e3),))
    passes = [offer(3600, 4000, success=0.6), offer(9000, 9400, success=0.6)]
    assert worth(week(passes, craft=craft)) == pytest.approx(8.4)


def test_one_visibility_in_two_peaks_needs_no_set_up_between() -> None:
    # One pass with a dip at 3790: two peaks, pieces 10 s apart, 600 s of set-up. Both are used,
    # 190 - 30 and 200 - 30 s: 33 kB. It is one sitting.
    seen = sight(3600, 4000)
    passes = [offer(3600, 3790, seen=seen), offer(3800, 4000, seen=seen, peak_number=1)]
    problem = week(passes, set_up_s=600.0)
    assert worth(problem) == pytest.approx(33.0)
    assert step(solve(problem), "sittings") == (1.0, 1.0)
    # Two visibilities that far apart are not: only the longer one, 17 kB.
    apart = [offer(3600, 3790), offer(3800, 4000)]
    assert worth(week(apart, set_up_s=600.0)) == pytest.approx(17.0)


def test_nobody_licensed_no_contact() -> None:
    people = [replace(OPERATOR, may_control=False)]
    assert worth(week([offer(3600, 4000)], people=people)) == pytest.approx(0.0, abs=1e-9)


def test_an_option_outside_the_licensed_ones_hours_is_not_used() -> None:
    # Only the shorter piece, [3600, 3800), lies in the hours of the licensed one: 17 kB.
    people = [OPERATOR, replace(OPERATOR, may_control=False)]
    passes = [offer(3600, 4000, pieces=[(3600, 3800), (3600, 4000)], people={0: [0], 1: [0, 1]})]
    assert worth(week(passes, people=people)) == pytest.approx(17.0)


def test_two_people_where_a_command_asks_for_them() -> None:
    # Two are there for the second pass only, so the command goes up in it, with both of them.
    people = [OPERATOR, replace(OPERATOR, handle="qb", may_control=False)]
    passes = [offer(3600, 4000, commands=[0]), offer(9000, 9400, commands=[0], people=[0, 1])]
    problem = week(passes, commands=[replace(COMMAND, two_people=True)], people=people)
    assert {laid.index: laid.operators for laid in contacts(problem)} == {0: (0,), 1: (0, 1)}
    assert worth(problem) == pytest.approx(300.0 + 74.0 - 6.0)


def test_two_people_are_not_to_be_had() -> None:
    problem = week([offer(3600, 4000, commands=[0])], commands=[replace(COMMAND, two_people=True)])
    assert worth(problem) == pytest.approx(37.0)


def test_one_duty_a_day_takes_the_better_pass_of_each_day() -> None:
    # Monday 37 or 18.5 kB, Tuesday 37 kB.
    passes = [offer(3600, 4000), offer(9000, 9400, rate=50.0), offer(90_000, 90_400)]
    problem = week(passes, people=[replace(OPERATOR, most_duties_day=1)])
    assert worth(problem) == pytest.approx(74.0)
    assert {laid.index for laid in contacts(problem)} == {0, 2}


def test_rest_lies_between_sittings_and_not_inside_one() -> None:
    # Passes at 3600, 9000 and 20 000 s. The second begins 5400 s after the first: one sitting.
    # Between 9400 and 20 000 less 600 s of preparation are 10 000 s: with 3 h of rest the third
    # cannot follow; with 2.5 h it can.
    passes = [offer(3600, 4000), offer(9000, 9400), offer(20_000, 20_400)]
    tired = replace(OPERATOR, rest_s=10_800.0, preparation_s=600.0)
    assert worth(week(passes, people=[tired])) == pytest.approx(74.0)
    assert worth(week(passes, people=[replace(tired, rest_s=9000.0)])) == pytest.approx(111.0)


def test_travel_between_stations() -> None:
    # 1000 s from the first pass's end to the second's start, less 300 s of preparation: 700 s.
    passes = [offer(3600, 4000), offer(5000, 5400, station=1)]
    slow = replace(OPERATOR, preparation_s=300.0, travel_s=701.0)
    assert worth(week(passes, people=[slow])) == pytest.approx(37.0)
    assert worth(week(passes, people=[replace(slow, travel_s=700.0)])) == pytest.approx(74.0)


def test_fewer_sittings_for_a_small_give() -> None:
    # Three passes, 37 kB at 3600 and at 9000 (one sitting) and 1 kB at 30 000 (another one).
    # 3 % of 75 kB may go, so the third pass does: one sitting.
    craft = replace(CRAFT, kinds=(replace(IMAGES, on_board_byte=75e3),))
    passes = [offer(3600, 4000), offer(9000, 9400), offer(30_000, 30_400)]
    problem = week(passes, craft=craft, terms=replace(TERMS, give_worth_fraction=0.03))
    assert step(solve(problem), "sittings") == (1.0, 1.0)
    assert {laid.index for laid in contacts(problem)} == {0, 1}
    assert step(solve(week(passes, craft=craft)), "sittings") == (2.0, 2.0)


def test_night_duty_chooses_who_serves() -> None:
    # Alike but for the night: each operator has 5 minutes of it in the other one's passes.
    people = [OPERATOR, replace(OPERATOR, handle="qb")]
    passes = [offer(3600, 4000, people=[0, 1]), offer(50_000, 50_400, people=[0, 1])]
    nights = [(5.0, 0.0), (0.0, 5.0)]
    passes = [
        replace(p, duties=tuple(replace(d, night_min=n) for d, n in zip(p.duties, night, strict=True)))
        for p, night in zip(passes, nights, strict=True)
    ]
    problem = week(passes, people=people)
    assert step(solve(problem), "night duty") == (0.0, 0.0)
    assert [laid.operators for laid in contacts(problem)] == [(1,), (0,)]

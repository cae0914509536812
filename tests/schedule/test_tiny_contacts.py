"""Weeks of one to three contacts worked out by hand, each in a comment: contacts and commands."""

from dataclasses import replace

import numpy as np
import pytest

from passplan.domain.requests import Order
from passplan.schedule.layout import lay_out
from passplan.schedule.solve import solve
from tests.by_hand import contacts, sent, step, worth
from tests.small_weeks import COMMAND, OPERATOR, TERMS, offer, week


def test_one_contact_brings_down_all_its_seconds() -> None:
    # 400 s less 30 s to acquire, at 100 byte/s: 37 kB.
    assert worth(week([offer(3600, 4000)])) == pytest.approx(37.0)


def test_no_contacts_offered_no_plan_and_no_failure() -> None:
    problem = week([], commands=[replace(COMMAND, must=True, worth=0.0)])
    solved = solve(problem)
    assert lay_out(problem, solved.names, solved.values) == []
    assert all(one.proven for one in solved.steps)


def test_hand_over_beats_either_pass_alone() -> None:
    # Stations 0 and 1 see the satellite in [3600, 4000) and [3800, 4200). Alone each brings
    # 370 s. Handed over at 3900, gap 10 s: 300 - 30 and 290 - 30 s, together 530 s.
    first = offer(3600, 4000, pieces=[(3600, 3900), (3600, 4000)])
    second = offer(3800, 4200, station=1, pieces=[(3800, 4200), (3910, 4200)], people=[1])
    assert worth(week([first, second], people=[OPERATOR, OPERATOR])) == pytest.approx(53.0)


def test_hand_over_needs_its_gap() -> None:
    # The second piece begins 9 s after the first one's end, so only one pass can be had.
    first = offer(3600, 4000, pieces=[(3600, 3900), (3600, 4000)])
    second = offer(3800, 4200, station=1, pieces=[(3800, 4200), (3909, 4200)], people=[1])
    assert worth(week([first, second], people=[OPERATOR, OPERATOR])) == pytest.approx(37.0)


@pytest.mark.parametrize(("order", "passes"), [("after", {0}), ("after_ack", {0}), ("after_contact", {0, 1})])
def test_second_command_in_the_window_of_the_first(order: Order, passes: set[int]) -> None:
    # Two passes of 170 s, two commands of 60 s: with a shared window pass 0 alone holds both and
    # the step "urgent musts early" wants them there; after_contact needs the second pass.
    first = replace(COMMAND, must=True, urgent=True, worth=0.0)
    second = replace(first, after=((0, order),))
    problem = week(
        [offer(3600, 3800, commands=[0, 1]), offer(9000, 9200, commands=[0, 1])], commands=[first, second]
    )
    found = sent(problem)
    assert set(found) == {0, 1}
    assert set(found.values()) == passes
    assert found[0] <= found[1]
    # Both: 60 + 60 of 170 s in pass 0, or 60 s in each: 340 - 120 = 220 s, 22 kB either way.
    assert worth(problem) == pytest.approx(22.0)


def test_two_ordered_commands_in_one_window_stand_in_their_order() -> None:
    # The second is first in the file; the lay-out must still send the other one before it.
    second = replace(COMMAND, after=((1, "after_ack"),))
    problem = week([offer(3600, 4000, commands=[0, 1])], commands=[second, COMMAND])
    laid = contacts(problem)[0]
    slots = {slot.command: slot for slot in laid.slots if slot.command}
    assert slots["order 1"].end_s <= slots["order 0"].start_s
    # 2 x 300 and 370 - 120 s.
    assert worth(problem) == pytest.approx(625.0)


def test_the_one_waited_for_cannot_go_so_neither_can_go() -> None:
    # The first one's window holds no option of any pass.
    first, second = COMMAND, replace(COMMAND, after=((0, "after"),))
    assert worth(week([offer(3600, 4000, commands=[1])], commands=[first, second])) == pytest.approx(37.0)


def test_deadline_at_an_options_start_places_nothing() -> None:
    # The option ends after the deadline, so no placing has it: 37 kB of data and no 300.
    problem = week([offer(3600, 4000, commands={})], commands=[replace(COMMAND, deadline_s=3600.0)])
    assert worth(problem) == pytest.approx(37.0)
    assert sent(problem) == {}


def test_deadline_between_two_pieces_takes_the_earlier_one() -> None:
    # [3600, 3800) ends before the deadline of 3800, the whole pass does not. 300 + (170 - 60) x 0.1
    # beats 37 kB.
    passes = [offer(3600, 4000, pieces=[(3600, 3800), (3600, 4000)], commands={0: [0]})]
    problem = week(passes, commands=[replace(COMMAND, deadline_s=3800.0)])
    assert worth(problem) == pytest.approx(311.0)


def test_a_high_command_in_reach_does_not_shorten_a_downlink_without_it() -> None:
    # The command would fit above 30 deg (100 s around the peak), but is worth nothing: the
    # downlink has all 370 s.
    passes = [offer(3600, 4000, commands=[0], reaches=[(30.0, 3750, 3850)])]
    high = replace(COMMAND, seconds=30, least_elevation_deg=30.0, worth=0.0)
    assert worth(week(passes, commands=[high])) == pytest.approx(37.0)


def test_a_high_command_holds_the_downlink_inside_on_its_side_only() -> None:
    # 30 s of 50 s above 30 deg before the peak, 20 s left for the downlink there; 200 s after it.
    # After the peak is as good: 170 + 20. So 300 + 22 or 300 + 19.
    passes = [offer(3600, 4000, commands=[0], reaches=[(30.0, 3750, 3850)])]
    high = replace(COMMAND, seconds=30, least_elevation_deg=30.0)
    assert worth(week(passes, commands=[high])) == pytest.approx(322.0)


def test_a_command_worth_less_than_the_seconds_it_takes_stays_on_the_ground() -> None:
    # 60 s at 100 byte/s are 6 kB; a command worth 5 does not pay.
    problem = week([offer(3600, 4000, commands=[0])], commands=[replace(COMMAND, worth=5.0)])
    assert worth(problem) == pytest.approx(37.0)


def test_commands_that_fit_only_cut_in_two_do_not_fit() -> None:
    # 170 s each side of the peak less 30 s left: 140 and 170 s for two commands of 100 s and one
    # of 90 s. Any two fit, one a side; all three are 290 of 310 s but two on one side are 190.
    passes = [offer(3600, 3940, commands=[0, 1, 2])]
    commands = [replace(COMMAND, seconds=seconds, worth=1000.0) for seconds in (100, 100, 90)]
    # The two of 100 and 90 s: 2000 and 310 - 190 = 120 s.
    assert worth(week(passes, commands=commands)) == pytest.approx(2012.0)


def test_urgent_must_goes_in_the_first_pass_though_it_costs_data() -> None:
    # The first pass carries 200 byte/s, so 60 s of command cost 12 kB there and 6 kB later.
    command = replace(COMMAND, must=True, urgent=True, worth=0.0)
    passes = [offer(3600, 4000, rate=200.0, commands=[0]), offer(9000, 9400, commands=[0])]
    assert sent(week(passes, commands=[command])) == {0: 0}
    assert sent(week(passes, commands=[replace(command, urgent=False)])) == {0: 1}


def test_the_must_with_the_earlier_deadline_goes_first() -> None:
    # 70 s beside the peak hold one command of 60 s; the second in the file has less time.
    must = replace(COMMAND, must=True, worth=0.0)
    passes = [offer(3600, 3700, peak_s=3600, commands=[0, 1])]
    problem = week(passes, commands=[must, replace(must, deadline_s=5000.0)])
    assert step(solve(problem), "musts placed") == (1.0, 1.0)
    assert sent(problem) == {1: 0}


def test_acquire_takes_the_first_seconds_of_a_piece_that_begins_after_the_peak() -> None:
    # 100 byte/s in the first minute, 10 after it. Acquire takes the first minute, so 340 s at 10.
    rate = np.where(np.arange(400) < 60, 100.0, 10.0)
    problem = week([offer(3600, 4000, rate=rate, peak_s=3600)], terms=replace(TERMS, acquire_s=60))
    assert worth(problem) == pytest.approx(3.4)


def test_close_takes_the_last_seconds_of_a_piece_that_ends_before_the_peak() -> None:
    # 100 byte/s in the last minute, 10 before it: 400 - 30 - 60 s at 10.
    rate = np.where(np.arange(420) < 360, 10.0, 100.0)
    problem = week([offer(3600, 4020, rate=rate, peak_s=4020)], terms=replace(TERMS, close_s=60))
    assert worth(problem) == pytest.approx(3.3)

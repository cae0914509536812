"""Weeks of one to three contacts worked out by hand, each in a comment: battery, store and sessions."""

from dataclasses import replace

import numpy as np
import pytest

from passplan.domain.problem import IdleSpan, StoredPartition
from passplan.schedule.layout import started
from passplan.schedule.ledger import play
from passplan.schedule.solve import solve
from tests.by_hand import contacts, sent, step, worth
from tests.small_weeks import COMMAND, CRAFT, IMAGES, SESSION, offer, power, week


def test_full_battery_then_transmit() -> None:
    # Full at 20 kJ with 2 W of sun to spare until 3960, none later. What shines before the
    # downlink begins at 3600 is lost to the shunt; from there on 360 s of sun bring 720 J and
    # each second of downlink takes 8 J. 18 720 J at the end leave 2000 J: 250 s.
    craft = replace(
        CRAFT, idle=power((3960.0, 2.0), (0.0, 0.0)), capacity_j=20e3, start_j=20e3, end_j=18_720.0
    )
    problem = week([offer(3570, 3960, peak_s=3600)], craft=craft)
    assert worth(problem) == pytest.approx(25.0)


def test_low_point_inside_an_option() -> None:
    # Dark from 3660 to 3900 in a pass of [3600, 4020) that is lit else, 10 W of sun, 10 W of
    # shadow at the bus: the charge is lowest at 3900, inside. Full at 10 kJ until 3660, then
    # 240 s x 10 W take 2.4 kJ, and 8 W more for each second of downlink in the dark; in the light
    # 10 - 8 = 2 W are no loss. A floor of 5 kJ leaves 2.6 kJ, more than all: 390 s.
    idle = power((3660.0, 10.0), (3900.0, -10.0), (0.0, 10.0))
    craft = replace(CRAFT, idle=idle, capacity_j=10e3, start_j=10e3, floor_j=5e3)
    assert worth(week([offer(3600, 4020)], craft=craft)) == pytest.approx(39.0)
    # Without the light at the end, [3600, 3900), a floor of 6.8 kJ leaves 800 J: 30 + 100 s.
    craft = replace(craft, floor_j=6.8e3)
    assert worth(week([offer(3600, 3900, peak_s=3660)], craft=craft)) == pytest.approx(13.0)


def test_downlink_in_two_pieces_around_the_dark() -> None:
    # As before with the floor at 6.8 kJ: 30 s of light, 100 of the 240 dark seconds, 120 s of light.
    # At 3900 nothing is left, so the dark hundred are not spent twice: 25 kB in two pieces.
    idle = power((3660.0, 10.0), (3900.0, -10.0), (0.0, 10.0))
    craft = replace(CRAFT, idle=idle, capacity_j=10e3, start_j=10e3, floor_j=6.8e3)
    problem = week([offer(3600, 4020, peak_s=3660)], craft=craft)
    assert worth(problem, in_pieces=True) == pytest.approx(25.0)
    downlinks = [slot for slot in contacts(problem)[0].slots if slot.kind == "downlink"]
    assert len(downlinks) > 1


def test_eclipse_edge_inside_an_option() -> None:
    # Sun until 3780, then shadow to the end of the pass at 4020, efficiencies 0.8. Lit: +8 W idle,
    # 0 W transmitting, full all the while. Dark: idle -2 W is -2.5 W of the cells, transmitting
    # -10 W is -12.5 W. Full at 10 kJ at 3780; 240 s of dark cost 600 J idle, and 10 W more for
    # each second of downlink: a floor of 8 kJ leaves 1400 J, 140 s. Before 3780: 150 s.
    craft = replace(
        CRAFT,
        idle=power((3780.0, 8.0), (4020.0, -2.0), (0.0, 8.0)),
        capacity_j=10e3,
        start_j=10e3,
        floor_j=8e3,
        charge_efficiency=0.8,
        discharge_efficiency=0.8,
    )
    assert worth(week([offer(3600, 4020)], craft=craft)) == pytest.approx(29.0)


def test_floor_under_the_baseline() -> None:
    # The bus alone takes 10 kJ to 6 kJ at 4000 s, then the sun fills it. The floor in force is
    # 6 kJ, so before 4000 nothing can be spent; the contact after it can.
    craft = replace(CRAFT, idle=power((4000.0, -1.0), (0.0, 1.0)), capacity_j=10e3, start_j=10e3, floor_j=6e3)
    assert worth(week([offer(3000, 3400)], craft=craft)) == pytest.approx(0.0, abs=1e-3)
    assert worth(week([offer(9000, 9400)], craft=craft)) == pytest.approx(37.0)


def test_transmit_floor_is_asked_at_the_start_only() -> None:
    # 5 kJ at the start, nothing in or out but 8 W of transmitter: 370 s take 2.96 kJ. A transmit
    # floor of 5 kJ is kept at the start of the first contact and of none after it.
    craft = replace(CRAFT, capacity_j=10e3, start_j=5e3, floor_j=1e3, transmit_floor_j=5e3)
    problem = week([offer(3600, 4000), offer(9000, 9400, rate=50.0)], craft=craft)
    assert worth(problem) == pytest.approx(37.0)


def test_least_charge_of_a_command_moves_it_to_a_charged_pass() -> None:
    # At 3600 there are 5 kJ, at 9000 10.4 kJ: a command that wants 0.8 of 12 kJ goes up there.
    craft = replace(CRAFT, idle=power((0.0, 1.0)), capacity_j=12e3, start_j=1.4e3, draw_w=0.0)
    command = replace(COMMAND, least_charge_fraction=0.8)
    problem = week(
        [offer(3600, 4000, commands=[0]), offer(9000, 9400, commands=[0])], craft=craft, commands=[command]
    )
    assert sent(problem) == {0: 1}
    assert worth(problem) == pytest.approx(300.0 + 74.0 - 6.0)


@pytest.mark.parametrize("overwrites", [False, True])
def test_full_store_at_the_start(*, overwrites: bool) -> None:
    # 20 kB full, 1 byte/s made: nothing more fits until the first contact at 3600 s, which brings
    # all 20 kB down (370 s x 100 byte/s = 37 kB would fit). 5400 s later there are 5.4 kB.
    # Losing the old or the new makes no difference to a kind that does not age.
    craft = replace(
        CRAFT,
        kinds=(replace(IMAGES, on_board_byte=20e3, made_byte_s=1.0),),
        partitions=(StoredPartition(name="main", size_byte=20e3, overwrites=overwrites),),
    )
    problem = week([offer(3600, 4000), offer(9000, 9400)], craft=craft)
    assert worth(problem) == pytest.approx(20.0 + 5.4)


@pytest.mark.parametrize(("overwrites", "expected"), [(False, 20.0 * 2.0**-1.5), (True, 20.0)])
def test_full_store_of_an_ageing_kind_loses_the_new_or_the_old(*, overwrites: bool, expected: float) -> None:
    # Halves every day. On board at the start: 20 kB that count from Monday 00:00. On Tuesday at
    # 12:00 they are 1.5 days old, 20 x 2^-1.5 = 7.07; what is made on Tuesday counts in full.
    # 1 byte/s makes 43.2 kB until then: refused, the old 20 kB are still there; overwritten, all
    # 20 kB are of Tuesday, age 0. The contact carries 37 kB.
    craft = replace(
        CRAFT,
        kinds=(replace(IMAGES, on_board_byte=20e3, made_byte_s=1.0, halves_every_days=1.0),),
        partitions=(StoredPartition(name="main", size_byte=20e3, overwrites=overwrites),),
    )
    noon = 86_400 + 43_200
    problem = week([offer(noon, noon + 400, peak_s=noon)], craft=craft)
    assert worth(problem) == pytest.approx(expected, abs=1e-3)


def test_what_is_not_made_yet_cannot_come_down() -> None:
    # 2 byte/s from an empty store: 7.2 kB at 3600 s.
    craft = replace(CRAFT, kinds=(replace(IMAGES, on_board_byte=0.0, made_byte_s=2.0),))
    assert worth(week([offer(3600, 4000)], craft=craft)) == pytest.approx(7.2)


def test_the_dearer_kind_comes_down_first() -> None:
    # 37 kB fit; 30 kB of weight 3 and 20 kB of weight 1: 90 + 7.
    kinds = (
        replace(IMAGES, on_board_byte=20e3),
        replace(IMAGES, name="science", weight=3.0, on_board_byte=30e3),
    )
    assert worth(week([offer(3600, 4000)], craft=replace(CRAFT, kinds=kinds))) == pytest.approx(97.0)


def test_end_condition_takes_from_the_data() -> None:
    # 10 kJ and nothing but the transmitter: an end of 8.4 kJ leaves 1600 J, 200 s.
    craft = replace(CRAFT, capacity_j=10e3, start_j=10e3, end_j=8.4e3)
    assert worth(week([offer(3600, 4000)], craft=craft)) == pytest.approx(20.0)


def test_end_condition_that_no_plan_reaches_gives_way() -> None:
    # The bus alone takes 0.01 W x 604 800 s = 6048 J of 10 kJ: 9 kJ at the end are 5.048 kJ too
    # many. No joule more may go, so no byte comes down; a reply of 10 s x 8 W costs 0.08 kJ.
    craft = replace(CRAFT, idle=power((0.0, -0.01)), capacity_j=10e3, start_j=10e3, end_j=9e3)
    problem = week([offer(3600, 4000)], craft=craft)
    assert step(solve(problem), "charge missing at the end")[0] == pytest.approx(5.048)
    assert worth(problem) == pytest.approx(0.0, abs=0.01)
    must = replace(COMMAND, must=True, worth=0.0, reply_s=10.0)
    problem = week([offer(3600, 4000, commands=[0])], craft=craft, commands=[must])
    assert step(solve(problem), "musts placed") == (1.0, 1.0)
    assert step(solve(problem), "charge missing at the end")[0] == pytest.approx(5.128)


def test_a_session_gives_way_to_a_better_contact_and_brings_its_data_later() -> None:
    # Starts at 3500 (over the first contact) or 5000. At 5000 it costs nothing: 300 and its 10 kB
    # come down at 9000. Empty store else.
    craft = replace(CRAFT, kinds=(replace(IMAGES, on_board_byte=30e3),))
    session = replace(SESSION, starts_s=(3500, 5000), makes=(("images", 10e3),))
    problem = week([offer(3600, 4000), offer(9000, 9400)], craft=craft, sessions=[session])
    assert worth(problem) == pytest.approx(300.0 + 40.0)
    solved = solve(problem)
    assert started(problem, solved.names, solved.values) == {0: 5000}


def test_a_session_the_battery_cannot_bear_does_not_run() -> None:
    # 600 s x 10 W = 6 kJ of 10 kJ with the floor at 5 kJ.
    craft = replace(CRAFT, capacity_j=10e3, start_j=10e3, floor_j=5e3)
    problem = week([], craft=craft, sessions=[replace(SESSION, starts_s=(5000,), draw_w=10.0)])
    assert worth(problem) == pytest.approx(0.0, abs=1e-9)
    problem = week([], craft=craft, sessions=[replace(SESSION, starts_s=(5000,), draw_w=8.0)])
    assert worth(problem) == pytest.approx(300.0)


def test_the_laid_out_charge_is_the_ledgers() -> None:
    # 100 s of 8 W from 10 kJ: 9.2 kJ from 4000 on.
    craft = replace(CRAFT, capacity_j=10e3, start_j=10e3)
    charge = play(craft, [(3900.0, 4000.0, 8.0)])
    assert charge.at(3900.0) == pytest.approx(10e3)
    assert charge.at(4000.0) == pytest.approx(9.2e3)
    moment_s, lowest_j = charge.lowest(0.0, 5000.0)
    assert moment_s == 4000.0
    assert lowest_j == pytest.approx(9.2e3)
    assert np.all(np.diff(charge.times_s) > 0.0)


def test_idle_spans_need_not_stand_at_whole_seconds() -> None:
    craft = replace(
        CRAFT,
        idle=(
            IdleSpan(start_s=0.0, end_s=10.25, sunlit=False, net_w=-4.0),
            IdleSpan(start_s=10.25, end_s=20.0, sunlit=True, net_w=2.0),
        ),
        capacity_j=1e3,
        start_j=100.0,
    )
    # 100 - 41 and then up by 19.5.
    assert play(craft, []).at(20.0) == pytest.approx(78.5)

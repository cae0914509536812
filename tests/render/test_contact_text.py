"""A day and a contact on a screen."""

from dataclasses import replace
from datetime import date
from pathlib import Path

import pytest

from passplan.domain.errors import PassplanError
from passplan.render.contact_text import contact_text, day_text
from passplan.render.contact_words import short_command, timeline
from tests.render.sample_week import contacts, mission, plan

GOLDEN = Path(__file__).parent / "golden"


def test_a_contact_reads_exactly_so() -> None:
    text = contact_text(plan(), mission(), "QUA-01", 80).plain + "\n"
    assert text == (GOLDEN / "contact_80.txt").read_text(encoding="utf-8")


def test_a_day_reads_exactly_so() -> None:
    text = day_text(plan(), mission(), date(2026, 12, 7), 80).plain + "\n"
    assert text == (GOLDEN / "day_80.txt").read_text(encoding="utf-8")


@pytest.mark.parametrize("width", range(40, 150, 9))
def test_no_line_is_wider_than_the_screen(width: int) -> None:
    pages = [day_text(plan(), mission(), date(2026, 12, day), width).plain for day in (7, 8, 12)]
    assert max(len(line) for page in pages for line in page.splitlines()) <= width


def test_a_contact_is_found_however_it_is_typed() -> None:
    assert contact_text(plan(), mission(), " qua-01 ", 80) == contact_text(plan(), mission(), "QUA-01", 80)


def test_a_wrong_name_is_answered_with_the_right_ones() -> None:
    with pytest.raises(PassplanError, match=r"'qua-9' is not a contact.*QUA-01, QUA-02, QUA-03, QUA-04$"):
        contact_text(plan(), mission(), "qua-9", 80)
    with pytest.raises(PassplanError, match=r"and 4 more$"):
        contact_text(plan(), mission(), "x", 80)
    with pytest.raises(PassplanError, match="no contacts at all"):
        contact_text(replace(plan(), contacts=()), mission(), "x", 80)


def test_a_day_outside_the_week_is_refused_with_the_week() -> None:
    with pytest.raises(PassplanError, match="name one from 2026-12-07 to 2026-12-13"):
        day_text(plan(), mission(), date(2026, 12, 14), 80)


def test_a_quiet_day_says_so() -> None:
    text = day_text(plan(), mission(), date(2026, 12, 12), 80).plain
    assert text == "Sat 12 Dec 2026, week 2026-W50, edition 1: no contact is planned"


def test_people_who_transmit_are_cautioned_and_people_who_listen_keep_off_the_rotator() -> None:
    sending = contact_text(plan(), mission(), "QUA-01", 140).plain
    assert "The licensed operator in charge decides whether to transmit" in sending
    assert "starts to turn and to radiate without warning" in sending
    listening = contact_text(plan(), mission(), "LOW-01", 140).plain
    assert "transmit" not in listening
    assert "starts to turn without warning" in listening


def test_a_plan_not_fit_to_follow_says_so_beside_each_contact() -> None:
    text = contact_text(replace(plan(), verdict=None), mission(), "QUA-01", 80).plain
    assert "This plan is not verified, not to be published." in text


def test_the_timeline_is_in_order_and_begins_with_being_ready() -> None:
    for contact in contacts():
        moments = timeline(contact, mission())
        assert moments[0].what == "be ready"
        assert [each.start_s for each in moments] == sorted(each.start_s for each in moments)
        assert len(moments) == 4 + len(contact.slots)


def test_two_people_are_ready_when_the_slower_one_needs_it() -> None:
    slow = replace(
        mission(), operators=(*mission().operators[:3], replace(mission().operators[3], preparation_min=30.0))
    )
    text = contact_text(plan(), slow, "QUA-02", 80).plain
    assert "Be ready at 23:26 UTC, 23:26 Dublin." in text


@pytest.mark.parametrize(
    ("name", "short"),
    [
        ("clock 2026-12-07", "clock"),
        ("two words 2026-12-07", "two words"),
        ("load-114", "load-114"),
        ("2026-12-07", "2026-12-07"),
        ("clock-2026-12-07", "clock-2026-12-07"),
        ("clock 2026x12x07", "clock 2026x12x07"),
        ("a", "a"),
    ],
)
def test_only_the_date_of_a_daily_command_is_left_out(name: str, short: str) -> None:
    assert short_command(name) == short

"""Planning, showing and sharing a week, as one types it."""

import json
import os
import re
from dataclasses import replace
from pathlib import Path
from typing import Any

import pytest

from passplan.domain.errors import NothingVerifiedError
from passplan.errands import planning
from passplan.schedule.solve import Solved, solve
from tests.cli.conftest import Spoil, Type

pytestmark = pytest.mark.usefixtures("week")


def test_a_week_is_planned_stored_and_shown(typed: Type) -> None:
    code, out, err = typed("plan")
    assert code == 0
    assert out.startswith("Week 2026-W50, edition 1, Finch-1: proven and verified\n")
    assert "Stored as plans/2026-W50-1.json." in err
    assert typed("show").out == out
    assert all(len(line) <= 80 for line in out.splitlines())


def test_json_is_the_stored_file_itself(typed: Type, week: Path) -> None:
    out = typed("plan", "--json").out
    stored = (week / "plans" / "2026-W50-1.json").read_text()
    assert out == stored
    assert typed("show", "--json").out == stored
    told = json.loads(out)
    assert {"week", "edition", "proven", "steps", "worth", "longest_silence", "contacts"} <= told.keys()
    assert {"commands", "battery", "data", "verdict"} <= told.keys()


def test_the_same_input_is_no_new_edition(typed: Type, week: Path) -> None:
    first = typed("plan").out
    again = typed("plan")
    assert again.out == first
    assert "Edition 1 of week 2026-W50 stands: nothing has changed." in again.err
    assert [path.name for path in (week / "plans").glob("*.json")] == ["2026-W50-1.json"]


def test_a_changed_input_is_a_new_edition_and_the_old_one_stays(
    typed: Type, week: Path, spoil: Spoil
) -> None:
    typed("plan")
    before = (week / "plans" / "2026-W50-1.json").read_bytes()
    spoil("operators.toml", 'days = ["wed"]', 'days = ["thu"]')
    code, out, _ = typed("plan")
    assert (code, out[:26]) == (0, "Week 2026-W50, edition 2, ")
    assert (week / "plans" / "2026-W50-1.json").read_bytes() == before
    assert typed("show", "--edition", "1").out.startswith("Week 2026-W50, edition 1, ")
    assert typed("show", "--edition", "3").code == 2


def test_the_next_week_is_planned_where_none_is_pinned(typed: Type, week: Path, spoil: Spoil) -> None:
    spoil("mission.toml", 'pinned_week = "2026-W50"', "")
    assert typed("plan").code == 0  # the clock says Sunday 6 December
    assert (week / "plans" / "2026-W50-1.json").is_file()
    code, out, _ = typed("passes", "--week", "2026-W51")
    assert (code, out[:14]) == (0, "Week 2026-W51,")


def test_a_must_that_cannot_go_is_told_and_the_rest_is_planned(typed: Type, spoil: Spoil) -> None:
    spoil("commands.toml", "exchange_s = 12.0", "exchange_s = 12.0\ndeadline_utc = 2026-12-07T01:00:00Z")
    code, out, _ = typed("plan")
    assert code == 1
    assert "1 must cannot go up" in out
    assert "Not placed: clock, a must, " in out
    assert "NOR-01" in out
    assert typed("plan").code == 1  # it stands, and is no better for it


def test_a_day_and_a_contact_are_shown(typed: Type) -> None:
    typed("plan")
    assert typed("show", "mon").out == typed("show", "2026-12-07").out
    assert "Mon 7 Dec 2026" in typed("show", "MON").out
    contact = typed("show", "nor-01")
    assert contact.code == 0
    assert contact.out.startswith("NOR-01, Mon 7 Dec: QA1A sends, North Quay to Finch-1")
    (row,) = json.loads(typed("show", "nor-01", "--json").out)["contacts"]
    assert row["id"] == "NOR-01"
    day = json.loads(typed("show", "tue", "--json").out)
    assert {each["start_utc"][:10] for each in day["contacts"]} == {"2026-12-08"}
    assert day["edition"] == 1


def test_what_cannot_be_shown_says_what_can(typed: Type) -> None:
    assert "there is no plan yet; make one with: passplan plan" in typed("show").err
    typed("plan")
    for what, told in (("XYZ-9", "there are NOR-01"), ("2026-12-20", "is not a day of week")):
        code, out, err = typed("show", what)
        assert (code, out) == (2, "")
        assert told in err
    assert "there are plans for: 2026-W50" in typed("show", "--week", "2026-W51").err


def test_a_contact_of_an_earlier_week_is_found_by_its_name(typed: Type, spoil: Spoil) -> None:
    typed("plan")
    spoil("mission.toml", 'pinned_week = "2026-W50"', "")
    assert typed("plan", "--week", "2026-W51", "--old-elements").code == 0
    assert typed("show").out.startswith("Week 2026-W51")
    assert "Mon 7 Dec" in typed("show", "nor-01").out


def test_a_plan_is_shown_while_the_files_have_mistakes(typed: Type, spoil: Spoil) -> None:
    typed("plan")
    spoil("stations/nor.toml", "60.1", "160.1")
    code, out, err = typed("show")
    assert code == 0
    assert "NOR-01" in out
    assert "The workspace has mistakes (1); passplan check tells them." in err


def test_calendars_are_written_once_and_left_alone(typed: Type, week: Path) -> None:
    typed("plan")
    code, out, err = typed("calendar")
    assert (code, err) == (0, "")
    assert out.startswith("Edition 1 of week 2026-W50 is the first: 6 contacts for 2 people.")
    names = {
        "mission-finch.ics",
        "station-nor.ics",
        "station-sud.ics",
        "operator-qa1a.ics",
        "operator-qb2b.ics",
    }
    assert {path.name for path in (week / "calendars").iterdir()} == names
    assert "subscribe rather than import" in out
    old = 946_684_800
    for name in names:
        os.utime(week / "calendars" / name, (old, old))
    assert "Nothing to write in calendars, 5 unchanged." in typed("calendar").out
    assert {(week / "calendars" / name).stat().st_mtime for name in names} == {old}


def test_phones_ring_unless_told_not_to(typed: Type, week: Path) -> None:
    typed("plan")
    typed("calendar")
    typed("calendar", "--out", "quiet", "--no-alarms")
    assert b"BEGIN:VALARM" in (week / "calendars" / "operator-qa1a.ics").read_bytes()
    assert b"BEGIN:VALARM" not in (week / "quiet" / "operator-qa1a.ics").read_bytes()


def test_a_calendar_of_an_earlier_week_keeps_the_later_one(typed: Type, week: Path) -> None:
    typed("plan")
    typed("plan", "--week", "2026-W51", "--old-elements")
    typed("calendar", "--week", "2026-W50")
    content = (week / "calendars" / "operator-qa1a.ics").read_text()
    assert re.search("DTSTART:2026120[78]T", content)
    assert re.search("DTSTART:2026121[45]T", content)


def test_whom_a_new_edition_concerns_is_told(typed: Type, week: Path, spoil: Spoil) -> None:
    typed("plan")
    typed("calendar")
    spoil("operators.toml", 'days = ["wed"]', 'days = ["thu"]')
    typed("plan")
    out = typed("calendar").out
    assert out.startswith("Edition 2 of week 2026-W50: ")
    assert "QB2B" in out
    assert "dropped" in out
    assert b"CANCELLED" in (week / "calendars" / "operator-qb2b.ics").read_bytes()


def test_no_calendar_without_a_plan(typed: Type) -> None:
    assert "there is no plan yet" in typed("calendar").err
    typed("plan")
    code, _, err = typed("calendar", "--week", "2026-W20")
    assert code == 2
    assert "there is no plan for 2026-W20" in err


def test_old_element_sets_are_refused_unless_asked_for(typed: Type, week: Path) -> None:
    code, out, err = typed("plan", "--week", "2026-W52")
    assert (code, out) == (2, "")
    assert "22.2 days from a moment of 2026-W52, and 14 are too many" in err
    assert "--old-elements" in err
    code, out, err = typed("plan", "--week", "2026-W52", "--old-elements")
    assert code in (0, 1)
    assert "look again with newer ones" in err
    assert (week / "plans" / "2026-W52-1.json").is_file()


def test_nothing_verified_writes_nothing(typed: Type, week: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    def refuse(*_: object, **__: object) -> None:
        raise NothingVerifiedError("no plan came through the second reading")

    monkeypatch.setattr(planning, "plan_week", refuse)
    code, out, err = typed("plan")
    assert (code, out) == (3, "")
    assert err == "no plan came through the second reading\n"
    assert list((week / "plans").iterdir()) == []


def test_no_plan_in_the_time_writes_nothing(typed: Type, week: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    def out_of_time(*arguments: Any, **more: Any) -> Solved:
        return replace(solve(*arguments, **more), steps=())

    monkeypatch.setattr("passplan.week.solve", out_of_time)
    code, out, err = typed("plan", "--time-limit", "7")
    assert (code, out) == (3, "")
    assert err == "no plan was found in 7 s, nothing is stored; allow more with --time-limit\n"
    assert list((week / "plans").iterdir()) == []


def test_a_plan_that_is_not_proven_is_good_all_the_same(typed: Type, monkeypatch: pytest.MonkeyPatch) -> None:
    def out_of_time(*arguments: Any, **more: Any) -> Solved:
        solved = solve(*arguments, **more)
        return replace(solved, steps=tuple(replace(step, proven=False) for step in solved.steps))

    monkeypatch.setattr("passplan.week.solve", out_of_time)
    code, out, _ = typed("plan")
    assert code == 0
    assert out.startswith("Week 2026-W50, edition 1, Finch-1: verified, but time ran out before the proof\n")


def test_progress_is_silent_through_a_pipe_unless_asked_for(typed: Type) -> None:
    assert "looking for passes" not in typed("plan").err
    assert "looking for passes\n" in typed("plan", "--progress").err


def test_long_work_tells_what_it_did_so_far(typed: Type, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr("passplan.voice.LONG_S", -1.0)
    assert "reading the workspace\nlooking for passes\n" in typed("plan").err

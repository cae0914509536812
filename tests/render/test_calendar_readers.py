"""What others read in the files: two independent readers, the lines themselves, and our own last look."""

from dataclasses import replace
from datetime import UTC, datetime
from typing import Any

import icalendar
import pytest
import recurring_ical_events  # type: ignore[import-untyped]
import vobject

from passplan.domain.plan import IssuedPlan
from passplan.render.calendar import calendars
from passplan.render.calendar_check import calendar_faults
from tests.render.editions import CHAIN
from tests.render.sample_week import MADE, contacts, mission, plan

NASTY = 'Ü, "b"; c\\d:e\x1b[31m\r\nBEGIN:VEVENT\r\n' + "丘é" * 90
FILES = calendars(CHAIN, mission())


def hostile() -> dict[str, bytes]:
    """Return the calendars of a mission whose names try to break out of their lines."""
    made = mission()
    people = tuple(replace(each, operators=(NASTY,), satellite=NASTY) for each in contacts())
    worse = replace(plan(), contacts=people)
    return calendars([IssuedPlan(plan=worse, made_utc=MADE)], replace(made, operators=()))


def first_reader(content: bytes) -> dict[str, tuple[datetime, datetime, str, str, int]]:
    calendar = icalendar.Calendar.from_ical(content)
    found = recurring_ical_events.of(calendar).between((2026, 12, 1), (2026, 12, 20))
    return {
        str(each["UID"]): (
            each["DTSTART"].dt,
            each["DTEND"].dt,
            str(each["SUMMARY"]),
            str(each["DESCRIPTION"]),
            int(each["SEQUENCE"]),
        )
        for each in found
    }


def second_reader(content: bytes) -> dict[str, tuple[Any, ...]]:
    found = vobject.readOne(content.decode()).vevent_list
    return {
        each.uid.value: (
            each.dtstart.value,
            each.dtend.value,
            each.summary.value,
            each.description.value,
            int(each.sequence.value),
        )
        for each in found
    }


@pytest.mark.parametrize("name", sorted(FILES))
def test_two_independent_readers_agree(name: str) -> None:
    first, second = first_reader(FILES[name]), second_reader(FILES[name])
    assert first == second
    assert first
    assert all(begin < end and begin.tzinfo is not None for begin, end, *_ in first.values())


def test_both_readers_see_the_times_of_the_plan() -> None:
    begins = sorted(begin for begin, *_ in second_reader(FILES["station-tus.ics"]).values())
    assert begins == [
        datetime(2026, 12, 7, 11, 47, 10, tzinfo=UTC),
        datetime(2026, 12, 8, 12, 5, 10, tzinfo=UTC),
        datetime(2026, 12, 9, 10, 55, 10, tzinfo=UTC),
    ]


@pytest.mark.parametrize("content", [*FILES.values(), *hostile().values()])
def test_lines_end_in_crlf_and_hold_at_most_75_octets_of_whole_characters(content: bytes) -> None:
    """RFC 5545, 3.1: CRLF, 75 octets without it, and no character torn apart."""
    lines = content.split(b"\r\n")
    assert lines[-1] == b""
    assert all(len(line) <= 75 for line in lines)
    assert not any(b"\r" in line or b"\n" in line for line in lines)
    for line in lines:
        line.decode("utf-8")


@pytest.mark.parametrize("content", FILES.values())
def test_no_component_or_property_we_do_not_want(content: bytes) -> None:
    text = content.decode()
    for word in ("METHOD:", "ATTENDEE", "ORGANIZER", "VTIMEZONE", "TZID", "X-APPLE"):
        assert word not in text
    assert text.startswith("BEGIN:VCALENDAR\r\nPRODID:-//passplan//")
    assert "\r\nREFRESH-INTERVAL;VALUE=DURATION:PT1H\r\nX-PUBLISHED-TTL:PT1H\r\n" in text


@pytest.mark.parametrize("content", FILES.values())
def test_every_event_has_what_it_needs(content: bytes) -> None:
    """RFC 5545, 3.6.1, and what a re-issued calendar needs besides."""
    calendar = icalendar.Calendar.from_ical(content)
    assert {"PRODID", "VERSION", "NAME", "X-WR-CALNAME", "DESCRIPTION"} <= set(calendar)
    needed = {
        "UID",
        "DTSTAMP",
        "DTSTART",
        "DTEND",
        "SUMMARY",
        "SEQUENCE",
        "LAST-MODIFIED",
        "STATUS",
        "TRANSP",
    }
    for event in calendar.events:
        assert needed <= set(event)
        assert not event.errors


def test_the_calendar_says_which_edition_it_is() -> None:
    calendar = icalendar.Calendar.from_ical(FILES["operator-qx3ab.ics"])
    assert str(calendar["NAME"]) == str(calendar["X-WR-CALNAME"]) == "Teasel contacts, QX3AB"
    assert "Week 2026-W50: edition 3, made Sat 5 Dec 2026 20:20 UTC." in str(calendar["DESCRIPTION"])


def test_a_place_is_where_the_station_is() -> None:
    event: Any = icalendar.Calendar.from_ical(FILES["station-tus.ics"]).events[0]
    assert str(event["LOCATION"]) == "Tussock Bay, shed; north"
    assert (event["GEO"].latitude, event["GEO"].longitude) == (-45.9, 170.5)


def test_names_cannot_write_properties_or_components_of_their_own() -> None:
    for name, content in hostile().items():
        first, second = first_reader(content), second_reader(content)
        assert first == second
        expected = len(contacts()) if name.startswith(("mission", "operator")) else None
        assert expected is None or len(first) == expected
        for _, _, title, text, _ in first.values():
            assert title.isprintable()
            assert all(line.isprintable() for line in text.split("\n"))


def test_our_own_last_look_finds_every_fault_it_is_meant_to_find() -> None:
    good = FILES["operator-qx3ab.ics"]
    assert calendar_faults(good) == []
    uid = good.partition(b"UID:")[2].partition(b"\r\n")[0]
    event = good[good.index(b"BEGIN:VEVENT") : good.index(b"END:VEVENT") + len(b"END:VEVENT\r\n")]
    head = good[: good.index(b"BEGIN:VEVENT")]
    cases = {
        "it holds no event": head + b"END:VCALENDAR\r\n",
        f"the event {uid.decode()} is there twice": good.replace(event, event + event),
        "SEQUENCE stands 0 times": good.replace(b"SEQUENCE:0\r\n", b"", 1),
        "DTSTART stands 2 times": good.replace(b"DTSTART:", b"DTSTART:20261207T045710Z\r\nDTSTART:", 1),
        "is not after 20261207T045710Z": good.replace(b"DTEND:20261207T051900Z", b"DTEND:20261207T045710Z"),
        "not after no time": good.replace(b"DTSTART:20261207T045710Z\r\n", b"", 1),
        "times are not UTC": good.replace(b"045710Z", b"045710").replace(b"051900Z", b"051900"),
        "status is MAYBE": good.replace(b"STATUS:CONFIRMED", b"STATUS:MAYBE", 1),
        "an alarm lacks TRIGGER": good.replace(b"TRIGGER:-PT30M\r\n", b"", 1),
        "longer than 75 octets": good.replace(b"NAME:Teasel", b"NAME:" + b"T" * 80, 1),
        "does not end in CRLF": good.replace(b"\r\n", b"\n", 1),
    }
    for fault, content in cases.items():
        assert content != good
        assert any(fault in found for found in calendar_faults(content)), fault

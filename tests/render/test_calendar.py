"""One edition as calendars: whose, what they say, when they ring, what the files are called."""

import re
from dataclasses import replace
from datetime import UTC, date, datetime, timedelta

import pytest

from passplan.domain.errors import PassplanError
from passplan.domain.mission import Mission
from passplan.domain.moments import Horizon
from passplan.domain.plan import IssuedPlan, Plan, Slot
from passplan.render.calendar import calendars
from tests.render.editions import (
    FIRST,
    by_id,
    events,
    issued,
)
from tests.render.sample_week import HORIZON, MADE, contacts, mission, plan


def test_every_calendar_of_the_mission_is_there() -> None:
    names = list(calendars([FIRST], mission()))
    assert names == [
        "mission-teasel.ics",
        "station-qua.ics",
        "station-ske.ics",
        "station-tus.ics",
        "station-low.ics",
        "operator-qx3ab.ics",
        "operator-qy1k.ics",
        "operator-qt5z.ics",
        "operator-fern.ics",
    ]


def test_without_an_edition_there_is_no_calendar() -> None:
    assert calendars([], mission()) == {}


def test_a_person_gets_their_own_contacts_and_no_others() -> None:
    files = calendars([FIRST], mission())
    assert set(events(files["operator-qx3ab.ics"])) == {"QUA-01", "QUA-02", "QUA-03"}
    assert set(events(files["operator-fern.ics"])) == {"LOW-01", "QUA-02"}
    assert set(events(files["station-low.ics"])) == {"LOW-01", "QUA-02"}
    assert set(events(files["mission-teasel.ics"])) == {each.id for each in contacts()}


def test_titles_say_what_the_person_does() -> None:
    files = calendars([FIRST], mission())
    titles = {
        ("operator-qx3ab.ics", "QUA-01"): "Teasel-1, you send: Quarry Hill",
        ("operator-fern.ics", "QUA-02"): "Teasel-1, you assist: Quarry Hill",
        ("operator-fern.ics", "LOW-01"): "Teasel-1, you listen: Low Field",
        ("mission-teasel.ics", "QUA-02"): "Teasel-1, QX3AB sends with Fern: Quarry Hill",
        ("station-low.ics", "QUA-02"): "Teasel-1, listen along: QX3AB sends with Fern from Quarry Hill",
    }
    for (name, contact), title in titles.items():
        assert str(events(files[name])[contact]["SUMMARY"]) == title


def test_an_operators_event_runs_from_being_ready_to_the_end_in_whole_seconds() -> None:
    """22.5 min of preparation before 11:47:10 is 11:24:40; everybody else's event begins with the contact."""
    files = calendars([FIRST], mission())
    mine = events(files["operator-qt5z.ics"])["TUS-01"]
    assert mine["DTSTART"].dt == datetime(2026, 12, 7, 11, 24, 40, tzinfo=UTC)
    assert mine["DTEND"].dt == datetime(2026, 12, 7, 11, 54, 20, tzinfo=UTC)
    assert events(files["station-tus.ics"])["TUS-01"]["DTSTART"].dt == datetime(
        2026, 12, 7, 11, 47, 10, tzinfo=UTC
    )


def test_the_text_holds_what_a_volunteer_needs() -> None:
    text = str(events(calendars([FIRST], mission())["operator-qt5z.ics"])["TUS-01"]["DESCRIPTION"])
    assert text == (
        "You send from Tussock Bay, shed; north to Teasel-1. Contact TUS-01.\n"
        "Be ready at 11:24 UTC, 00:24 Tue Auckland.\n"
        "\n"
        "Mon 7 Dec 2026. Times are UTC, in brackets Auckland time (Pacific/Auckland, UTC+13).\n"
        "11:24:40 (00:24:40 Tue) be ready\n"
        "11:46:58 (00:46:58 Tue) AOS, it rises: NNE (23 deg)\n"
        "11:47:10 (00:47:10 Tue) find it and call until 11:47:55\n"
        "11:47:55 (00:47:55 Tue) receive until 11:54:10\n"
        "11:50:45 (00:50:45 Tue) highest: E (92 deg), 66 deg high\n"
        "11:54:10 (00:54:10 Tue) say good-bye until 11:54:20\n"
        "11:54:32 (00:54:32 Tue) LOS, it sets: SSE (161 deg)\n"
        "\n"
        "Nothing goes up but the call.\n"
        "Comes down if all goes well: 400 kB (images 400 kB).\n"
        "\n"
        "The licensed operator in charge decides whether to transmit; "
        "the licence and local rules come first.\n"
        "Keep everybody away from the antenna: it starts to turn and to radiate without warning.\n"
        "\n"
        "Last changed in edition 1 of week 2026-W50, made Sat 5 Dec 2026 18:20 UTC."
    )


def test_partners_of_a_hand_over_are_named_both_ways() -> None:
    files = calendars([FIRST], mission())
    first = str(events(files["operator-qx3ab.ics"])["QUA-01"]["DESCRIPTION"])
    second = str(events(files["operator-qy1k.ics"])["SKE-01"]["DESCRIPTION"])
    assert "After you QY1K at Skerry takes over (SKE-01, from 05:20:10 UTC)." in first
    assert "Before you QX3AB at Quarry Hill has the satellite (QUA-01, until 05:19:00 UTC)." in second


def test_who_listens_along_sees_no_azimuths_of_another_place() -> None:
    text = str(events(calendars([FIRST], mission())["station-low.ics"])["QUA-02"]["DESCRIPTION"])
    assert "deg" not in text
    assert "send load-115 until" in text


def test_alarms_ring_before_being_ready_and_only_for_operators() -> None:
    files = calendars([FIRST], mission(), alarm_min=20)
    for name, content in files.items():
        alarms = [alarm for event in events(content).values() for alarm in event.walk("VALARM")]
        assert bool(alarms) == name.startswith("operator-")
        for alarm in alarms:
            assert (alarm["ACTION"], alarm["TRIGGER"].dt) == ("DISPLAY", timedelta(minutes=-20))
            assert "RELATED" not in alarm["TRIGGER"].params
    assert b"VALARM" not in b"".join(calendars([FIRST], mission(), alarm_min=None).values())


def test_no_alarm_rings_for_what_is_over() -> None:
    late = issued(2, contacts(), HORIZON.utc(by_id("QUA-02").end_s))
    found = events(calendars([FIRST, late], mission())["operator-qx3ab.ics"])
    assert {name: bool(event.subcomponents) for name, event in found.items()} == {
        "QUA-01": False,
        "QUA-02": False,
        "QUA-03": True,
    }


def test_nobody_gets_an_empty_calendar() -> None:
    only = [issued(1, [by_id("QUA-01")]), issued(2, [by_id("QUA-01")])]
    (event,) = events(calendars(only, mission())["operator-qt5z.ics"]).values()
    assert str(event["SUMMARY"]) == "Teasel: no contacts planned"
    assert (event["DTSTART"].dt, event["DTEND"].dt) == (date(2026, 12, 7), date(2026, 12, 14))
    assert (event["TRANSP"], event["SEQUENCE"], event["DTSTAMP"].dt) == ("TRANSPARENT", 0, MADE)


def with_people(*handles: str) -> Mission:
    made = mission()
    return replace(made, operators=tuple(replace(made.operators[0], handle=handle) for handle in handles))


def test_file_names_are_safe_and_never_alike() -> None:
    names = list(
        calendars([issued(1, [])], with_people("Åsa", "asa", "../../etc/passwd", "丘", "a/b\\c", "x" * 200))
    )
    people = [name for name in names if name.startswith("operator-")]
    assert len(set(people)) == 6
    assert people[0] == "operator-asa.ics"
    assert all(re.fullmatch(r"[a-z0-9-]{1,60}\.ics", name) for name in names)


def test_a_person_who_joins_changes_nobody_elses_address() -> None:
    before = list(calendars([issued(1, [])], with_people("Asa", "Fern")))
    after = list(calendars([issued(1, [])], with_people("Asa", "Fern", "Åsa")))
    assert after[: len(before)] == before


def test_a_contact_that_ends_before_it_begins_is_refused_with_its_name() -> None:
    backwards = replace(by_id("QUA-01"), end_s=by_id("QUA-01").start_s, slots=())
    with pytest.raises(PassplanError, match=r"cannot be written: Teasel-1.*is not after 20261207T051210Z"):
        calendars([issued(1, [backwards])], mission())


def sunday_plan(week: str, second: int) -> Plan:
    slot = Slot(kind="downlink", start_s=second, end_s=second + 300)
    base = replace(by_id("SKE-01"), start_s=second, end_s=second + 300, slots=(slot,), hand_over_from="")
    return replace(plan(), horizon=Horizon(week=week), contacts=(base,))


@pytest.mark.parametrize(
    ("week", "hour_utc", "local"),
    [
        ("2026-W13", 0.9, "(01:54:00)"),
        ("2026-W13", 1.0, "(03:00:00)"),
        ("2026-W43", 0.9, "(02:54:00)"),
        ("2026-W43", 1.0, "(02:00:00)"),
    ],
)
def test_a_clock_change_on_sunday_moves_the_words_and_not_the_time(
    week: str, hour_utc: float, local: str
) -> None:
    """Clocks in Norway change at 01:00 UTC on 29 March and 25 October 2026 (IANA time zone database)."""
    second = round(6 * 86_400 + hour_utc * 3600)
    chain = [IssuedPlan(plan=sunday_plan(week, second), made_utc=Horizon(week=week).utc(0.0))]
    (event,) = events(calendars(chain, mission())["operator-qy1k.ics"]).values()
    assert event["DTEND"].dt == Horizon(week=week).utc(second + 300)
    assert f"{local} receive" in str(event["DESCRIPTION"])

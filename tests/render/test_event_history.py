"""Calendars over several editions: moved, dropped, given away, back again, over."""

import hashlib
import re
import subprocess
import sys
from dataclasses import replace
from datetime import timedelta
from pathlib import Path

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from passplan.domain.moments import Horizon
from passplan.domain.plan import IssuedPlan
from passplan.render.calendar import calendars
from tests.render.editions import (
    CHAIN,
    FIRST,
    HOUR,
    SECOND,
    THIRD,
    blocks,
    by_id,
    changed,
    events,
    issued,
    moved,
)
from tests.render.sample_week import HORIZON, MADE, contacts, mission, plan

ROOT = Path(__file__).parents[2]


@pytest.mark.parametrize("name", sorted(calendars([FIRST], mission())))
def test_unchanged_events_keep_every_byte_over_three_editions(name: str) -> None:
    before, after = (blocks(calendars(CHAIN[:upto], mission())[name]) for upto in (1, 3))
    touched = re.compile(rb"Contact (QUA-03|SKE-02|QUA-04)")
    same = [uid for uid, block in before.items() if not touched.search(block.replace(b"\r\n ", b""))]
    assert same
    assert all(after[uid] == before[uid] for uid in same)
    assert set(before) <= set(after)


@pytest.mark.parametrize("upto", [1, 2, 3])
def test_no_uid_is_there_twice_in_a_file_or_in_two_files(upto: int) -> None:
    files = calendars(CHAIN[:upto], mission())
    uids = [uid for content in files.values() for uid in blocks(content)]
    assert len(uids) == len(set(uids)) > 12


def test_a_moved_contact_keeps_its_uid_and_counts_one_change() -> None:
    files = [calendars(CHAIN[:upto], mission())["operator-qx3ab.ics"] for upto in (1, 3)]
    before, after = (events(content)["QUA-03"] for content in files)
    assert before["UID"] == after["UID"]
    assert (before["SEQUENCE"], after["SEQUENCE"]) == (0, 1)
    assert after["DTSTART"].dt - before["DTSTART"].dt == timedelta(minutes=2)
    assert after["DTSTAMP"].dt == after["LAST-MODIFIED"].dt == SECOND.made_utc
    assert "edition 2" in str(after["DESCRIPTION"])


def test_a_dropped_contact_stays_as_cancelled_and_silent() -> None:
    files = calendars(CHAIN, mission())
    for name in ("operator-qy1k.ics", "station-ske.ics", "mission-teasel.ics"):
        event = events(files[name])["SKE-02"]
        assert str(event["SUMMARY"]).startswith("CANCELLED: Teasel-1, ")
        assert (event["STATUS"], event["TRANSP"], event["SEQUENCE"]) == ("CANCELLED", "TRANSPARENT", 1)
        assert event.subcomponents == []
        assert event["LAST-MODIFIED"].dt == SECOND.made_utc
        assert str(event["DESCRIPTION"]).startswith("CANCELLED in edition 2 of week 2026-W50")


def test_a_contact_given_away_is_cancelled_for_one_and_new_for_the_other() -> None:
    files = calendars(CHAIN, mission())
    old = events(files["operator-qy1k.ics"])["QUA-04"]
    new = events(files["operator-qx3ab.ics"])["QUA-04"]
    assert (old["STATUS"], old["SEQUENCE"]) == ("CANCELLED", 1)
    assert "It is now with QX3AB." in str(old["DESCRIPTION"])
    assert (new["STATUS"], new["SEQUENCE"], str(new["SUMMARY"])) == (
        "CONFIRMED",
        0,
        "Teasel-1, you send: Quarry Hill",
    )
    assert new["LAST-MODIFIED"].dt == THIRD.made_utc
    shared = events(files["station-qua.ics"])["QUA-04"]
    assert (shared["STATUS"], shared["SEQUENCE"]) == ("CONFIRMED", 1)


def test_a_contact_back_again_keeps_its_uid_with_a_higher_sequence() -> None:
    back = calendars([*CHAIN, issued(4, contacts())], mission())["operator-qy1k.ics"]
    before = calendars(CHAIN, mission())["operator-qy1k.ics"]
    for name in ("SKE-02", "QUA-04"):
        again = events(back)[name]
        assert (again["STATUS"], again["SEQUENCE"]) == ("CONFIRMED", 2)
        assert again["UID"] == events(before)[name]["UID"]
        assert "CANCELLED" not in again["SUMMARY"]


def test_a_cancelled_contact_that_stays_dropped_counts_no_further() -> None:
    twice = [*CHAIN, replace(THIRD, plan=replace(THIRD.plan, edition=4), made_utc=MADE + 5 * HOUR)]
    before, after = (calendars(chain, mission())["operator-qy1k.ics"] for chain in (CHAIN, twice))
    assert blocks(before) == blocks(after)
    assert before != after  # only the calendar's own text knows the newer edition
    assert b"edition 4" in after.replace(b"\r\n ", b"")


def test_a_cancelled_contact_goes_when_its_end_has_passed() -> None:
    late = issued(4, THIRD.plan.contacts, HORIZON.utc(by_id("SKE-02").end_s + 1))
    assert "SKE-02" not in events(calendars([*CHAIN, late], mission())["operator-qy1k.ics"])
    just_before = issued(4, THIRD.plan.contacts, HORIZON.utc(by_id("SKE-02").end_s - 1))
    assert "SKE-02" in events(calendars([*CHAIN, just_before], mission())["operator-qy1k.ics"])


def test_a_contact_that_is_over_is_not_cancelled_by_an_edition_that_leaves_it_out() -> None:
    late = issued(2, changed(QUA_01=None), HORIZON.utc(by_id("QUA-01").end_s + 60))
    event = events(calendars([FIRST, late], mission())["operator-qx3ab.ics"])["QUA-01"]
    assert (event["STATUS"], event["SEQUENCE"]) == ("CONFIRMED", 0)


def test_finished_contacts_stay_seven_days_and_the_next_week_touches_nothing() -> None:
    next_week = replace(plan(), horizon=Horizon(week="2026-W51"), contacts=(moved(by_id("QUA-03"), 0),))
    coming = replace(next_week.contacts[0], id="QUA-05")
    last = by_id("SKE-04").end_s
    for after, there in ((6 * 86_400, True), (8 * 86_400, False)):
        follow = IssuedPlan(plan=replace(next_week, contacts=(coming,)), made_utc=HORIZON.utc(last + after))
        found = events(calendars([FIRST, follow], mission())["mission-teasel.ics"])
        assert ("SKE-04" in found) == there
        assert "QUA-05" in found
        assert all(event["STATUS"] == "CONFIRMED" for event in found.values())


def test_a_change_of_words_alone_is_told_but_does_not_count() -> None:
    """Fewer bytes are no significant change (RFC 5545, 3.8.7.4), yet LAST-MODIFIED stays truthful."""
    more = replace(by_id("QUA-03"), carried=())
    found = calendars([FIRST, issued(2, changed(QUA_03=more))], mission())["operator-qx3ab.ics"]
    event = events(found)["QUA-03"]
    assert (event["SEQUENCE"], event["LAST-MODIFIED"].dt) == (0, MADE + HOUR)
    assert "No data are planned to come down." in str(event["DESCRIPTION"])


def test_who_left_the_mission_still_learns_what_was_cancelled() -> None:
    smaller = replace(mission(), operators=mission().operators[1:], stations=mission().stations[1:])
    left = issued(2, [each for each in contacts() if each.station != "QUA"])
    files = calendars([FIRST, left], smaller)
    assert {event["STATUS"] for event in events(files["operator-qx3ab.ics"]).values()} == {"CANCELLED"}
    assert {event["STATUS"] for event in events(files["station-qua.ics"]).values()} == {"CANCELLED"}


STATES = st.sampled_from(["as it was", "moved", "given away", "dropped"])
NAMES = ("QUA-03", "SKE-03", "QUA-04")


@settings(max_examples=25, deadline=None)
@given(st.lists(st.tuples(STATES, STATES, STATES), min_size=2, max_size=5))
def test_over_any_editions_sequence_only_rises_and_bytes_change_with_their_stamp(
    fates: list[tuple[str, str, str]],
) -> None:
    """RFC 5546, 2.1.4: what replaces an event has a higher SEQUENCE, or the same one and a later DTSTAMP."""
    chain = []
    for edition, states in enumerate(fates, start=1):
        wanted = {
            name.replace("-", "_"): {
                "as it was": by_id(name),
                "moved": moved(by_id(name), 60 * edition),
                "given away": replace(by_id(name), operators=("QT5Z",)),
                "dropped": None,
            }[state]
            for name, state in zip(NAMES, states, strict=True)
        }
        chain.append(issued(edition, [each for each in wanted.values() if each]))
    few = replace(mission(), stations=mission().stations[:1], operators=mission().operators[1:3])
    files = [calendars(part, few) for part in (chain[:-1], chain)]
    for name in files[0]:
        before, after = files[0][name], files[1][name]
        old, new = blocks(before), blocks(after)
        was, now = (
            {str(event["UID"]): event for contact, event in events(content).items() if contact}
            for content in (before, after)
        )
        assert set(was) <= set(now)
        for uid, event in was.items():
            rise = now[uid]["SEQUENCE"] - event["SEQUENCE"]
            assert rise in {0, 1}
            later = now[uid]["DTSTAMP"].dt > event["DTSTAMP"].dt
            assert later == (old[uid] != new[uid])
            assert later or rise == 0
            span = ("DTSTART", "DTEND", "STATUS")
            assert rise == 1 or all(event[key] == now[uid][key] for key in span)


def test_the_bytes_do_not_hang_on_the_order_of_sets() -> None:
    """Another process has another order of its sets; the files must not show it."""
    told = (
        "import hashlib; from passplan.render.calendar import calendars; "
        "from tests.render.editions import CHAIN; from tests.render.sample_week import mission; "
        "print(hashlib.sha256(b''.join(calendars(CHAIN, mission()).values())).hexdigest())"
    )
    run = subprocess.run(
        [sys.executable, "-c", told],
        cwd=ROOT,
        env={"PYTHONHASHSEED": "7"},
        capture_output=True,
        check=True,
        text=True,
    )
    here = hashlib.sha256(b"".join(calendars(CHAIN, mission()).values())).hexdigest()
    assert run.stdout.strip() == here

"""What a new edition changes, told by person."""

from dataclasses import replace

from passplan.render.change_list import changes_text
from tests.render.editions import CHAIN, FIRST, SECOND, THIRD, by_id, changed, issued
from tests.render.sample_week import HORIZON, contacts, mission


def test_the_changes_of_an_edition_by_person() -> None:
    both = issued(2, THIRD.plan.contacts)
    assert changes_text([FIRST, both], mission(), 80).plain == (
        "Edition 2 of week 2026-W50: 4 changes for 2 people.\n"
        "\n"
        "QX3AB\n"
        "  moved    QUA-03  Tue 8 Dec 17:40 becomes 17:42 UTC, 17:42 Dublin\n"
        "  new      QUA-04  Wed 9 Dec 05:01 UTC, 05:01 Dublin, you send\n"
        "QY1K\n"
        "  dropped  SKE-02  Tue 8 Dec 06:30 UTC, 07:30 Oslo\n"
        "  dropped  QUA-04  Wed 9 Dec 05:01 UTC, 05:01 Dublin"
    )


def test_only_the_last_edition_is_told() -> None:
    text = changes_text(CHAIN, mission(), 120).plain
    assert text.startswith("Edition 3 of week 2026-W50: 2 changes for 2 people.")
    assert "SKE-02" not in text
    assert "SKE-02" in changes_text(CHAIN[:2], mission(), 120).plain


def test_a_first_edition_is_told_as_one() -> None:
    assert changes_text([FIRST], mission(), 80).plain == (
        "Edition 1 of week 2026-W50 is the first: 12 contacts for 4 people."
    )


def test_an_edition_that_changes_nothing_says_so() -> None:
    words_only = issued(2, changed(QUA_03=replace(by_id("QUA-03"), carried=())))
    assert changes_text([FIRST, words_only], mission(), 80).plain == (
        "Edition 2 of week 2026-W50: nothing changes."
    )


def test_changes_within_a_day_are_marked_for_the_phone() -> None:
    late = issued(2, SECOND.plan.contacts, HORIZON.utc(by_id("SKE-02").start_s - 3600))
    text = changes_text([FIRST, late], mission(), 120).plain
    assert "Tell those marked by phone" in text
    (line,) = [line for line in text.splitlines() if "SKE-02" in line]
    assert line.startswith("  phone  dropped  SKE-02")


def test_what_is_over_needs_no_message() -> None:
    late = issued(2, SECOND.plan.contacts, HORIZON.utc(by_id("SKE-02").end_s + 60))
    assert "SKE-02" not in changes_text([FIRST, late], mission(), 120).plain


def test_a_new_partner_is_a_change_for_who_stays() -> None:
    alone = issued(2, changed(QUA_02=replace(by_id("QUA-02"), operators=("QX3AB",))))
    text = changes_text([FIRST, alone], mission(), 120).plain
    assert "changed  QUA-02  Mon 7 Dec 23:56 UTC, 23:56 Dublin, you send, alone" in text
    joined = issued(2, changed(QUA_01=replace(by_id("QUA-01"), operators=("QX3AB", "Fern"))))
    text = changes_text([FIRST, joined], mission(), 120).plain
    assert "you send, with Fern" in text
    assert "new      QUA-01  Mon 7 Dec 05:12 UTC, 05:12 Dublin, you assist" in text


def test_somebody_who_left_is_told_too() -> None:
    gone = replace(mission(), operators=mission().operators[1:])
    left = issued(2, [each for each in contacts() if "QX3AB" not in each.operators])
    assert "QX3AB\n" in changes_text([FIRST, left], gone, 120).plain

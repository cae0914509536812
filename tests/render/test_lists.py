"""What `check` and `elements` show."""

from datetime import UTC, datetime

from passplan.domain.elements import ElementSet
from passplan.domain.errors import Mistake
from passplan.render.check_text import check_text
from passplan.render.elements_list import elements_text
from tests.render.sample_week import HORIZON


def test_mistakes_come_first_by_file_with_place_text_and_what_is_allowed() -> None:
    mistakes = [
        Mistake(file="stations/qua.toml", key="mask[3]", text="12 deg", allowed="a number in -5 to 90"),
        Mistake(file="stations/qua.toml", key="line 12", text="", allowed="not TOML"),
        Mistake(file="mission.toml", key="", text="", allowed="it is not there"),
    ]
    assumed = [("mission.toml", "planning.guard_s", "10 s"), ("mission.toml", "planning.acquire_s", "45 s")]
    assert check_text(mistakes, ["QX3AB: no hours"], assumed, 60).plain == (
        "3 mistakes, 1 doubt, 2 values assumed.\n"
        "\n"
        "stations/qua.toml\n"
        "  mask[3]: '12 deg'\n"
        "    a number in -5 to 90\n"
        "  line 12\n"
        "    not TOML\n"
        "\n"
        "mission.toml\n"
        "  the file\n"
        "    it is not there\n"
        "\n"
        "Doubts\n"
        "  QX3AB: no hours\n"
        "\n"
        "Assumed in mission.toml\n"
        "  planning.guard_s    10 s\n"
        "  planning.acquire_s  45 s"
    )


def test_nothing_wrong_is_one_line() -> None:
    assert check_text([], [], [], 80).plain == "Nothing is wrong."


def test_what_stands_in_a_file_cannot_write_on_the_screen() -> None:
    nasty = "\x1b[2J" + "x" * 10_000 + "\n\r"
    text = check_text(
        [Mistake(file=nasty, key=nasty, text=nasty, allowed=nasty)], [nasty], [(nasty,) * 3], 80
    ).plain
    assert all(len(line) <= 80 for line in text.splitlines())
    assert all(char.isprintable() or char == "\n" for char in text)


def element_set(day: int, source: str, number: int | None = 100123, year: int = 2026) -> ElementSet:
    return ElementSet(
        name="TEASEL-1",
        number=number,
        designator="",
        epoch=datetime(year, 12, day, 12, tzinfo=UTC),
        inclination_deg=97.5,
        node_deg=10.0,
        eccentricity=0.001,
        argument_of_perigee_deg=20.0,
        mean_anomaly_deg=30.0,
        mean_motion_rev_day=15.1,
        bstar_per_earth_radius=1e-4,
        source=source,
    )


def test_element_sets_are_listed_with_their_age_and_the_used_one_is_marked() -> None:
    sets = [
        element_set(5, "elements/teasel-1_2026-12-05.tle, line 1"),
        element_set(8, "elements/both.txt, line 4", number=None),
        element_set(31, "elements/old.tle, line 1", year=2025),
    ]
    assert elements_text(sets, HORIZON, 90, used=sets[:1]).plain == (
        "3 element sets; ages are at the start of week 2026-W50.\n"
        "A plan of that week uses the set of TEASEL-1 marked below.\n"
        "\n"
        "        name      number  epoch (UTC)               age  from elements/\n"
        "  used  TEASEL-1  100123  5 Dec 12:00          1.5 days  teasel-1_2026-12-05.tle\n"
        "        TEASEL-1    none  8 Dec 12:00         -1.5 days  both.txt, line 4\n"
        "        TEASEL-1  100123  31 Dec 2025 12:00  340.5 days  old.tle"
    )


def test_sets_from_different_places_keep_the_whole_place() -> None:
    sets = [element_set(5, "elements/a.tle, line 1"), element_set(6, "standard input, line 3")]
    lines = elements_text(sets, HORIZON, 90).plain.splitlines()
    assert [line.split("days  ")[1].split("  ")[0] for line in lines[3:]] == [
        "elements/a.tle",
        "standard input, line 3",
    ]


def test_an_empty_folder_says_how_to_fill_it() -> None:
    assert "passplan elements add FILE" in elements_text([], HORIZON, 80).plain

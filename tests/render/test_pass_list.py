"""The list of passes: on a screen by day, as JSON and as CSV."""

import csv
import io
import json
from dataclasses import replace
from pathlib import Path

import pytest
from hypothesis import given
from hypothesis import strategies as st

from passplan.domain.moments import Horizon
from passplan.domain.passes import Pass, Sky
from passplan.render.pass_data import passes_csv, passes_json
from passplan.render.pass_list import ListedPass, passes_text
from tests.render.sample_week import HORIZON, mission

GOLDEN = Path(__file__).parent / "golden"
DAY = 86_400


def sight(station: str, aos_s: float, length_s: float, **other: object) -> Pass:
    facts: dict[str, object] = {
        "satellite": "Teasel-1",
        "aos_azimuth_deg": 22.6,
        "tca_azimuth_deg": 92.0,
        "los_azimuth_deg": 161.0,
        "max_elevation_deg": 47.2,
        "aos_range_km": 2105.0,
        "tca_range_km": 763.4,
        "los_range_km": 2110.0,
        "largest_range_rate_km_s": 6.9,
        "sunlit": ((aos_s, aos_s + length_s),),
        **other,
    }
    return Pass(station=station, aos_s=aos_s, tca_s=aos_s + length_s / 2, los_s=aos_s + length_s, **facts)  # type: ignore[arg-type]


def listing() -> list[ListedPass]:
    first = 5 * 3600 + 600.25
    return [
        ListedPass(
            sight=sight("QUA", first, 564.0, sunlit=((first, first + 350.0),)),
            useful_s=421.0,
            doppler_down_hz=10_065.2,
            doppler_up_hz=10_064.0,
        ),
        ListedPass(sight=sight("TUS", 40_000.0, 500.0, sunlit=(), max_elevation_deg=10.4), useful_s=0.0),
        ListedPass(sight=sight("SKE", DAY + 3600.0, 700.0, aos_azimuth_deg=359.0, los_azimuth_deg=181.0)),
        ListedPass(sight=sight("LOW", 7 * DAY + 86_000.0, 400.0, clipped="end"), useful_s=61.0),
    ]


def sky(**ends: float) -> Sky:
    return Sky(passes=tuple(each.sight for each in listing()), shadows={}, propagation_end_s=ends)


def said(width: int = 80, listed: list[ListedPass] | None = None) -> str:
    return passes_text(listing() if listed is None else listed, sky(), mission(), HORIZON, width).plain


@pytest.mark.parametrize("width", [80, 140])
def test_the_list_reads_exactly_so(width: int) -> None:
    assert said(width) + "\n" == (GOLDEN / f"passes_{width}.txt").read_text(encoding="utf-8")


@pytest.mark.parametrize("width", range(40, 180, 7))
def test_no_line_is_wider_than_the_screen(width: int) -> None:
    assert max(len(line) for line in said(width).splitlines()) <= width


@pytest.mark.parametrize(
    ("sunlit", "light"),
    [
        ((), "shadow"),
        (((600.0, 1200.0),), "sun"),
        (((600.0, 960.0),), "sun until 00:16"),
        (((960.0, 1200.0),), "sun from 00:16"),
        (((720.0, 960.0),), "sun 00:12-00:16"),
        (((600.0, 720.0), (960.0, 1200.0)), "shadow 00:12-00:16"),
    ],
)
def test_light_is_told_in_words(sunlit: tuple[tuple[float, float], ...], light: str) -> None:
    line = said(140, [ListedPass(sight=sight("QUA", 600.0, 600.0, sunlit=sunlit))]).splitlines()[3]
    assert f"  {light}  " in line


def test_no_pass_is_an_answer() -> None:
    assert said(80, []) == "Week 2026-W50, Teasel-1: no passes"


def test_decay_is_told_before_the_list() -> None:
    decayed = sky(**{"Teasel-1": 3 * DAY + 80_000.0})
    text = passes_text(listing(), decayed, mission(), HORIZON, 80).plain
    assert "Teasel-1: the element set leads into the atmosphere Thu 22:13 UTC;" in text.splitlines()[1]


def test_an_open_end_is_explained() -> None:
    both = [replace(each, sight=replace(each.sight, clipped="both")) for each in listing()]
    assert " open > open" in said(80, both)
    assert '"open" stands where' in said(80, both)
    assert "open" not in said(80, listing()[:2])


def test_several_satellites_get_a_column() -> None:
    other = ListedPass(sight=sight("QUA", 90_000.0, 300.0, satellite="Teasel-2"))
    text = said(140, [*listing()[:2], other])
    assert "Teasel-1, Teasel-2: 3 passes over 2 stations" in text
    assert "satellite" in text


def test_json_holds_moments_to_a_millisecond_and_units_in_its_keys() -> None:
    told = json.loads(passes_json(listing(), sky(**{"Teasel-1": 700_000.0}), HORIZON))
    assert told["week"] == "2026-W50"
    assert told["propagation_ends_utc"] == {"Teasel-1": "2026-12-15T02:26:40Z"}
    first = told["passes"][0]
    assert first["aos_utc"] == "2026-12-07T05:10:00.250000Z"
    assert first["length_s"] == 564.0
    assert first["sunlit"] == [
        {"from_utc": "2026-12-07T05:10:00.250000Z", "to_utc": "2026-12-07T05:15:50.250000Z"}
    ]
    assert told["passes"][2]["useful_s"] is None
    units = ("_utc", "_s", "_deg", "_km", "_hz")
    assert all(key.endswith(units) for key in set(first) - {"satellite", "station", "sunlit", "clipped"})


def test_csv_has_the_keys_and_values_of_the_json() -> None:
    text = passes_csv(listing(), HORIZON)
    assert text.count("\r\n") == 5
    rows = list(csv.DictReader(io.StringIO(text, newline="")))
    told = json.loads(passes_json(listing(), sky(), HORIZON))["passes"]
    assert list(rows[0]) == list(told[0])
    assert float(rows[0]["largest_doppler_down_hz"]) == told[0]["largest_doppler_down_hz"]
    assert rows[2]["useful_s"] == ""
    assert rows[0]["sunlit"] == "2026-12-07T05:10:00.250000Z/2026-12-07T05:15:50.250000Z"


def test_a_negative_elevation_stays_a_number_in_csv() -> None:
    low = ListedPass(sight=sight("QUA", 0.0, 60.0, max_elevation_deg=-0.31))
    (row,) = csv.DictReader(io.StringIO(passes_csv([low], HORIZON)))
    assert float(row["max_elevation_deg"]) == -0.31


@given(name=st.text(min_size=1).map(lambda text: text + "\r\n=1"), lead=st.sampled_from("=+-@"))
def test_no_name_becomes_a_formula_or_a_row(name: str, lead: str) -> None:
    """Cells beginning with = + - @ are formulas to a spreadsheet (OWASP, CSV injection)."""
    hostile = ListedPass(sight=sight("QUA", 0.0, 60.0, satellite=lead + name))
    (row,) = csv.DictReader(io.StringIO(passes_csv([hostile], HORIZON)))
    assert row["satellite"].startswith("'" + lead)
    assert row["station"] == "QUA"


def test_a_pass_in_the_hours_looked_ahead_has_its_day() -> None:
    assert "Mon 14 Dec" in said()


def test_local_days_are_right_across_a_clock_change() -> None:
    """New Zealand ends summer time on 5 April 2026 at 14:00 UTC the day before (IANA time zone database)."""
    horizon = Horizon(week="2026-W14")
    saturday = 5 * DAY + 13 * 3600 + 59 * 60.0
    listed = [ListedPass(sight=sight("TUS", saturday + shift, 300.0)) for shift in (0.0, 60.0)]
    lines = passes_text(listed, sky(), mission(), horizon, 140).plain.splitlines()[3:]
    assert [line[:30].split()[2:4] for line in lines] == [["02:59", "Sun"], ["02:00", "Sun"]]

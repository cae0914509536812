"""What each command answers when all is well."""

import csv
import io
import json
from pathlib import Path

import pytest

from tests.cli.conftest import Type


def test_a_new_workspace_is_made_and_the_next_steps_are_named(typed: Type, tmp_path: Path) -> None:
    folder = tmp_path / "my week"
    code, out, err = typed("new", str(folder))
    assert (code, err) == (0, "")
    assert (folder / "mission.toml").is_file()
    assert f"cd '{folder}'"[:40] in out
    assert all(f"passplan {word}" in out for word in ("check", "passes", "plan", "calendar"))


def test_a_workspace_is_never_made_over_another(typed: Type, week: Path) -> None:
    before = (week / "mission.toml").read_bytes()
    code, out, err = typed("new", str(week))
    assert (code, out) == (2, "")
    assert "there already; nothing was changed" in err
    assert (week / "mission.toml").read_bytes() == before


@pytest.mark.usefixtures("week")
def test_check_says_that_nothing_is_wrong_and_what_is_assumed(typed: Type) -> None:
    code, out, err = typed("check")
    assert (code, err) == (0, "")
    assert out.startswith("Nothing is wrong, ")
    assert "battery.floor_fraction" in out
    assert "60 %" in out


@pytest.mark.usefixtures("week")
def test_the_workspace_can_be_named(typed: Type, week: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    here = typed("check").out
    monkeypatch.chdir(week.parent)
    assert typed("check", "--workspace", "week").out == here


def test_schemas_are_written_where_it_says(typed: Type, week: Path) -> None:
    code, out, err = typed("schema")
    assert (code, err) == (0, "")
    assert ".schemas" in out
    assert json.loads((week / ".schemas" / "mission.schema.json").read_text())["title"] == "Mission"
    assert typed("schema", "elsewhere").code == 0
    assert (week / "elsewhere" / "station.schema.json").is_file()


@pytest.mark.usefixtures("week")
def test_element_sets_are_listed_with_the_one_that_is_used(typed: Type) -> None:
    code, out, err = typed("elements")
    assert (code, err) == (0, "")
    (row,) = (line for line in out.splitlines() if "305217" in line)
    assert row.split()[:2] == ["used", "FINCH-1"]
    assert "1.2 days" in row


def test_element_sets_are_added_once_from_a_file_a_folder_and_standard_input(
    typed: Type, week: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    text = (week / "elements" / "finch-1_2026-12-05.tle").read_text()
    # One day later; the checksum of line 1 grows by one with the day, modulo 10.
    later = text.replace("26339.80051111", "26340.80051111").replace(
        "  00000-0  29000-3 0   419", "  00000-0  29000-3 0   411"
    )
    (week / "inbox").mkdir()
    (week / "inbox" / "fresh.txt").write_text(later)
    code, out, err = typed("elements", "add", "inbox", "inbox/fresh.txt")
    assert (code, err) == (0, "")
    assert out.startswith("1 element set added, 1 element set already there.")
    stored = week / "elements" / "305217_2026-12-06T191244.tle"
    assert stored.is_file()
    monkeypatch.setattr("sys.stdin", io.TextIOWrapper(io.BytesIO(later.encode())))
    assert typed("elements", "add", "-").out.startswith("Nothing was added, 1 element set already there.")
    assert len(list((week / "elements").iterdir())) == 2
    used = [line for line in typed("elements").out.splitlines() if line.split()[:1] == ["used"]]
    assert "6 Dec 19:12" in used[0]
    assert len(used) == 1


@pytest.mark.usefixtures("week")
def test_the_workspace_may_stand_before_or_after_add(typed: Type, week: Path, tmp_path: Path) -> None:
    source = tmp_path / "set.tle"
    source.write_text((week / "elements" / "finch-1_2026-12-05.tle").read_text())
    (week / "elements" / "finch-1_2026-12-05.tle").unlink()
    where = ("--workspace", str(week))
    assert typed("elements", *where, "add", str(source)).out.startswith("1 element set added")
    assert typed("elements", "add", *where, str(source)).out.startswith("Nothing was added")


@pytest.mark.usefixtures("week")
def test_passes_are_listed_by_day_in_utc_and_there(typed: Type) -> None:
    code, out, err = typed("passes")
    assert code == 0
    assert out.startswith("Week 2026-W50, Finch-1: ")
    assert "Mon 7 Dec" in out
    assert "Auckland" in out
    assert "look again with newer ones" in err  # Sunday is more than five days after the epoch


@pytest.mark.usefixtures("week")
def test_passes_are_filtered(typed: Type) -> None:
    def listed(*options: str) -> list[dict[str, object]]:
        return list(json.loads(typed("passes", "--json", *options).out)["passes"])

    every = listed()
    assert {each["station"] for each in every} == {"NOR", "SUD"}
    assert listed("--station", "NOR", "--station", "SUD") == every
    nor = listed("--station", "nor")
    assert nor == [each for each in every if each["station"] == "NOR"]
    high = listed("--least-elevation", "45")
    assert high == [each for each in every if each["max_elevation_deg"] >= 45.0]  # type: ignore[operator]
    monday = listed("--day", "mon")
    assert monday == listed("--day", "2026-12-07")
    assert monday == [each for each in every if str(each["aos_utc"]).startswith("2026-12-07")]
    useful = listed("--useful")
    assert useful == [each for each in every if each["useful_s"]]
    assert 0 < len(high) < len(nor) < len(every)
    assert listed("--satellite", "finch-1") == every


@pytest.mark.usefixtures("week")
def test_passes_as_csv_say_the_same_as_json(typed: Type) -> None:
    rows = list(csv.DictReader(io.StringIO(typed("passes", "--csv", "--day", "tue").out, newline="")))
    told = json.loads(typed("passes", "--json", "--day", "tue").out)["passes"]
    assert [row["aos_utc"] for row in rows] == [each["aos_utc"] for each in told]
    assert [float(row["largest_doppler_down_hz"]) for row in rows] == [
        each["largest_doppler_down_hz"] for each in told
    ]


@pytest.mark.usefixtures("week")
def test_doppler_of_a_low_pass_is_what_the_handbook_says(typed: Type) -> None:
    # A satellite 500 km up moves at 7.6 km/s; near the horizon almost all of it, less the Earth's
    # turning, lies along the line of sight: up to some 10 kHz at 437 MHz (common practice).
    shifts = [
        each["largest_doppler_down_hz"]
        for each in json.loads(typed("passes", "--json", "--least-elevation", "60").out)["passes"]
    ]
    assert all(8_500.0 < shift < 10_500.0 for shift in shifts)
    assert shifts

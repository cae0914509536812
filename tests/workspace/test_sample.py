"""The sample scenario: whole, invented, spread over the Earth, and copied without ever overwriting."""

import os
from pathlib import Path
from zoneinfo import ZoneInfo

import pytest
from sgp4.api import Satrec
from sgp4.io import compute_checksum  # the checksum as sgp4's own reader has it

from passplan.domain.errors import InputError
from passplan.domain.mission import Mission
from passplan.domain.moments import local, week_start
from passplan.workspace.doubts import warnings
from passplan.workspace.read import read_workspace
from passplan.workspace.sample import make_workspace, sample_files, sample_folder

STATIONS = sorted(sample_folder("stations").iterdir())
ELEMENTS = sorted(sample_folder("tle_samples").iterdir())


@pytest.fixture(scope="module")
def mission(tmp_path_factory: pytest.TempPathFactory) -> Mission:
    folder = tmp_path_factory.mktemp("sample") / "week"
    make_workspace(folder)
    sample = read_workspace(folder)
    assert warnings(sample, folder) == []
    return sample


def test_it_has_what_the_week_needs(mission: Mission) -> None:
    assert len(mission.satellites) == 1
    assert len(mission.stations) >= 6
    assert len(mission.operators) == 12
    assert len(mission.commands) == 25
    assert len(mission.sessions) == 10
    assert mission.pinned_week == "2026-W50"


def test_it_is_spread_over_the_earth(mission: Mission) -> None:
    monday = week_start("2026-W50")
    offsets = {local(monday, station.time_zone).utcoffset() for station in mission.stations}
    assert len(offsets) >= 4
    assert {station.latitude_deg > 0.0 for station in mission.stations} == {True, False}
    assert all(ZoneInfo(person.time_zone) for person in mission.operators)


def test_it_shows_every_kind_of_station(mission: Mission) -> None:
    assert any(not station.radio.transmits for station in mission.stations)
    assert any(station.fixed_antenna for station in mission.stations)
    assert max(len(station.mask) for station in mission.stations) >= 10
    assert any(station.outages for station in mission.stations)
    assert any(station.hours for station in mission.stations)
    assert any(station.radio.polarisation == "linear" for station in mission.stations)


def test_it_shows_every_kind_of_request(mission: Mission) -> None:
    orders = {link.order for command in mission.commands for link in command.after}
    assert orders == {"after", "after_ack", "after_contact"}
    assert sum(command.urgent for command in mission.commands) == 1
    assert any(command.every_day for command in mission.commands)
    assert any(command.two_people for command in mission.commands)
    assert any(command.least_elevation_deg for command in mission.commands)
    assert any(command.least_charge_fraction for command in mission.commands)
    assert any(command.stations for command in mission.commands)
    assert {kind.weight for kind in mission.satellites[0].store.kinds} == {"low", "normal", "high"}
    assert any(kind.halves_every_days for kind in mission.satellites[0].store.kinds)


def test_no_administration_gives_these_call_signs(mission: Mission) -> None:
    """ITU Radio Regulations, Appendix 42: no series of call signs begins with Q."""
    assert all(person.handle.startswith("Q") for person in mission.operators)
    assert any(not person.may_control for person in mission.operators)


@pytest.mark.parametrize("path", STATIONS, ids=lambda path: path.name)
def test_every_station_file_is_one_of_the_sample(mission: Mission, path: Path) -> None:
    assert path.suffix == ".toml"
    assert mission.station(path.stem.upper()).name in path.read_text(encoding="utf-8")


@pytest.mark.parametrize("path", ELEMENTS, ids=lambda path: path.name)
def test_every_element_file_says_that_it_is_invented(path: Path) -> None:
    assert "invented, not an object" in path.read_text(encoding="utf-8")


@pytest.mark.parametrize(
    "path", [path for path in ELEMENTS if path.suffix == ".tle"], ids=lambda path: path.name
)
def test_every_tle_is_sound_to_sgp4(mission: Mission, path: Path) -> None:
    lines = path.read_text(encoding="utf-8").splitlines()[-2:]
    assert [int(line[68]) for line in lines] == [compute_checksum(line) for line in lines]
    satellite = Satrec.twoline2rv(*lines)
    assert satellite.satnum == mission.satellites[0].number == 305217
    error, _, _ = satellite.sgp4(satellite.jdsatepoch, satellite.jdsatepochF + 10.0)
    assert error == 0


def test_three_sets_follow_each_other_around_the_same_orbit() -> None:
    """The sets differ by what drag and fits do in days: seconds along the track, no more."""
    sets = [
        Satrec.twoline2rv(*path.read_text(encoding="utf-8").splitlines()[-2:])
        for path in ELEMENTS
        if path.suffix == ".tle"
    ]
    epochs = [one.jdsatepoch + one.jdsatepochF for one in sets]
    assert epochs == sorted(epochs)
    assert len(sets) == 3
    assert epochs[0] < 2461381.5 < epochs[1]  # the first one comes before Monday 7 December 2026, 00:00
    places = [one.sgp4(2461387.5, 0.0)[1] for one in sets]
    apart_km = [
        sum((a - b) ** 2 for a, b in zip(places[0], other, strict=True)) ** 0.5 for other in places[1:]
    ]
    assert all(0.5 < distance_km < 40.0 for distance_km in apart_km)


def test_new_puts_the_first_set_there_and_no_other(tmp_path: Path) -> None:
    made = make_workspace(tmp_path / "week")
    assert [path.name for path in made if path.parent.name == "elements"] == ["teasel-1_2026-12-05.tle"]
    assert sorted(path.relative_to(tmp_path / "week").as_posix() for path in made) == list(sample_files())


def test_new_works_in_an_empty_folder_and_in_one_with_other_things(tmp_path: Path) -> None:
    (tmp_path / "notes.txt").write_text("keep me", encoding="utf-8")
    make_workspace(tmp_path)
    assert (tmp_path / "notes.txt").read_text(encoding="utf-8") == "keep me"
    assert read_workspace(tmp_path).name == "Teasel"


def test_new_never_overwrites(tmp_path: Path) -> None:
    make_workspace(tmp_path)
    (tmp_path / "mission.toml").write_text("mine", encoding="utf-8")
    (tmp_path / "commands.toml").unlink()
    with pytest.raises(InputError) as caught:
        make_workspace(tmp_path)
    told = "there already; nothing was changed. Name a new folder: passplan new DIR"
    assert f"{tmp_path / 'mission.toml'}: {told}" in str(caught.value).splitlines()
    assert (tmp_path / "mission.toml").read_text(encoding="utf-8") == "mine"
    assert not (tmp_path / "commands.toml").exists()


def test_new_on_a_file(tmp_path: Path) -> None:
    (tmp_path / "week").write_text("", encoding="utf-8")
    with pytest.raises(InputError, match="cannot be written: "):
        make_workspace(tmp_path / "week")


def test_half_a_workspace_is_taken_back(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    """A disk that fills up half way leaves no files behind."""
    opened = Path.open
    left = iter(range(5))

    def full(path: Path, *args: object, **kwargs: object) -> object:
        if next(left, None) is None:
            raise OSError(28, "No space left on device")
        return opened(path, *args, **kwargs)  # type: ignore[call-overload]

    monkeypatch.setattr(Path, "open", full)
    monkeypatch.setattr(Path, "read_bytes", lambda path: os.fspath(path).encode())
    with pytest.raises(InputError, match="cannot be written: no space left on device"):
        make_workspace(tmp_path / "week")
    assert [path for path in (tmp_path / "week").rglob("*") if path.is_file()] == []


def test_the_folders_travel_in_the_package(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    """In a wheel `stations` and `tle_samples` lie inside the package; there they come first."""
    package = tmp_path / "passplan"
    (package / "sample" / "stations").mkdir(parents=True)
    monkeypatch.setattr("passplan.workspace.sample.PACKAGE", package)
    assert sample_folder("stations") == package / "sample" / "stations"
    assert sample_folder("tle_samples") == tmp_path / "tle_samples"

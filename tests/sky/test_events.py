"""AOS, TCA and LOS against Skyfield's own elevation, and peaks that barely clear the line."""

from dataclasses import replace

import numpy as np
import pytest
from skyfield.api import EarthSatellite, wgs84

from passplan.domain.elements import ElementSet
from passplan.domain.passes import Pass
from passplan.domain.station import Station
from passplan.sky import passes_of, survey
from passplan.sky.frames import earth_rotation, turned
from passplan.sky.propagate import satrec
from tests.sky.orbits import FLAT, ORBITS, WEEK, Floats, horizontal_deg, line_deg, our_scale, station

LOW = ("sun-synchronous 500 km", "400 x 1500 km", "polar 700 km", "equatorial 600 km", "250 km")
SITES = [place for place in FLAT if place.code in {"QF0", "QF1", "QF4", "QF7", "QF9"}]


class Theirs:
    """Skyfield's elevation of one orbit over one place, with our UT1, at seconds of the week."""

    def __init__(self, one: ElementSet, place: Station) -> None:
        self.scale = our_scale()
        satellite = EarthSatellite.from_satrec(satrec(one), self.scale)
        self.view = satellite - wgs84.latlon(place.latitude_deg, place.longitude_deg, place.altitude_m)

    def elevation_deg(self, seconds: Floats) -> Floats:
        """Return Skyfield's elevation, all of its frames included."""
        start = WEEK.start
        time = self.scale.utc(start.year, start.month, start.day, 0, 0, seconds)
        degrees: Floats = self.view.at(time).altaz()[0].degrees
        return degrees

    def crossing_s(self, seconds: Floats, level_deg: float) -> Floats:
        """Return the moments near `seconds` at which the elevation is `level_deg`, by Newton's method."""
        for _ in range(5):
            low, here, high = (self.elevation_deg(seconds + shift) for shift in (-0.02, 0.0, 0.02))
            seconds = seconds - np.clip((here - level_deg) * 0.04 / (high - low), -0.5, 0.5)
        return seconds

    def top_s(self, seconds: Floats) -> Floats:
        """Return the moments near `seconds` at which the elevation is highest, by Newton's method."""
        for _ in range(5):
            low, here, high = (self.elevation_deg(seconds + shift) for shift in (-0.02, 0.0, 0.02))
            seconds = seconds - np.clip(0.01 * (high - low) / (high - 2.0 * here + low), -0.5, 0.5)
        return seconds


@pytest.mark.parametrize("orbit", LOW)
def test_events_are_within_a_millisecond_of_skyfields(orbit: str) -> None:
    """In fact within 0.1 ms where the pass stands at least 0.05 deg above the line."""
    passes = survey({"A": ORBITS[orbit]}, SITES, WEEK).passes
    for place in SITES:
        level_deg = float(line_deg(place, np.zeros(1))[0])
        own = [one for one in passes if one.station == place.code and not one.clipped]
        own = [one for one in own if one.max_elevation_deg > level_deg + 0.05]
        if own:
            yard = Theirs(ORBITS[orbit], place)
            aos, tca, los = (
                np.array([getattr(one, name) for one in own]) for name in ("aos_s", "tca_s", "los_s")
            )
            assert np.abs(aos - yard.crossing_s(aos, level_deg)).max() < 1e-4
            assert np.abs(los - yard.crossing_s(los, level_deg)).max() < 1e-4
            assert np.abs(tca - yard.top_s(tca)).max() < 1e-4
            tops = np.array([one.max_elevation_deg for one in own])
            assert np.abs(tops - yard.elevation_deg(tca)).max() < 1e-6


def test_the_search_finds_as_many_passes_as_skyfield() -> None:
    """find_events over the week: as many risings and settings as we have passes."""
    one, place = ORBITS["sun-synchronous 500 km"], FLAT[0]
    yard = Theirs(one, place)
    start = WEEK.start
    begin, end = (
        yard.scale.utc(start.year, start.month, start.day, 0, 0, second) for second in (0.0, WEEK.end_s)
    )
    satellite = EarthSatellite.from_satrec(satrec(one), yard.scale)
    where = wgs84.latlon(place.latitude_deg, place.longitude_deg, place.altitude_m)
    _, kinds = satellite.find_events(where, begin, end, place.least_receive_elevation_deg)
    passes = survey({"A": one}, [place], WEEK).passes
    assert sum(not one.clipped.startswith(("start", "both")) for one in passes) == int(np.sum(kinds == 0))


def true_peaks_deg(one: ElementSet, place: Station, passes: list[Pass]) -> Floats:
    """Return the highest elevation of each pass, by SGP4 alone, to about 1e-10 deg."""
    day, fraction = WEEK.julian(0.0)
    record = satrec(one)

    def elevation_deg(seconds: Floats) -> Floats:
        _, position, _ = record.sgp4_array(np.full(seconds.shape, day), fraction + seconds / 86400.0)
        return horizontal_deg(place, turned(position.T, earth_rotation(WEEK, seconds)))[0]

    seconds = np.array([pass_.tca_s for pass_ in passes])
    for width in (0.5, 0.05, 0.02):
        low, here, high = (elevation_deg(seconds + shift) for shift in (-width, 0.0, width))
        seconds = seconds - 0.5 * width * (high - low) / (high - 2.0 * here + low)
    return elevation_deg(seconds)


@pytest.mark.parametrize("orbit", LOW)
def test_a_peak_a_millionth_of_a_degree_above_the_line_is_a_pass(orbit: str) -> None:
    """And one a millionth of a degree below it is none: 11 cm of height at 600 km would not do."""
    for place in SITES[:3]:
        low = replace(place, mask=(), least_receive_elevation_deg=0.0)
        whole = [one for one in survey({"A": ORBITS[orbit]}, [low], WEEK).passes if not one.clipped]
        whole = [one for one in whole if 0.2 < one.max_elevation_deg < 85.0]
        peaks = true_peaks_deg(ORBITS[orbit], low, whole)
        for shift, wanted in ((-1e-6, True), (1e-6, False)):
            stations = [replace(low, least_receive_elevation_deg=float(peak + shift)) for peak in peaks]
            (found,) = passes_of({"A": ORBITS[orbit]}, stations, WEEK)
            for number, one in enumerate(whole):
                mine = found.station == number
                hit = (found.aos_s[mine] < one.los_s) & (found.los_s[mine] > one.aos_s)
                assert hit.sum() == wanted, (place.code, number, shift)
                assert (found.los_s[mine] - found.aos_s[mine])[hit].sum() < 1.0


def test_a_pass_shorter_than_the_grid_cannot_hide() -> None:
    """Levels a little under each peak: seconds long, where nodes are minutes apart."""
    one = ORBITS["sun-synchronous 500 km"]
    low = station(52.0, 5.0, 0.0, 0.0)
    whole = [p for p in survey({"A": one}, [low], WEEK).passes if 0.5 < p.max_elevation_deg < 80.0]
    for below in (1e-4, 1e-3, 1e-2, 0.1, 0.3):
        stations = [replace(low, least_receive_elevation_deg=p.max_elevation_deg - below) for p in whole]
        (found,) = passes_of({"A": one}, stations, WEEK)
        for number, p in enumerate(whole):
            mine = found.station == number
            assert ((found.aos_s[mine] < p.tca_s) & (found.los_s[mine] > p.tca_s)).sum() == 1

"""What is written reads back: exactly from an OMM, to the last column from a TLE."""

from dataclasses import replace
from datetime import UTC, datetime, timedelta

import pytest
from hypothesis import given
from hypothesis import strategies as st

from passplan.domain.elements import ElementSet
from passplan.domain.errors import PassplanError
from passplan.workspace.element_files import read_elements
from passplan.workspace.omm_kvn import to_omm_kvn
from passplan.workspace.tle_text import to_tle
from tests.workspace_elements.forms import FIGURE_G7, GOES_TLE, bare, kvn

NAMES = st.text(st.characters(codec="utf-8", exclude_categories=["C", "Z"]), max_size=24)
ANGLES = st.floats(0.0, 360.0)


def element_sets(
    most_number: int, name: st.SearchStrategy[str], power: float
) -> st.SearchStrategy[ElementSet]:
    """Return sets with numbers up to `most_number` and drag terms down to `power`."""
    small = st.one_of(st.just(0.0), st.floats(power, 0.9), st.floats(-0.9, -power))
    return st.builds(
        ElementSet,
        name=name,
        number=st.one_of(st.none(), st.integers(1, most_number)),
        designator=st.sampled_from(["", "2026-101A", "1957-001ABC", "TBA"]),
        epoch=st.datetimes(datetime(1957, 1, 1), datetime(2056, 12, 31), timezones=st.just(UTC)),  # noqa: DTZ001
        inclination_deg=st.floats(0.0, 180.0),
        node_deg=ANGLES,
        eccentricity=st.floats(0.0, 1.0, exclude_max=True),
        argument_of_perigee_deg=ANGLES,
        mean_anomaly_deg=ANGLES,
        mean_motion_rev_day=st.floats(1e-7, 20.0),
        bstar_per_earth_radius=small,
        mean_motion_dot_rev_day2=small,
        mean_motion_ddot_rev_day3=small,
        element_number=st.integers(0, 9999),
        revolution=st.integers(0, 99_999),
        source=st.just(""),
        kind=st.just(""),
    )


@given(element_sets(999_999_999, NAMES, 5e-324))
def test_an_omm_gives_back_the_very_set(one: ElementSet) -> None:
    (back,) = read_elements(to_omm_kvn(one), "x")
    assert bare(back) == one


@given(element_sets(339_999, NAMES, 1e-9))
def test_a_tle_gives_back_the_set_to_its_last_column(one: ElementSet) -> None:
    (back,) = read_elements(to_tle(one), "x")
    assert (back.name, back.number, back.designator) == (one.name, one.number, one.designator)
    assert (back.element_number, back.revolution) == (one.element_number, one.revolution)
    assert abs(back.epoch - one.epoch) <= timedelta(microseconds=432)  # half of 1e-8 day
    for field in ("inclination_deg", "node_deg", "argument_of_perigee_deg", "mean_anomaly_deg"):
        assert getattr(back, field) == pytest.approx(getattr(one, field), abs=0.5001e-4)
    assert back.eccentricity == pytest.approx(one.eccentricity, abs=1.0001e-7)
    assert back.mean_motion_rev_day == pytest.approx(one.mean_motion_rev_day, abs=0.5001e-8)
    assert back.mean_motion_dot_rev_day2 == pytest.approx(one.mean_motion_dot_rev_day2, abs=0.5001e-8)
    for field in ("bstar_per_earth_radius", "mean_motion_ddot_rev_day3"):
        assert getattr(back, field) == pytest.approx(getattr(one, field), rel=0.5001e-4, abs=0.5001e-14)


@given(element_sets(339_999, NAMES, 1e-9))
def test_a_tle_read_and_written_again_is_the_same_text(one: ElementSet) -> None:
    text = to_tle(one)
    assert to_tle(read_elements(text, "x")[0]) == text
    assert all(len(line) == 69 for line in text.splitlines()[-2:])


def test_the_published_set_is_written_as_published() -> None:
    """All but the sign of a zero, which both providers and standards write either way."""
    assert to_tle(read_elements(GOES_TLE, "x")[0]).replace(" 00000+0", " 00000-0") == GOES_TLE.replace(
        "9250", "9259"
    )


def test_an_omm_word_for_word() -> None:
    assert to_omm_kvn(read_elements(kvn(FIGURE_G7), "x")[0]) == (
        "CCSDS_OMM_VERS      = 3.0\n"
        "CREATION_DATE       =\n"
        "ORIGINATOR          = PASSPLAN\n"
        "OBJECT_NAME         = GOES 9\n"
        "OBJECT_ID           = 1995-025A\n"
        "CENTER_NAME         = EARTH\n"
        "REF_FRAME           = TEME\n"
        "TIME_SYSTEM         = UTC\n"
        "MEAN_ELEMENT_THEORY = SGP4\n"
        "EPOCH               = 2020-03-04T10:34:41.426400\n"
        "MEAN_MOTION         = 1.00273272\n"
        "ECCENTRICITY        = 0.0005013\n"
        "INCLINATION         = 3.0539\n"
        "RA_OF_ASC_NODE      = 81.7939\n"
        "ARG_OF_PERICENTER   = 249.2363\n"
        "MEAN_ANOMALY        = 150.1602\n"
        "EPHEMERIS_TYPE      = 0\n"
        "CLASSIFICATION_TYPE = U\n"
        "NORAD_CAT_ID        = 23581\n"
        "ELEMENT_SET_NO      = 925\n"
        "REV_AT_EPOCH        = 4316\n"
        "BSTAR               = 0.0001\n"
        "MEAN_MOTION_DOT     = -1.13E-06\n"
        "MEAN_MOTION_DDOT    = 0.0\n"
    )


@pytest.mark.parametrize(
    ("change", "sentence"),
    [
        (
            {"number": 340_000},
            "catalogue number 340000 has no place in a TLE, which ends at 339999; write it as an OMM",
        ),
        (
            {"epoch": datetime(2057, 1, 1, tzinfo=UTC)},
            "the year 2057 has no two digits, which stand for 1957 to 2056",
        ),
        ({"mean_motion_dot_rev_day2": 1.0}, "first derivative 1.0 rev/day2 is too large for its columns"),
        ({"bstar_per_earth_radius": 1e9}, "is too large for its columns"),
        ({"mean_motion_rev_day": 1e-9}, "mean motion 1e-09 rev/day is too small for its columns"),
        ({"designator": "2026-101ABCD"}, "designator '2026-101ABCD' has no place in 8 columns"),
    ],
)
def test_what_has_no_place_in_a_tle(change: dict[str, object], sentence: str) -> None:
    one = read_elements(GOES_TLE, "x")[0]
    with pytest.raises(
        PassplanError, match=r"GOES 9 cannot be written as a TLE: .*write it as an OMM"
    ) as caught:
        to_tle(replace(one, **change))  # type: ignore[arg-type]
    assert sentence in str(caught.value)


def test_a_fraction_that_rounds_to_a_whole_day_moves_on_to_the_next() -> None:
    one = replace(
        read_elements(GOES_TLE, "x")[0], epoch=datetime(2026, 12, 31, 23, 59, 59, 999_999, tzinfo=UTC)
    )
    assert " 27001.00000000 " in to_tle(one)


def test_counters_run_over_as_catalogues_let_them() -> None:
    one = replace(read_elements(GOES_TLE, "x")[0], revolution=123_456, element_number=10_001)
    back = read_elements(to_tle(one), "x")[0]
    assert (back.revolution, back.element_number) == (23_456, 1)


@pytest.mark.parametrize("name", ["0 OAK", "1 OAK", "2 OAK", "# OAK"])
def test_names_that_look_like_other_lines(name: str) -> None:
    one = replace(read_elements(GOES_TLE, "x")[0], name=name)
    assert read_elements(to_tle(one), "x")[0].name == name

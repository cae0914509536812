"""Orbit mean-elements messages in all four forms, and what is refused."""

from collections.abc import Callable
from datetime import UTC, datetime, timedelta

import pytest
from sgp4 import tests as sgp4_tests

from passplan.domain.elements import ElementSet
from passplan.domain.errors import InputError
from passplan.workspace.element_files import read_elements, scan_elements
from passplan.workspace.epochs import read_epoch
from passplan.workspace.omm import catalogue_number
from tests.workspace_elements.forms import FIGURE_G7, GOES_TLE, bare, csv_rows, json_list, kvn, xml

FORMS: dict[str, Callable[[dict[str, str]], str]] = {
    "OMM KVN": kvn,
    "OMM XML": xml,
    "OMM JSON": json_list,
    "OMM CSV": csv_rows,
}
# Figure G-9 of CCSDS 502.0-B-3 shows the example of figure G-7 with units.
UNITS = {
    "MEAN_MOTION": "[rev/day]",
    "INCLINATION": "[deg]",
    "RA_OF_ASC_NODE": "[deg]",
    "ARG_OF_PERICENTER": "[deg]",
    "MEAN_ANOMALY": "[deg]",
    "GM": "[km**3/s**2]",
    "BSTAR": "[1/ER]",
    "MEAN_MOTION_DOT": "[rev/day**2]",
    "MEAN_MOTION_DDOT": "[rev/day**3]",
}


def one_of(text: str) -> ElementSet:
    """Return the only set of a text, without where it came from."""
    (one,) = read_elements(text, "x")
    return bare(one)


def changed(**values: str | None) -> dict[str, str]:
    """Return the published set with other values; None leaves a keyword out."""
    return {keyword: value for keyword, value in {**FIGURE_G7, **values}.items() if value is not None}


def told(text: str) -> str:
    """Return what is said about a bad text."""
    with pytest.raises(InputError) as caught:
        read_elements(text, "goes.omm")
    return str(caught.value)


def test_every_field_of_the_published_example() -> None:
    (one,) = read_elements(kvn(FIGURE_G7), "goes.omm")
    assert (one.name, one.number, one.designator) == ("GOES 9", 23581, "1995-025A")
    assert one.epoch == datetime(2020, 3, 4, 10, 34, 41, 426_400, tzinfo=UTC)  # day 64 of a leap year
    assert (one.inclination_deg, one.node_deg, one.eccentricity) == (3.0539, 81.7939, 0.0005013)
    assert (one.argument_of_perigee_deg, one.mean_anomaly_deg) == (249.2363, 150.1602)
    assert (one.mean_motion_rev_day, one.bstar_per_earth_radius) == (1.00273272, 0.0001)
    assert (one.mean_motion_dot_rev_day2, one.mean_motion_ddot_rev_day3) == (-0.00000113, 0.0)
    assert (one.element_number, one.revolution) == (925, 4316)
    assert (one.source, one.kind) == ("goes.omm, line 1", "OMM KVN")


@pytest.mark.parametrize("kind", FORMS)
def test_one_object_is_the_same_set_from_a_tle_and_from_every_form(kind: str) -> None:
    """The standard's example with the epoch its issue 2 (2009) gives it, against the TLE of that set."""
    (one,) = read_elements(FORMS[kind](changed(EPOCH="2007-064T10:34:41.4264")), "x")
    assert one.kind == kind
    assert bare(one) == one_of(GOES_TLE)


@pytest.mark.parametrize("text", [sgp4_tests.MARIO_XML, sgp4_tests.MARIO_CSV], ids=["xml", "csv"])
def test_a_feed_gives_the_same_set_in_three_texts(text: str) -> None:
    """The samples stand in the tests of the sgp4 package (2.27); no value of theirs is zero."""
    assert one_of(text) == one_of(sgp4_tests.MARIO_TLE)
    assert one_of(text).mean_motion_ddot_rev_day3 == 0.29408e-3


def test_units_are_taken_off_numbers() -> None:
    with_units = {
        keyword: f"{value} {UNITS[keyword]}" for keyword, value in FIGURE_G7.items() if keyword in UNITS
    }
    assert one_of(kvn({**FIGURE_G7, **with_units})) == one_of(kvn(FIGURE_G7))


def test_units_are_read_from_attributes() -> None:
    text = xml(FIGURE_G7).replace("<INCLINATION>", '<INCLINATION units="deg">')
    assert one_of(text) == one_of(kvn(FIGURE_G7))


@pytest.mark.parametrize(
    "text", [kvn(changed(INCLINATION="0.0533 [rad]")), xml(FIGURE_G7).replace("<INCL", "<INCL ")]
)
def test_other_units_are_refused(text: str) -> None:
    text = text.replace("<INCL INATION>", '<INCLINATION units="rad">')
    assert "INCLINATION: must be in deg, not in 'rad'" in told(text)


def test_brackets_in_a_name_are_no_unit() -> None:
    assert one_of(kvn(changed(OBJECT_NAME="ROOK [-]"))).name == "ROOK [-]"


@pytest.mark.parametrize("kind", FORMS)
def test_numbers_above_99999(kind: str) -> None:
    numbers = ["100000", "270449", "799501621", "999999999"]
    assert [one_of(FORMS[kind](changed(NORAD_CAT_ID=number))).number for number in numbers] == list(
        map(int, numbers)
    )
    assert one_of(FORMS[kind](changed(NORAD_CAT_ID=None))).number is None
    assert one_of(FORMS[kind](changed(NORAD_CAT_ID="0"))).number is None


@pytest.mark.parametrize("text", ["A0000", "1000000000", "25544.0", "-5", "9" * 70, "\uff12\uff15"])
def test_what_is_no_catalogue_number(text: str) -> None:
    with pytest.raises(ValueError, match="whole number of up to 9 digits"):
        catalogue_number(text)
    assert "NORAD_CAT_ID" in told(kvn(changed(NORAD_CAT_ID=text)))


def test_feeds_in_json_and_csv_may_leave_out_what_never_changes() -> None:
    fields = {
        keyword: value
        for keyword, value in FIGURE_G7.items()
        if keyword
        not in ("CENTER_NAME", "REF_FRAME", "TIME_SYSTEM", "MEAN_ELEMENT_THEORY", "CCSDS_OMM_VERS", "GM")
    }
    expected = one_of(kvn(FIGURE_G7))
    assert one_of(json_list({**fields, "RMS": "0.1"})) == expected
    assert one_of(csv_rows({**fields, "DATA_SOURCE": "none"})) == expected


@pytest.mark.parametrize("keyword", ["CENTER_NAME", "REF_FRAME", "TIME_SYSTEM", "MEAN_ELEMENT_THEORY"])
@pytest.mark.parametrize("kind", ["OMM KVN", "OMM XML"])
def test_the_forms_of_the_standard_must_say_what_they_are(kind: str, keyword: str) -> None:
    assert f"{keyword}: is missing; it must be" in told(FORMS[kind](changed(**{keyword: None})))


@pytest.mark.parametrize("kind", FORMS)
@pytest.mark.parametrize(
    ("keyword", "value", "sentence"),
    [
        ("MEAN_ELEMENT_THEORY", "DSST", "must be SGP4 or SGP/SGP4: only elements for SGP4 can be flown here"),
        ("MEAN_ELEMENT_THEORY", "SGP4-XP", "must be SGP4 or SGP/SGP4"),
        ("REF_FRAME", "ICRF", "must be TEME"),
        ("TIME_SYSTEM", "TAI", "must be UTC"),
        ("CENTER_NAME", "MOON", "must be EARTH"),
        ("EPHEMERIS_TYPE", "4", "must be 0 or 2"),
        ("MEAN_MOTION", "fast", "must be a decimal number, such as 15.04 or 0.15E-3"),
        ("MEAN_MOTION", "0", "must be more than 0 and at most 20"),
        ("MEAN_MOTION", "1e999", "must be a finite number"),
        ("INCLINATION", "180.5", "must be at least 0 and at most 180"),
        ("ECCENTRICITY", "1", "must be at least 0 and less than 1"),
        ("BSTAR", "nan", "must be a decimal number"),
        ("BSTAR", "1_0", "must be a decimal number"),
        ("EPOCH", "2020-03-04 10:34:41", "must be a moment in UTC such as 2026-12-05T10:11:12.5"),
        ("EPOCH", "2021-02-29T10:34:41", "is no day or hour of the calendar"),
        ("REV_AT_EPOCH", "-4", "must be a whole number of up to 9 digits"),
    ],
)
def test_values_that_cannot_be(kind: str, keyword: str, value: str, sentence: str) -> None:
    said = told(FORMS[kind](changed(**{keyword: value})))
    assert keyword in said
    assert sentence in said


@pytest.mark.parametrize("kind", FORMS)
def test_what_sgp4_needs_must_be_there(kind: str) -> None:
    assert "BSTAR" in told(FORMS[kind](changed(BSTAR=None)))
    assert "SGP4 needs" in told(FORMS[kind](changed(BSTAR=None)))


@pytest.mark.parametrize("kind", FORMS)
def test_an_axis_is_no_mean_motion(kind: str) -> None:
    """CCSDS 502.0-B-3, section 4.2.4.6: SGP4 goes with MEAN_MOTION."""
    fields = {"SEMI_MAJOR_AXIS": "41399.5123", **changed(MEAN_MOTION=None)}
    assert "cannot stand in for MEAN_MOTION: SGP4 takes Kozai's mean motion" in told(FORMS[kind](fields))


def test_all_slips_of_a_message_word_for_word() -> None:
    assert told(kvn(changed(INCLINATION="3,05", EPOCH="yesterday"))) == (
        "goes.omm: line 13: '3,05': INCLINATION: must be a decimal number, such as 15.04 or 0.15E-3\n"
        "    INCLINATION = 3,05\n"
        "                  ^^^^\n"
        "goes.omm: line 10: 'yesterday': EPOCH: must be a moment in UTC such as 2026-12-05T10:11:12.5 or "
        "2026-339T10:11:12.5, with or without a Z\n"
        "    EPOCH = yesterday\n"
        "            ^^^^^^^^^"
    )


def test_the_caret_stands_under_the_value_in_xml_and_csv() -> None:
    fields = changed(OBJECT_NAME="RÖOK & CO", MEAN_ANOMALY="-1.5")
    for text in (xml(fields).replace("&", "&amp;"), csv_rows(fields)):
        line, carets = told(text).splitlines()[1:]
        start = carets.index("^")
        assert line[start : start + carets.count("^")] == "-1.5"


def test_a_json_item_is_told_by_its_number() -> None:
    said = told(json_list(FIGURE_G7, changed(INCLINATION="999")))
    assert said == "goes.omm: item 2.INCLINATION: '999': must be at least 0 and at most 180"


def test_keywords_in_any_order_comments_and_odd_blanks() -> None:
    header = "\n\nCOMMENT none\nCCSDS_OMM_VERS=2.0\nCOMMENT\n"
    rest = [f"  {keyword}\t=   {value}  " for keyword, value in reversed(FIGURE_G7.items())][:-1]
    assert one_of(header + "\r\n\r\n".join(rest)) == one_of(kvn(FIGURE_G7))


@pytest.mark.parametrize("kind", FORMS)
def test_blank_values_are_absent_ones(kind: str) -> None:
    text = FORMS[kind](changed(CREATION_DATE="", ORIGINATOR="", OBJECT_ID="", NORAD_CAT_ID=""))
    one = one_of(text)
    assert (one.designator, one.number, one.name) == ("", None, "GOES 9")


def test_numbers_without_a_leading_zero_and_with_signs() -> None:
    one = one_of(
        kvn(changed(ECCENTRICITY=".0014649", BSTAR="-.1568e-2", MEAN_MOTION_DOT="+0.0", REV_AT_EPOCH="+0042"))
    )
    assert (one.eccentricity, one.bstar_per_earth_radius, one.revolution) == (0.0014649, -0.001568, 42)


def test_a_repeated_keyword_is_refused() -> None:
    """CCSDS 502.0-B-3, section 7.3.8."""
    twice = kvn(FIGURE_G7) + "BSTAR = 0.5\n"
    assert "line 26: '0.5': BSTAR: is there twice in one message; leave one" in told(twice)
    assert "BSTAR: is there twice" in told(xml(FIGURE_G7).replace("</tle", "<BSTAR>1</BSTAR></tle"))
    assert "item 1.BSTAR: " in told('[{"BSTAR": 1, "BSTAR": 2}]')
    assert "'BSTAR': this column is there twice; leave one" in told(
        csv_rows(FIGURE_G7).replace("GM", "BSTAR", 1)
    )


@pytest.mark.parametrize("join", [lambda a, b: kvn(a) + "\n" + kvn(b), xml, json_list, csv_rows])
def test_several_messages_in_one_text(join: Callable[[dict[str, str], dict[str, str]], str]) -> None:
    sets = read_elements(join(FIGURE_G7, changed(NORAD_CAT_ID="123456789")), "x")
    assert [one.number for one in sets] == [23581, 123456789]
    assert len({one.source for one in sets}) == 2


def test_xml_alone_wrapped_and_with_a_namespace_is_the_same() -> None:
    plain = one_of(xml(FIGURE_G7))
    assert one_of(xml(FIGURE_G7, wrapped=False)) == plain
    assert (
        one_of(xml(FIGURE_G7).replace("<omm", '<ndm:omm xmlns:ndm="urn:x"').replace("</omm", "</ndm:omm"))
        == plain
    )
    assert one_of("\n\n" + xml(FIGURE_G7)) == plain


def test_csv_names_with_commas_and_quotes() -> None:
    assert one_of(csv_rows(changed(OBJECT_NAME='ROOK, THE "LATE" ONE'))).name == 'ROOK, THE "LATE" ONE'


def test_a_csv_without_a_needed_column_is_told_once() -> None:
    fields = changed(BSTAR=None)
    said = told(csv_rows(fields, fields, fields))
    assert said == "goes.omm: line 1: no column BSTAR, which SGP4 needs; fetch the sets again"


def test_another_kind_of_message() -> None:
    assert "another kind of message" in told("CCSDS_OPM_VERS = 2.0\nX = 6503.514\n")
    assert told("<ndm><opm><EPOCH>2020-064T10:34:41</EPOCH></opm></ndm>").endswith(
        "no element set found in it; fetch it again"
    )


# CCSDS 502.0-B-3, section 7.5.10 and annex G; the leap second of its note rolls on to the next minute.
@pytest.mark.parametrize(
    ("text", "moment"),
    [
        ("2020-064T10:34:41.4264", datetime(2020, 3, 4, 10, 34, 41, 426_400, tzinfo=UTC)),
        ("2002-204T15:56:23Z", datetime(2002, 7, 23, 15, 56, 23, tzinfo=UTC)),
        ("2001-11-06T11:17:33", datetime(2001, 11, 6, 11, 17, 33, tzinfo=UTC)),
        ("2016-12-31T23:59:60", datetime(2017, 1, 1, tzinfo=UTC)),
        ("2026-09-20T12:42:37.9999999", datetime(2026, 9, 20, 12, 42, 38, tzinfo=UTC)),
        ("2026-09-20T12:42:37.1410565", datetime(2026, 9, 20, 12, 42, 37, 141_056, tzinfo=UTC)),
        ("2024-366T00:00:00", datetime(2024, 12, 31, tzinfo=UTC)),
    ],
)
def test_moments(text: str, moment: datetime) -> None:
    assert read_epoch(text) == moment
    assert read_epoch(text).utcoffset() == timedelta(0)


@pytest.mark.parametrize(
    "text",
    [
        "2026-9-20T12:42:37",
        "2026-09-20T12:42:37+00:00",
        "20260920T124237",
        "26263.52959654",
        "2023-366T00:00:00",
        "2023-000T00:00:00",
        "0000-001T00:00:00",
        "9999-12-31T23:59:59.9999999",
        "2016-12-31T22:00:60",
        "2016-12-31T24:00:00",
        "2016-13-01T00:00:00",
        "\uff12020-01-01T00:00:00",
    ],
)
def test_what_is_no_moment(text: str) -> None:
    with pytest.raises(ValueError, match="must be a moment in UTC"):
        read_epoch(text)


def test_the_sets_around_a_bad_one_are_still_read() -> None:
    reading = scan_elements(json_list(FIGURE_G7, changed(EPOCH="never"), changed(NORAD_CAT_ID="7")), "x")
    assert [one.number for one in reading.sets] == [23581, 7]
    assert [slip.key for slip in reading.mistakes] == ["item 2.EPOCH"]

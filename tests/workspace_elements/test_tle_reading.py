"""Reading two- and three-line element sets, and what is said when a line is not in order."""

from datetime import UTC, datetime

import pytest

from passplan.domain.errors import InputError
from passplan.workspace.element_files import read_elements, scan_elements
from passplan.workspace.tle_columns import checksum, field_of, number_of
from tests.workspace_elements.forms import GOES_TLE, LOW_1, LOW_2, bare, summed

AGAIN = "fetch the set again, as a TLE is strict about columns and cannot be mended by hand"


def told(text: str) -> str:
    """Return what is said about a bad text."""
    with pytest.raises(InputError) as caught:
        read_elements(text, "elements/low.tle")
    return str(caught.value)


def test_every_field_of_a_set() -> None:
    (one,) = read_elements(GOES_TLE, "goes.tle")
    assert one.name == "GOES 9"
    assert one.number == 23581
    assert one.designator == "1995-025A"
    # day 64.44075725 of 2007: 5 March, 0.44075725 * 86400 s = 38081.4264 s = 10:34:41.4264
    assert one.epoch == datetime(2007, 3, 5, 10, 34, 41, 426_400, tzinfo=UTC)
    assert (one.inclination_deg, one.node_deg, one.eccentricity) == (3.0539, 81.7939, 0.0005013)
    assert (one.argument_of_perigee_deg, one.mean_anomaly_deg) == (249.2363, 150.1602)
    assert (one.mean_motion_rev_day, one.bstar_per_earth_radius) == (1.00273272, 0.0001)
    assert (one.mean_motion_dot_rev_day2, one.mean_motion_ddot_rev_day3) == (-0.00000113, 0.0)
    assert (one.element_number, one.revolution) == (925, 4316)
    assert (one.source, one.kind) == ("goes.tle, line 2", "TLE")


@pytest.mark.parametrize(
    "text",
    [
        f"{LOW_1}\n{LOW_2}\n",
        f"{LOW_1}\r\n{LOW_2}\r\n",
        f"{LOW_1}\r{LOW_2}",
        f"\n\n# a note\n{LOW_1}\n\n# another\n{LOW_2}   \n\n",
        f"   {LOW_1}\n\t{LOW_2}\n",
        f"\ufeff{LOW_1}\n{LOW_2}\n\x1a",
        f"{LOW_1} behind\n{LOW_2}      0.0   2880.0   120.00\n",
    ],
    ids=["plain", "crlf", "cr", "comments", "indented", "marks", "more columns"],
)
def test_two_lines_however_they_are_wrapped(text: str) -> None:
    assert [bare(one) for one in read_elements(text, "x")] == [
        bare(read_elements(f"{LOW_1}\n{LOW_2}", "x")[0])
    ]


@pytest.mark.parametrize(
    ("line", "name"),
    [
        ("TEASEL-1", "TEASEL-1"),
        ("0 TEASEL-1", "TEASEL-1"),
        ("TEASEL-1               ", "TEASEL-1"),
        ("2 ROOKS", "2 ROOKS"),
        ("<ROOK>", "<ROOK>"),
        ("[]", "[]"),
        ("EPOCH = 1", "EPOCH = 1"),
        ("A,EPOCH", "A,EPOCH"),
    ],
)
def test_name_lines(line: str, name: str) -> None:
    (one,) = read_elements(f"{line}\n{LOW_1}\n{LOW_2}\n", "x")
    assert one.name == name


def test_named_and_unnamed_sets_in_one_file_keep_their_order() -> None:
    sets = read_elements(f"{LOW_1}\n{LOW_2}\n{GOES_TLE}{LOW_1}\n{LOW_2}\n", "x")
    assert [(one.name, one.number) for one in sets] == [("", 25544), ("GOES 9", 23581), ("", 25544)]


@pytest.mark.parametrize(
    ("data", "name"),
    [
        (f"MÉSANGE\n{LOW_1}\n{LOW_2}\n".encode(), "MÉSANGE"),
        (f"MÉSANGE\n{LOW_1}\n{LOW_2}\n".encode("latin-1"), "MÉSANGE"),
        (f"MÉSANGE\n{LOW_1}\n{LOW_2}\n".encode("utf-8-sig"), "MÉSANGE"),
        (f"MÉSANGE\r\n{LOW_1}\r\n{LOW_2}\r\n".encode("utf-16"), "MÉSANGE"),
        (b"\xfe\xff" + f"MÉSANGE\n{LOW_1}\n{LOW_2}\n".encode("utf-16-be"), "MÉSANGE"),
        (f"MÉSANGE\n{LOW_1}\n{LOW_2}\n".encode("utf-32"), "MÉSANGE"),
    ],
    ids=["utf-8", "latin-1", "utf-8 marked", "utf-16", "utf-16 big end first", "utf-32"],
)
def test_text_in_every_encoding_people_save(data: bytes, name: str) -> None:
    assert read_elements(data, "x")[0].name == name


# The catalogue operator's examples of Alpha-5, as quoted in the tests of the sgp4 package (2.27).
ALPHA_5 = {
    "A0000": 100000,
    "E8493": 148493,
    "J2931": 182931,
    "P4018": 234018,
    "W1928": 301928,
    "Z9999": 339999,
}


@pytest.mark.parametrize(("field", "number"), ALPHA_5.items())
def test_published_numbers_above_99999(field: str, number: int) -> None:
    assert number_of(field) == number
    assert field_of(number) == field
    (one,) = read_elements(summed(f"1 {field}{LOW_1[7:]}") + "\n" + summed(f"2 {field}{LOW_2[7:]}"), "x")
    assert one.number == number


def test_every_number_five_columns_can_hold_comes_back() -> None:
    fields = [field_of(number) for number in range(1, 340_000)]
    assert len(set(fields)) == 339_999
    assert [number_of(field) for field in fields] == list(range(1, 340_000))
    assert not any("I" in field or "O" in field for field in fields)


@pytest.mark.parametrize("number", [340_000, 799_501_621, -1])
def test_numbers_without_a_place_are_refused(number: int) -> None:
    with pytest.raises(ValueError, match=r"has no place in a TLE, which ends at 339999"):
        field_of(number)


@pytest.mark.parametrize("field", ["I0000", "O1234", "a0000", "AA000", "1A000", "12 45", "4859 "])
def test_fields_that_are_no_number(field: str) -> None:
    text = summed(f"1 {field}{LOW_1[7:]}") + "\n" + summed(f"2 {field}{LOW_2[7:]}")
    with pytest.raises(InputError, match="columns 3 to 7, catalogue number: must be 5 digits, or a letter"):
        read_elements(text, "x")


@pytest.mark.parametrize(
    ("field", "number"), [(" 4859", 4859), ("00005", 5), ("    5", 5), ("00000", None), ("     ", None)]
)
def test_numbers_with_blanks_and_zeros(field: str, number: int | None) -> None:
    """The sgp4 package tests the number 4859 behind a blank; zeros or blanks are an object with no number."""
    (one,) = read_elements(summed(f"1 {field}{LOW_1[7:]}") + "\n" + summed(f"2 {field}{LOW_2[7:]}"), "x")
    assert one.number == number


def test_published_checksums() -> None:
    """Digits 3 and 7 end the lines of object 00005 in SGP4-VER.TLE, 0 and 9 those of figure G-7's set."""
    assert checksum("1 00005U 58002B   00179.78495062  .00000023  00000-0  28098-4 0  475") == 3
    assert checksum("2 00005  34.2682 348.7242 1859667 331.7664  19.3264 10.8241915741366") == 7
    assert [checksum(line) for line in GOES_TLE.splitlines()[1:]] == [0, 9]


# Two digits of a year: T. S. Kelso, FAQ on the two-line format, Satellite Times, January 1998.
@pytest.mark.parametrize(
    ("digits", "year"), [("57", 1957), ("58", 1958), ("99", 1999), ("00", 2000), ("26", 2026), ("56", 2056)]
)
def test_two_digits_of_a_year(digits: str, year: int) -> None:
    (one,) = read_elements(summed(LOW_1.replace(" 14020", f" {digits}020")) + "\n" + LOW_2, "x")
    assert one.epoch.year == year


def test_a_wrong_checksum_word_for_word() -> None:
    assert told(f"{LOW_1[:-1]}9\n{LOW_2}\n") == (
        "elements/low.tle: line 1: '9': the checksum in column 69 must be 2, so a character was changed; "
        f"{AGAIN}\n"
        "    1 25544U 98067A   14020.93268519  .00009878  00000-0  18200-3 0  5089\n"
        "                                                                        ^"
    )


def test_a_lost_character_word_for_word() -> None:
    short = LOW_2.replace("0003572", "000357")
    assert told(f"{LOW_1}\n{short}\n") == (
        f"elements/low.tle: line 2: '{short}': the line has 68 characters and needs 69; {AGAIN}\n"
        "    2 NNNNN III.IIII RRR.RRRR EEEEEEE PPP.PPPP MMM.MMMM NN.NNNNNNNNRRRRRC\n"
        f"    {short}\n"
        "                              ^"
    )


def test_a_letter_for_a_digit_word_for_word() -> None:
    assert told(f"{LOW_1.replace('14020.9', '14O20.9')}\n{LOW_2}\n") == (
        "elements/low.tle: line 1: '14O20.93268519': columns 19 to 32, epoch: must be 2 digits of "
        "the year, 3 "
        f"of the day, a point and 8 digits; {AGAIN}\n"
        "    1 NNNNNC YYLLLPPP YYDDD.DDDDDDDD +.DDDDDDDD +DDDDD+D +BBBBB+B T NNNNC\n"
        "    1 25544U 98067A   14O20.93268519  .00009878  00000-0  18200-3 0  5082\n"
        "                      ^^^^^^^^^^^^^^"
    )


def test_an_angle_outside_its_range_word_for_word() -> None:
    line = summed(LOW_2.replace(" 51.6498", "251.6498"))
    assert told(f"{LOW_1}\n{line}\n") == (
        "elements/low.tle: line 2: '251.6498': columns 9 to 16, inclination: must be at least 0 "
        "and at most 180; "
        f"{AGAIN}\n"
        "    2 NNNNN III.IIII RRR.RRRR EEEEEEE PPP.PPPP MMM.MMMM NN.NNNNNNNNRRRRRC\n"
        f"    {line}\n"
        "            ^^^^^^^^"
    )


@pytest.mark.parametrize("field", ["14366.50000000", "14000.50000000", "00367.00000000", "14999.00000000"])
def test_a_day_the_year_does_not_have(field: str) -> None:
    line = summed(LOW_1.replace("14020.93268519", field))
    assert f"'{field}': columns 19 to 32, epoch: must be a day of its year" in told(f"{line}\n{LOW_2}\n")


def test_the_last_day_of_a_leap_year_is_a_day() -> None:
    (one,) = read_elements(summed(LOW_1.replace("14020.93268519", "24366.50000000")) + "\n" + LOW_2, "x")
    assert one.epoch == datetime(2024, 12, 31, 12, tzinfo=UTC)


def test_lines_of_two_sets() -> None:
    other = summed(LOW_2.replace("25544", "25545"))
    assert "'25545': columns 3 to 7, catalogue number: must be 25544 as in the line before" in told(
        f"{LOW_1}\n{other}"
    )


@pytest.mark.parametrize(
    ("text", "sentence"),
    [
        (f"TEASEL-1\n{LOW_1}\n", "line 2: '1 25544U"),
        (f"TEASEL-1\n{LOW_1}\nROOK\n{LOW_1}\n{LOW_2}\n", "this line 1 has no line 2 behind it"),
        (f"TEASEL-1\n{LOW_2}\n{LOW_1}\n{LOW_2}\n", "this line 2 has no line 1 before it"),
        (f"{LOW_1}\n{LOW_2}\nTEASEL-1\n", "neither an element line nor a name"),
        (
            f"words of a web page\nTEASEL-1\n{LOW_1}\n{LOW_2}\n",
            "line 1: 'words of a web page': neither an element line",
        ),
    ],
)
def test_lines_that_pair_with_nothing(text: str, sentence: str) -> None:
    assert sentence in told(text)


def test_a_name_a_terminal_would_obey_is_refused_and_shown_harmless() -> None:
    said = told(f"TEA\x1b[2JSEL\n{LOW_1}\n{LOW_2}\n")
    assert "the name of the object: one line of printable characters" in said
    assert "\x1b" not in said


def test_elements_for_another_theory() -> None:
    """Ephemeris type 4 marks SGP4-XP (CCSDS 502.0-B-3, table 4-3)."""
    line = summed(LOW_1.replace(" 0  508", " 4  508"))
    assert "column 63, ephemeris type: must be 0; other types, such as 4 for SGP4-XP" in told(
        f"{line}\n{LOW_2}"
    )


def test_all_slips_of_a_file_and_the_good_sets_beside_them() -> None:
    text = f"{LOW_1[:-1]}9\n{LOW_2}\n{GOES_TLE}{LOW_1}\n{LOW_2[:-1]}1\nROOK\n{LOW_1}\n"
    reading = scan_elements(text, "x")
    assert [one.number for one in reading.sets] == [23581]
    assert [slip.key for slip in reading.mistakes] == ["line 1", "line 7", "line 9"]


def test_a_long_line_is_cut_around_the_slip() -> None:
    said = told(f"{LOW_1}\n{LOW_2[:-1]}9{' ' * 20}{'0' * 400}\n")
    line, caret = said.splitlines()[1:]
    assert line.strip().startswith("2 25544")
    assert line.endswith("...")
    assert line[caret.index("^")] == "9"
    assert max(map(len, said.splitlines()[1:])) < 110

"""The columns of a two-line element set: what stands where, numbers above 99999, checksums.

Columns as in Spacetrack Report No. 3 (Hoots and Roehrich, 1980) and AIAA 2006-6753
(Vallado, Crawford, Hujsak, Kelso), appendix B.
"""

import re
from dataclasses import dataclass

LENGTH = 69
TEMPLATES = {
    "1": "1 NNNNNC YYLLLPPP YYDDD.DDDDDDDD +.DDDDDDDD +DDDDD+D +BBBBB+B T NNNNC",
    "2": "2 NNNNN III.IIII RRR.RRRR EEEEEEE PPP.PPPP MMM.MMMM NN.NNNNNNNNRRRRRC",
}
LARGEST_NUMBER = 339_999

_LETTERS = "ABCDEFGHJKLMNPQRSTUVWXYZ"  # no I and no O, which look like digits
_WORTH = {ord(char): int(char) for char in "0123456789"} | {ord("-"): 1}


@dataclass(frozen=True, kw_only=True, slots=True)
class Column:
    """One field of a line: `field` is the attribute of ElementSet it ends in, or a name of its own."""

    field: str
    first: int
    last: int
    pattern: re.Pattern[str]
    told: str

    def cut(self, line: str) -> str:
        """Return what stands in these columns."""
        return line[self.first - 1 : self.last]


def _column(field: str, first: int, last: int, pattern: str, told: str) -> Column:
    return Column(field=field, first=first, last=last, pattern=re.compile(pattern), told=told)


def _blank(column: int) -> Column:
    return _column(f"blank {column}", column, column, " ", "blank")


_NUMBER = (r" *[0-9]+|[A-HJ-NP-Z][0-9]{4}| {5}", "5 digits, or a letter but I and O and 4 digits")
_POWER = (r"[ +-][0-9]{5}[ +-][0-9]| {8}", "sign, 5 digits, sign, 1 digit")
_ANGLE = (r" *[0-9]*\.[0-9]+", "degrees with a point")
_WHOLE = (r" *[0-9]*", "digits")

LINE_1 = (
    _column("line number", 1, 1, "1", "1"),
    _blank(2),
    _column("number", 3, 7, *_NUMBER),
    _column("classification", 8, 8, "[A-Z ]", "a letter"),
    _blank(9),
    _column("designator", 10, 17, r"[ -~]{8}", "year, launch and piece"),
    _blank(18),
    _column("epoch", 19, 32, r"[0-9]{2}[ 0-9]{2}[0-9]\.[0-9]+ *", "two digits of the year, three of the day, a point, 8 digits"),
    _blank(33),
    _column("mean_motion_dot_rev_day2", 34, 43, r" *[+-]?[0-9]?\.[0-9]+", "sign, point, 8 digits"),
    _blank(44),
    _column("mean_motion_ddot_rev_day3", 45, 52, *_POWER),
    _blank(53),
    _column("bstar_per_earth_radius", 54, 61, *_POWER),
    _blank(62),
    _column("ephemeris type", 63, 63, "[ 0-9]", "a digit"),
    _blank(64),
    _column("element_number", 65, 68, *_WHOLE),
    _column("checksum", 69, 69, "[0-9]", "a digit"),
)
LINE_2 = (
    _column("line number", 1, 1, "2", "2"),
    _blank(2),
    _column("number", 3, 7, *_NUMBER),
    _blank(8),
    _column("inclination_deg", 9, 16, *_ANGLE),
    _blank(17),
    _column("node_deg", 18, 25, *_ANGLE),
    _blank(26),
    _column("eccentricity", 27, 33, r" *[0-9]+", "7 digits, the point left out"),
    _blank(34),
    _column("argument_of_perigee_deg", 35, 42, *_ANGLE),
    _blank(43),
    _column("mean_anomaly_deg", 44, 51, *_ANGLE),
    _blank(52),
    _column("mean_motion_rev_day", 53, 63, r" *[0-9]*\.[0-9]+", "revolutions a day with a point and 8 digits"),
    _column("revolution", 64, 68, *_WHOLE),
    _column("checksum", 69, 69, "[0-9]", "a digit"),
)


def checksum(line: str) -> int:
    """Return the last digit of columns 1 to 68: digits count themselves, a minus 1, all else 0."""
    return sum(_WORTH.get(ord(char), 0) for char in line[: LENGTH - 1]) % 10


def number_of(field: str) -> int | None:
    """Return the catalogue number in the five columns; None when they are blank or zero.

    The scheme for numbers above 99999 is Alpha-5: a first letter stands for 10 to 33.
    """
    if field[0] in _LETTERS:
        return (_LETTERS.index(field[0]) + 10) * 10_000 + int(field[1:])
    return int(field.strip() or "0") or None


def field_of(number: int | None) -> str:
    """Return the five columns of a catalogue number, "00000" for none.

    Raises:
        ValueError: the number has no place in five columns.
    """
    whole = number or 0
    if not 0 <= whole <= LARGEST_NUMBER:
        raise ValueError(f"{whole} has no place in a TLE, which ends at {LARGEST_NUMBER}: write an OMM")
    if whole < 100_000:
        return f"{whole:05d}"
    return f"{_LETTERS[whole // 10_000 - 10]}{whole % 10_000:04d}"

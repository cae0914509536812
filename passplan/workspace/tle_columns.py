"""The columns of a two-line element set: what stands where, numbers above 99999, checksums.

Columns as in Spacetrack Report No. 3 (Hoots and Roehrich, 1980) and AIAA 2006-6753
(Vallado, Crawford, Hujsak, Kelso), appendix B.
"""

import re
from dataclasses import dataclass

LENGTH = 69
LARGEST_NUMBER = 339_999
OLDEST_YEAR = 1957  # two digits of a year are 1957 to 2056 (common practice)
TEMPLATES = {
    "1": "1 NNNNNC YYLLLPPP YYDDD.DDDDDDDD +.DDDDDDDD +DDDDD+D +BBBBB+B T NNNNC",
    "2": "2 NNNNN III.IIII RRR.RRRR EEEEEEE PPP.PPPP MMM.MMMM NN.NNNNNNNNRRRRRC",
}

_LETTERS = "ABCDEFGHJKLMNPQRSTUVWXYZ"  # no I and no O, which look like digits
_WORTH = bytes(48) + bytes(range(10)) + bytes(198)  # of each byte in a checksum
_WORTH = _WORTH[: ord("-")] + b"\x01" + _WORTH[ord("-") + 1 :]


@dataclass(frozen=True, kw_only=True, slots=True)
class Column:
    """One field of a line.

    Attributes:
        field: the attribute of ElementSet it ends in, if any.
        name: what people call it.
        first, last: columns, counted from 1.
        told: what may stand there.
    """

    field: str
    name: str
    first: int
    last: int
    pattern: re.Pattern[str]
    told: str

    def cut(self, line: str) -> str:
        """Return what stands in these columns."""
        return line[self.first - 1 : self.last]


def _column(field: str, name: str, first: int, last: int, shape: tuple[str, str]) -> Column:
    return Column(field=field, name=name, first=first, last=last, pattern=re.compile(shape[0]), told=shape[1])


def _blank(column: int) -> Column:
    return _column("", "separator", column, column, (" ", "blank"))


_NUMBER = (r" *[0-9]+|[A-HJ-NP-Z][0-9]{4}| {5}", "5 digits, or a letter other than I and O and 4 digits")
_YEAR_DAY = (r"[0-9]{2}[ 0-9]{2}[0-9]\.[0-9]+ *", "2 digits of the year, 3 of the day, a point and 8 digits")
_POWER = (r"[ +-][0-9]{5}[ +-][0-9]| {8}", "sign, 5 digits, sign, 1 digit")
_RATE = (r" *[+-]?[0-9]?\.[0-9]+", "sign, point, 8 digits")
_ANGLE = (r" *[0-9]*\.[0-9]+", "degrees with a point and 4 digits behind it")
_MOTION = (r" *[0-9]*\.[0-9]+", "revolutions a day with a point and 8 digits behind it")
_WHOLE = (r" *[0-9]*", "digits, blanks before them")
_DIGIT = ("[0-9]", "a digit")

LINE_1 = (
    _column("", "line number", 1, 1, ("1", "1")),
    _blank(2),
    _column("number", "catalogue number", 3, 7, _NUMBER),
    _column("", "classification", 8, 8, ("[A-Z ]", "a capital letter")),
    _blank(9),
    _column("designator", "international designator", 10, 17, (r"[ -~]{8}", "plain letters and digits")),
    _blank(18),
    _column("epoch", "epoch", 19, 32, _YEAR_DAY),
    _blank(33),
    _column("mean_motion_dot_rev_day2", "first derivative of the mean motion", 34, 43, _RATE),
    _blank(44),
    _column("mean_motion_ddot_rev_day3", "second derivative of the mean motion", 45, 52, _POWER),
    _blank(53),
    _column("bstar_per_earth_radius", "drag term", 54, 61, _POWER),
    _blank(62),
    _column(
        "", "ephemeris type", 63, 63, ("[ 02]", "0; other types, such as 4 for SGP4-XP, are not for SGP4")
    ),
    _blank(64),
    _column("element_number", "element set number", 65, 68, _WHOLE),
    _column("", "checksum", 69, 69, _DIGIT),
)
LINE_2 = (
    _column("", "line number", 1, 1, ("2", "2")),
    _blank(2),
    _column("number", "catalogue number", 3, 7, _NUMBER),
    _blank(8),
    _column("inclination_deg", "inclination", 9, 16, _ANGLE),
    _blank(17),
    _column("node_deg", "right ascension of the node", 18, 25, _ANGLE),
    _blank(26),
    _column("eccentricity", "eccentricity", 27, 33, (r" *[0-9]+", "7 digits, the point left out")),
    _blank(34),
    _column("argument_of_perigee_deg", "argument of perigee", 35, 42, _ANGLE),
    _blank(43),
    _column("mean_anomaly_deg", "mean anomaly", 44, 51, _ANGLE),
    _blank(52),
    _column("mean_motion_rev_day", "mean motion", 53, 63, _MOTION),
    _column("revolution", "revolution number", 64, 68, _WHOLE),
    _column("", "checksum", 69, 69, _DIGIT),
)


def checksum(line: str) -> int:
    """Return the last digit of columns 1 to 68: digits count themselves, a minus 1, all else 0."""
    return sum(line[: LENGTH - 1].encode("latin-1", "replace").translate(_WORTH)) % 10


def full_year(two_digits: int) -> int:
    """Return the year of its last two digits."""
    return two_digits + (1900 if two_digits >= OLDEST_YEAR % 100 else 2000)


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
        raise ValueError(f"catalogue number {whole} has no place in a TLE, which ends at {LARGEST_NUMBER}")
    if whole < 100_000:
        return f"{whole:05d}"
    return f"{_LETTERS[whole // 10_000 - 10]}{whole % 10_000:04d}"

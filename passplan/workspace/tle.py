"""Two-line element sets, with or without a name line, from text to `ElementSet`."""

import re
from collections.abc import Iterable
from datetime import UTC, datetime, timedelta

from passplan.domain.checked import text_fault
from passplan.domain.elements import ElementSet
from passplan.domain.errors import FieldError, Mistake
from passplan.workspace.page import Page, Reading
from passplan.workspace.tle_columns import LENGTH, LINE_1, LINE_2, TEMPLATES, Column, checksum, number_of

AGAIN = "fetch the set again; a TLE is strict about columns and must not be edited by hand"

_ELEMENT_LINE = re.compile(r"[12] (?:[ 0-9A-Z][ 0-9]{3}[ 0-9].{20}|.{58})")
_DESIGNATOR = re.compile(r"([0-9]{2})([0-9]{3}[A-Z]{1,3})")
_DAY_MICROSECONDS = 86_400_000_000
_OLDEST_YEAR = 57  # 57 to 99 are 1957 to 1999, 00 to 56 are 2000 to 2056 (common practice)


def read_tle(page: Page) -> Reading:
    """Return the sets of a page of two- or three-line element sets, and every slip in it."""
    reading = Reading()
    name: tuple[int, str] | None = None
    first: tuple[int, str] | None = None
    for number, raw in enumerate(page.lines, start=1):
        line = raw.strip()
        if not line or line.startswith("#"):
            continue
        if not is_element_line(line):
            reading.mistakes.extend(_left_over(page, name, first))
            name, first = (number, line), None
        elif line[0] == "1":
            reading.mistakes.extend(_left_over(page, None, first))
            first = (number, line)
        else:
            _read_pair(page, name, first, (number, line), reading)
            name, first = None, None
    reading.mistakes.extend(_left_over(page, name, first))
    return reading


def is_element_line(line: str) -> bool:
    """Return whether a stripped line is meant as the first or the second line of a set."""
    return _ELEMENT_LINE.match(line) is not None


def _left_over(page: Page, name: tuple[int, str] | None, first: tuple[int, str] | None) -> Iterable[Mistake]:
    """Yield the slip of a line 1 with no line 2 behind it, or else of a name with no lines behind it."""
    if first is not None:
        told = f"there is no line 2 after this line 1; {AGAIN}"
        yield page.slip(line=first[0], text=first[1][:24], allowed=told)
    elif name is not None:
        told = f"neither an element line nor a name with element lines after it; {AGAIN}"
        yield page.slip(line=name[0], text=name[1][:60], allowed=told, column=1)


def _read_pair(
    page: Page, name: tuple[int, str] | None, first: tuple[int, str] | None, second: tuple[int, str], reading: Reading
) -> None:
    """Add the set of two lines to `reading`, or their slips."""
    if first is None:
        told = f"there is no line 1 before this line 2; {AGAIN}"
        reading.mistakes.append(page.slip(line=second[0], text=second[1][:24], allowed=told))
        return
    slips = [slip for number, line in (first, second) if (slip := _line_slip(page, number, line))]
    if not slips:
        made = _made(page, name, first, second)
        if isinstance(made, ElementSet):
            reading.sets.append(made)
            return
        slips = made
    reading.mistakes.extend(slips)


def _line_slip(page: Page, number: int, line: str) -> Mistake | None:
    """Return the first slip in the columns of a line, or of its checksum."""
    columns = LINE_1 if line[0] == "1" else LINE_2
    wrong = next((column for column in columns if not column.pattern.fullmatch(column.cut(line))), None)
    length = len(line)
    if length < LENGTH or (length > LENGTH and line[LENGTH] != " "):
        place = min(wrong.first if wrong else LENGTH, length)
        told = f"the line has {length} characters and needs {LENGTH}; {AGAIN}"
        return page.slip(line=number, text=line, allowed=told, column=place, template=TEMPLATES[line[0]])
    if wrong is not None:
        return column_slip(page, number, line, wrong, f"must be {wrong.told}")
    expected = checksum(line)
    if int(line[LENGTH - 1]) != expected:
        told = f"the checksum in column 69 does not fit the line, which sums to {expected}; {AGAIN}"
        return page.slip(line=number, text=line[LENGTH - 1], allowed=told, column=LENGTH)
    return None


def column_slip(page: Page, number: int, line: str, column: Column, told: str) -> Mistake:
    """Return the slip of one field, the template above the line and carets under the field."""
    where = f"columns {column.first} to {column.last}" if column.last > column.first else f"column {column.first}"
    label = column.field.partition("_deg")[0].partition("_rev")[0].partition("_per")[0].replace("_", " ")
    return page.slip(
        line=number,
        text=column.cut(line),
        allowed=f"{where} ({label}) {told}; {AGAIN}",
        column=column.first,
        width=column.last - column.first + 1,
        template=TEMPLATES[line[0]],
    )


def _made(
    page: Page, name: tuple[int, str] | None, first: tuple[int, str], second: tuple[int, str]
) -> ElementSet | list[Mistake]:
    """Return the element set of two lines whose columns are in order, or what is wrong with its values."""
    one, two = first[1], second[1]
    number = number_of(one[2:7])
    try:
        return ElementSet(
            name=name[1].removeprefix("0 ").strip() if name else "",
            number=number,
            designator=full_designator(one[9:17].strip()),
            epoch=_epoch(one[18:32]),
            inclination_deg=float(two[8:16]),
            node_deg=float(two[17:25]),
            eccentricity=float("0." + two[26:33].replace(" ", "0")),
            argument_of_perigee_deg=float(two[34:42]),
            mean_anomaly_deg=float(two[43:51]),
            mean_motion_rev_day=float(two[52:63]),
            bstar_per_earth_radius=_power(one[53:61]),
            mean_motion_dot_rev_day2=float(one[33:43]),
            mean_motion_ddot_rev_day3=_power(one[44:52]),
            element_number=int(one[64:68].strip() or "0"),
            revolution=int(two[63:68].strip() or "0"),
            source=f"{page.source}, line {first[0]}",
            kind="TLE",
        )
    except FieldError as error:
        return [_field_slip(page, first, second, field, allowed) for field, _, allowed in error.faults]


def _field_slip(page: Page, first: tuple[int, str], second: tuple[int, str], field: str, allowed: str) -> Mistake:
    """Return the slip of a value outside its range, in the line that holds it."""
    for (number, line), columns in ((first, LINE_1), (second, LINE_2)):
        for column in columns:
            if column.field == field:
                return column_slip(page, number, line, column, allowed)
    raise KeyError(field)


def _epoch(field: str) -> datetime:
    """Return the moment of a year and a day of the year with its fraction, exact to a microsecond."""
    year = int(field[:2])
    day, _, fraction = field[2:].strip().partition(".")
    january = datetime(year + (1900 if year >= _OLDEST_YEAR else 2000), 1, 1, tzinfo=UTC)
    microseconds = round(int(fraction) * _DAY_MICROSECONDS / 10 ** len(fraction))
    return january + timedelta(days=int(day) - 1, microseconds=microseconds)


def _power(field: str) -> float:
    """Return the value of a field with the point left out and a power of ten at its end."""
    if not field.strip():
        return 0.0
    power = field[6:].replace(" ", "+")
    return float(f"{field[0].strip()}.{field[1:6]}e{power}")


def full_designator(text: str) -> str:
    """Return "98067A" as "1998-067A", so that a TLE and an OMM of one object agree; else as written."""
    match = _DESIGNATOR.fullmatch(text)
    if match is None:
        return text
    century = 19 if int(match[1]) >= _OLDEST_YEAR else 20
    return f"{century}{match[1]}-{match[2]}"

"""Two-line element sets, with or without a name line, from text to `ElementSet`."""

import re
from datetime import UTC, datetime, timedelta
from typing import NamedTuple

from passplan.domain.checked import text_fault
from passplan.domain.elements import ElementSet
from passplan.domain.errors import FieldError, Mistake
from passplan.workspace.epochs import day_of_year
from passplan.workspace.page import Page, Reading
from passplan.workspace.tle_columns import (
    LENGTH,
    LINE_1,
    LINE_2,
    TEMPLATES,
    Column,
    checksum,
    full_year,
    number_of,
)

AGAIN = "fetch the set again, as a TLE is strict about columns and cannot be mended by hand"

_ELEMENT_LINE = re.compile(r"[12] (?:[ 0-9A-Z][ 0-9]{3}[ 0-9].{20}|.{58})")
_DESIGNATOR = re.compile(r"([0-9]{2})([0-9]{3}[A-Z]{1,3})")
_DAY_MICROSECONDS = 86_400_000_000
_NO_EPOCH = datetime(2000, 1, 1, tzinfo=UTC)  # stands in while the other values are looked at


class Line(NamedTuple):
    """A line with nothing around it, and its number in the file."""

    number: int
    text: str


class Group(NamedTuple):
    """The lines of one set."""

    name: Line | None
    first: Line
    second: Line


def is_element_line(text: str) -> bool:
    """Return whether a line is meant as the first or the second line of a set."""
    return _ELEMENT_LINE.match(text) is not None


def read_tle(page: Page) -> Reading:
    """Return the sets of a page of two- or three-line element sets, and every slip in it.

    Blank lines and lines that begin with "#" are passed over, blanks around a line
    are taken off, and whatever stands behind column 70 is left alone.
    """
    reading = Reading()
    name: Line | None = None
    first: Line | None = None
    for number, raw in enumerate(page.lines, start=1):
        line = Line(number, raw.strip())
        if not line.text or line.text.startswith("#"):
            continue
        if reading.hopeless:
            break
        kind = line.text[0] if is_element_line(line.text) else "name"
        if kind == "2" and first is not None:
            _add_group(page, Group(name, first, line), reading)
            name, first = None, None
        elif kind == "2":
            told = f"this line 2 has no line 1 before it; {AGAIN}"
            reading.mistakes.append(page.slip(line=number, text=line.text, allowed=told))
            name = None
        else:
            _tell_unpaired(page, None if kind == "1" else name, first, reading)
            name, first = (name, line) if kind == "1" else (line, None)
    _tell_unpaired(page, name, first, reading)
    return reading


def _tell_unpaired(page: Page, name: Line | None, first: Line | None, reading: Reading) -> None:
    """Add the slip of a line 1 with no line 2 behind it, else of a name with no lines behind it."""
    if first is not None:
        told = f"this line 1 has no line 2 behind it; {AGAIN}"
        reading.mistakes.append(page.slip(line=first.number, text=first.text, allowed=told))
    elif name is not None:
        told = f"neither an element line nor a name with its element lines behind it; {AGAIN}"
        reading.mistakes.append(page.slip(line=name.number, text=name.text, allowed=told))


def _add_group(page: Page, group: Group, reading: Reading) -> None:
    """Add the set of its lines to `reading`, or their slips."""
    slips = [slip for line in (group.first, group.second) if (slip := _line_slip(page, line))]
    made = slips or _made(page, group)
    if isinstance(made, ElementSet):
        reading.sets.append(made)
    else:
        reading.mistakes.extend(made)


def _line_slip(page: Page, line: Line) -> Mistake | None:
    """Return the first slip in the columns of a line, or that of its checksum."""
    text, kind = line.text, line.text[0]
    columns = LINE_1 if kind == "1" else LINE_2
    wrong = next((column for column in columns if not column.pattern.fullmatch(column.cut(text))), None)
    length = len(text)
    if length < LENGTH or (length > LENGTH and text[LENGTH] != " "):
        place = min(wrong.first if wrong else LENGTH, length)
        told = f"the line has {length} characters and needs {LENGTH}; {AGAIN}"
        return page.slip(line=line.number, text=text, allowed=told, column=place, template=TEMPLATES[kind])
    if wrong is not None:
        return _column_slip(page, line, wrong, f"must be {wrong.told}")
    expected = checksum(text)
    if int(text[LENGTH - 1]) != expected:
        told = f"the checksum in column {LENGTH} must be {expected}, so a character was changed; {AGAIN}"
        return page.slip(line=line.number, text=text[LENGTH - 1], allowed=told, column=LENGTH)
    return None


def _column_slip(page: Page, line: Line, column: Column, told: str) -> Mistake:
    """Return the slip of one field, with the template above the line and carets under the field."""
    where = (
        f"columns {column.first} to {column.last}" if column.last > column.first else f"column {column.first}"
    )
    return page.slip(
        line=line.number,
        text=column.cut(line.text),
        allowed=f"{where}, {column.name}: {told}; {AGAIN}",
        column=column.first,
        width=column.last - column.first + 1,
        template=TEMPLATES[line.text[0]],
    )


def _made(page: Page, group: Group) -> ElementSet | list[Mistake]:
    """Return the element set of lines whose columns are in order, or what is wrong with its values."""
    one, two = group.first.text, group.second.text
    name = group.name.text.removeprefix("0 ").strip() if group.name else ""
    faults = text_fault("name", name) if name else []
    if number_of(one[2:7]) != number_of(two[2:7]):
        told = f"must be {one[2:7]} as in the line before, or else these are lines of two sets"
        faults.append(("number", two[2:7], told))
    epoch = _epoch(one[18:32])
    if epoch is None:
        faults.append(("epoch", one[18:32], "must be a day of its year"))
    try:
        made = ElementSet(
            name=name,
            number=number_of(one[2:7]),
            designator=full_designator(one[9:17].strip()),
            epoch=epoch or _NO_EPOCH,
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
            source=f"{page.source}, line {group.first.number}",
            kind="TLE",
        )
    except FieldError as error:
        faults.extend(error.faults)
    else:
        if not faults:
            return made
    return [_value_slip(page, group, field, told) for field, _, told in faults]


def _value_slip(page: Page, group: Group, field: str, told: str) -> Mistake:
    """Return the slip of a value that cannot be, in the line that holds it."""
    if field == "name" and group.name is not None:
        line = group.name
        return page.slip(line=line.number, text=line.text, allowed=f"the name of the object: {told}")
    rows = ((group.second, LINE_2), (group.first, LINE_1))  # a number that differs is shown in line 2
    places = ((line, column) for line, columns in rows for column in columns if column.field == field)
    return _column_slip(page, *next(places), told)


def _epoch(field: str) -> datetime | None:
    """Return the moment of a year, a day and its fraction, to a microsecond; None if it has no such day."""
    day, _, fraction = field[2:].strip().partition(".")
    microseconds = round(int(fraction) * _DAY_MICROSECONDS / 10 ** len(fraction))
    try:
        return day_of_year(full_year(int(field[:2])), int(day)) + timedelta(microseconds=microseconds)
    except ValueError:
        return None


def _power(field: str) -> float:
    """Return the value of a field with the point left out and a power of ten at its end."""
    if not field.strip():
        return 0.0
    power = field[6:].replace(" ", "+")
    return float(f"{field[0].strip()}.{field[1:6]}e{power}")


def full_designator(text: str) -> str:
    """Return "98067A" as "1998-067A", so that a TLE and an OMM of one object agree; else as written."""
    match = _DESIGNATOR.fullmatch(text)
    return f"{full_year(int(match[1]))}-{match[2]}" if match else text

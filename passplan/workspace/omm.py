"""One orbit mean-elements message (OMM), whatever form it came in, to `ElementSet`.

CCSDS 502.0-B-3 (April 2023), tables 4-1 to 4-3. The four forms differ in syntax only;
each reader hands over a `Record`, and what the keywords mean is decided here.
"""

import math
import re
from collections.abc import Iterable
from dataclasses import dataclass
from datetime import UTC, datetime
from typing import NamedTuple

from passplan.domain.checked import text_fault
from passplan.domain.elements import ElementSet
from passplan.domain.errors import FieldError, Mistake
from passplan.workspace.epochs import read_epoch
from passplan.workspace.page import Page, Reading

NEEDED = (
    "EPOCH",
    "MEAN_MOTION",
    "ECCENTRICITY",
    "INCLINATION",
    "RA_OF_ASC_NODE",
    "ARG_OF_PERICENTER",
    "MEAN_ANOMALY",
    "BSTAR",
)
KINDS = {  # what SGP4 is made for; keyword to (values that are accepted, as people are told)
    "CENTER_NAME": (("EARTH",), "EARTH"),
    "REF_FRAME": (("TEME",), "TEME"),
    "TIME_SYSTEM": (("UTC",), "UTC"),
    "MEAN_ELEMENT_THEORY": (("SGP4", "SGP/SGP4"), "SGP4 or SGP/SGP4"),
    "EPHEMERIS_TYPE": (("0", "2"), "0 or 2"),  # 3 is PPT3, 4 is SGP4-XP, 6 special perturbations
}
_METADATA = ("CENTER_NAME", "REF_FRAME", "TIME_SYSTEM", "MEAN_ELEMENT_THEORY")
_UNITS = {
    "MEAN_MOTION": "rev/day",
    "INCLINATION": "deg",
    "RA_OF_ASC_NODE": "deg",
    "ARG_OF_PERICENTER": "deg",
    "MEAN_ANOMALY": "deg",
    "BSTAR": "1/ER",
    "MEAN_MOTION_DOT": "rev/day**2",
    "MEAN_MOTION_DDOT": "rev/day**3",
}
_FIELDS = {  # attribute of ElementSet to its keyword
    "name": "OBJECT_NAME",
    "number": "NORAD_CAT_ID",
    "designator": "OBJECT_ID",
    "epoch": "EPOCH",
    "mean_motion_rev_day": "MEAN_MOTION",
    "eccentricity": "ECCENTRICITY",
    "inclination_deg": "INCLINATION",
    "node_deg": "RA_OF_ASC_NODE",
    "argument_of_perigee_deg": "ARG_OF_PERICENTER",
    "mean_anomaly_deg": "MEAN_ANOMALY",
    "bstar_per_earth_radius": "BSTAR",
    "mean_motion_dot_rev_day2": "MEAN_MOTION_DOT",
    "mean_motion_ddot_rev_day3": "MEAN_MOTION_DDOT",
    "element_number": "ELEMENT_SET_NO",
    "revolution": "REV_AT_EPOCH",
}
KEYWORDS = frozenset((*_FIELDS.values(), *KINDS, "SEMI_MAJOR_AXIS"))

_NUMBER = re.compile(r"[+-]?(?:[0-9]+\.?[0-9]*|\.[0-9]+)(?:[eE][+-]?[0-9]+)?")
_WHOLE = re.compile(r"\+?[0-9]+")
_MOST_NUMBER = 60  # characters of a number
_MOST_COUNT = 999_999_999


class Value(NamedTuple):
    """A value as written, and where; line 0 where the form has no lines, column 0 where it is not known."""

    text: str
    line: int = 0
    column: int = 0
    unit: str = ""


@dataclass(frozen=True, kw_only=True, slots=True)
class Record:
    """One message as text.

    Attributes:
        place: where it begins, for people: "line 12", "item 3".
        kind: "OMM KVN", "OMM XML", "OMM JSON" or "OMM CSV".
        line: the line it begins in, 0 where the form has none.
        values: value of each keyword of KEYWORDS that is there and not blank.
    """

    place: str
    kind: str
    line: int
    values: dict[str, Value]

    @property
    def self_contained(self) -> bool:
        """True for the forms the standard describes, which must carry their metadata.

        Feeds in JSON and CSV leave out what is the same in all of their records.
        """
        return self.kind in ("OMM KVN", "OMM XML")


def add_record(page: Page, record: Record, reading: Reading) -> None:
    """Add the element set of a record to `reading`, or everything that is wrong with it."""
    slips = [*_kind_slips(page, record), *_missing_slips(page, record)]
    if not slips:
        made = _made(page, record)
        if isinstance(made, ElementSet):
            reading.sets.append(made)
            return
        slips = made
    reading.mistakes.extend(slips)


def record_slip(page: Page, record: Record, keyword: str, told: str) -> Mistake:
    """Return what is wrong with one value, with its line where there is one."""
    value = record.values.get(keyword, Value("", record.line))
    if not value.line:
        return Mistake(page.source, f"{record.place}.{keyword}", value.text[:_MOST_NUMBER], told)
    here = page.lines[value.line - 1].startswith(value.text, value.column - 1) if value.column else False
    return page.slip(
        line=value.line,
        text=value.text,
        allowed=f"{keyword}: {told}",
        column=value.column if here else 0,
        width=len(value.text),
    )


def repeated(page: Page, record: Record, keyword: str, again: Value) -> Mistake:
    """Return the slip of a keyword that stands twice in one record."""
    twice = Record(place=record.place, kind=record.kind, line=record.line, values={keyword: again})
    return record_slip(page, twice, keyword, "is there twice in one message; leave one")


def catalogue_number(text: str) -> int:
    """Return a catalogue number of up to nine digits.

    Raises:
        ValueError: it is not one.
    """
    if len(text) > _MOST_NUMBER or not _WHOLE.fullmatch(text) or int(text) > _MOST_COUNT:
        raise ValueError("must be a whole number of up to 9 digits")
    return int(text)


def _kind_slips(page: Page, record: Record) -> Iterable[Mistake]:
    """Yield a slip for each sign that the elements are not for SGP4."""
    for keyword, (allowed, told) in KINDS.items():
        if keyword not in record.values:
            if record.self_contained and keyword in _METADATA:
                yield record_slip(page, record, keyword, f"is missing; it must be {told}")
        elif record.values[keyword].text.upper().lstrip("+") not in allowed:
            yield record_slip(
                page, record, keyword, f"must be {told}: only elements for SGP4 can be flown here"
            )


def _missing_slips(page: Page, record: Record) -> Iterable[Mistake]:
    """Yield a slip for each needed keyword that is not there."""
    for keyword in NEEDED:
        if keyword in record.values:
            continue
        if keyword == "MEAN_MOTION" and "SEMI_MAJOR_AXIS" in record.values:
            told = (
                "cannot stand in for MEAN_MOTION: SGP4 takes Kozai's mean motion, which is not that of "
                "an orbit of this size; ask for elements with MEAN_MOTION"
            )
            yield record_slip(page, record, "SEMI_MAJOR_AXIS", told)
        else:
            yield record_slip(page, record, keyword, "is missing, and SGP4 needs it; fetch the set again")


def _made(page: Page, record: Record) -> ElementSet | list[Mistake]:
    """Return the element set of a record in which everything needed is there, or its slips."""
    reader = _Values(page, record)
    fields: dict[str, float] = {
        field: reader.number(keyword) for field, keyword in _FIELDS.items() if keyword in _UNITS
    }
    name, designator = reader.title("OBJECT_NAME"), reader.title("OBJECT_ID")
    number, element_number, revolution = map(reader.whole, ("NORAD_CAT_ID", "ELEMENT_SET_NO", "REV_AT_EPOCH"))
    epoch, eccentricity = reader.epoch(), reader.number("ECCENTRICITY")
    if reader.slips:
        return reader.slips
    try:
        return ElementSet(
            name=name,
            number=number or None,
            designator=designator,
            epoch=epoch,
            eccentricity=eccentricity,
            element_number=element_number,
            revolution=revolution,
            source=f"{page.source}, {record.place}",
            kind=record.kind,
            **fields,
        )
    except FieldError as error:
        return [record_slip(page, record, _FIELDS[field], told) for field, _, told in error.faults]


class _Values:
    """Reads values of one record and keeps the slips."""

    def __init__(self, page: Page, record: Record) -> None:
        self.page = page
        self.record = record
        self.slips: list[Mistake] = []

    def number(self, keyword: str) -> float:
        """Return a decimal number, 0 when it is not there."""
        value = self.record.values.get(keyword)
        if value is None:
            return 0.0
        text, unit = _split_unit(value)
        expected = _UNITS.get(keyword, "")
        if unit and unit.replace(" ", "").lower() != expected.lower():
            self._tell(keyword, f"must be in {expected or 'no unit'}, not in {unit[:20]!r}")
        elif len(text) > _MOST_NUMBER or not _NUMBER.fullmatch(text):
            self._tell(keyword, "must be a decimal number, such as 15.04 or 0.15E-3")
        elif not math.isfinite(float(text)):
            self._tell(keyword, "must be a finite number")
        else:
            return float(text)
        return 0.0

    def whole(self, keyword: str) -> int:
        """Return a whole number of up to nine digits, 0 when it is not there."""
        value = self.record.values.get(keyword)
        try:
            return catalogue_number(value.text) if value else 0
        except ValueError as error:
            self._tell(keyword, str(error))
            return 0

    def title(self, keyword: str) -> str:
        """Return a name on one line, "" when it is not there."""
        value = self.record.values.get(keyword)
        if value is None:
            return ""
        for _, _, told in text_fault(keyword, value.text):
            self._tell(keyword, told)
        return value.text

    def epoch(self) -> datetime:
        """Return the epoch."""
        try:
            return read_epoch(self.record.values["EPOCH"].text)
        except ValueError as error:
            self._tell("EPOCH", str(error))
            return datetime(2000, 1, 1, tzinfo=UTC)

    def _tell(self, keyword: str, told: str) -> None:
        self.slips.append(record_slip(self.page, self.record, keyword, told))


def _split_unit(value: Value) -> tuple[str, str]:
    """Return a number and the unit behind it, "" when there is none: "51.6 [deg]"."""
    if not value.text.endswith("]"):
        return value.text, value.unit
    number, _, unit = value.text[:-1].rpartition("[")
    return number.rstrip(), unit.strip()

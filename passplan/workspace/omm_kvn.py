"""OMM as keyword = value lines (KVN), both ways. CCSDS 502.0-B-3, section 7."""

import re
from collections.abc import Iterator

from passplan.domain.elements import ElementSet
from passplan.domain.errors import Mistake
from passplan.domain.moments import iso
from passplan.workspace.omm import KEYWORDS, Record, Value, add_record, repeated
from passplan.workspace.page import Page, Reading

_FIRST = "CCSDS_OMM_VERS"
_OTHER_MESSAGE = re.compile(r"CCSDS_[A-Z]+_VERS")


def read_kvn(page: Page) -> Reading:
    """Return the sets of one or more messages in a page, and every slip in it.

    Keywords may come in any order; a message begins at CCSDS_OMM_VERS. Comments and
    keywords that SGP4 does not need are passed over.
    """
    reading = Reading()
    for record in _records(page, reading):
        if reading.hopeless:
            break
        add_record(page, record, reading)
    return reading


def _records(page: Page, reading: Reading) -> Iterator[Record]:
    """Yield each message as text; lines that are none of its own go to the slips of `reading`."""
    record: Record | None = None
    for number, line in enumerate(page.lines, start=1):
        keyword = line.partition("=")[0].strip()
        if not keyword or keyword.split()[0] == "COMMENT":
            continue
        if keyword == _FIRST or record is None:
            if record is not None:
                yield record
            record = Record(place=f"line {number}", kind="OMM KVN", line=number, values={})
        slip = _line_slip(page, record, number, keyword)
        if slip is not None:
            reading.mistakes.append(slip)
    if record is not None:
        yield record


def _line_slip(page: Page, record: Record, number: int, keyword: str) -> Mistake | None:
    """Put the value of a line into its record; return what is wrong with the line, if anything."""
    line = page.lines[number - 1]
    _, equals, behind = line.partition("=")
    text = behind.strip()
    if not equals:
        told = "must be KEYWORD = VALUE, or begin with COMMENT"
        return page.slip(line=number, text=keyword, allowed=told)
    if keyword != _FIRST and _OTHER_MESSAGE.fullmatch(keyword):
        told = f"another kind of message; elements for SGP4 come in an OMM, which begins with {_FIRST}"
        return page.slip(line=number, text=keyword, allowed=told)
    if keyword in KEYWORDS and text:
        value = Value(text, number, line.index(text, line.index("=")) + 1)
        if keyword in record.values:
            return repeated(page, record, keyword, value)
        record.values[keyword] = value
    return None


def to_omm_kvn(element_set: ElementSet) -> str:
    """Return the set as an OMM in KVN, every digit kept, so that reading it gives the same set.

    CREATION_DATE is left blank, as nothing here knows the time; public feeds do the same.
    """
    rows = (
        (_FIRST, "3.0"),
        ("CREATION_DATE", ""),
        ("ORIGINATOR", "PASSPLAN"),
        ("OBJECT_NAME", element_set.name),
        ("OBJECT_ID", element_set.designator),
        ("CENTER_NAME", "EARTH"),
        ("REF_FRAME", "TEME"),
        ("TIME_SYSTEM", "UTC"),
        ("MEAN_ELEMENT_THEORY", "SGP4"),
        ("EPOCH", iso(element_set.epoch).removesuffix("Z")),
        ("MEAN_MOTION", _plain(element_set.mean_motion_rev_day)),
        ("ECCENTRICITY", _plain(element_set.eccentricity)),
        ("INCLINATION", _plain(element_set.inclination_deg)),
        ("RA_OF_ASC_NODE", _plain(element_set.node_deg)),
        ("ARG_OF_PERICENTER", _plain(element_set.argument_of_perigee_deg)),
        ("MEAN_ANOMALY", _plain(element_set.mean_anomaly_deg)),
        ("EPHEMERIS_TYPE", "0"),
        ("CLASSIFICATION_TYPE", "U"),
        ("NORAD_CAT_ID", str(element_set.number or 0)),
        ("ELEMENT_SET_NO", str(element_set.element_number)),
        ("REV_AT_EPOCH", str(element_set.revolution)),
        ("BSTAR", _plain(element_set.bstar_per_earth_radius)),
        ("MEAN_MOTION_DOT", _plain(element_set.mean_motion_dot_rev_day2)),
        ("MEAN_MOTION_DDOT", _plain(element_set.mean_motion_ddot_rev_day3)),
    )
    return "".join(f"{keyword:<19} = {text}".rstrip() + "\n" for keyword, text in rows)


def _plain(value: float) -> str:
    """Return the shortest digits that read back as `value`, with the point that section 7.5 asks for."""
    digits, mark, power = repr(float(value)).partition("e")
    return (digits if "." in digits else f"{digits}.0") + mark.upper() + power

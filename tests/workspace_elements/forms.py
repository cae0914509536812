"""One set of OMM keywords in each of the forms, and the published set most tests start from."""

import csv
import io
import json
import re
from dataclasses import replace

from passplan.domain.elements import ElementSet

# CCSDS 502.0-B-3 (April 2023), figure G-7: the keywords of its example, in the order of the figure.
FIGURE_G7 = {
    "CCSDS_OMM_VERS": "3.0",
    "CREATION_DATE": "2020-065T16:00:00",
    "ORIGINATOR": "NOAA",
    "OBJECT_NAME": "GOES 9",
    "OBJECT_ID": "1995-025A",
    "CENTER_NAME": "EARTH",
    "REF_FRAME": "TEME",
    "TIME_SYSTEM": "UTC",
    "MEAN_ELEMENT_THEORY": "SGP/SGP4",
    "EPOCH": "2020-064T10:34:41.4264",
    "MEAN_MOTION": "1.00273272",
    "ECCENTRICITY": "0.0005013",
    "INCLINATION": "3.0539",
    "RA_OF_ASC_NODE": "81.7939",
    "ARG_OF_PERICENTER": "249.2363",
    "MEAN_ANOMALY": "150.1602",
    "GM": "398600.8",
    "EPHEMERIS_TYPE": "0",
    "CLASSIFICATION_TYPE": "U",
    "NORAD_CAT_ID": "23581",
    "ELEMENT_SET_NO": "0925",
    "REV_AT_EPOCH": "4316",
    "BSTAR": "0.0001",
    "MEAN_MOTION_DOT": "-0.00000113",
    "MEAN_MOTION_DDOT": "0.0",
}
# The same set with the epoch of issue 2 (2009) of the standard, as a TLE; from a public unit test.
GOES_TLE = """GOES 9
1 23581U 95025A   07064.44075725 -.00000113  00000-0  10000-3 0  9250
2 23581   3.0539  81.7939 0005013 249.2363 150.1602  1.00273272 43169
"""
# A low orbit; the set of the pass example in Skyfield's documentation (earth-satellites.rst).
LOW_1 = "1 25544U 98067A   14020.93268519  .00009878  00000-0  18200-3 0  5082"
LOW_2 = "2 25544  51.6498 109.4756 0003572  55.9686 274.8005 15.49815350868473"

_HEADER = ("CCSDS_OMM_VERS", "CREATION_DATE", "ORIGINATOR")
_METADATA = ("OBJECT_NAME", "OBJECT_ID", "CENTER_NAME", "REF_FRAME", "TIME_SYSTEM", "MEAN_ELEMENT_THEORY")
_ELEMENTS = (
    "EPOCH",
    "SEMI_MAJOR_AXIS",
    "MEAN_MOTION",
    "ECCENTRICITY",
    "INCLINATION",
    "RA_OF_ASC_NODE",
    "ARG_OF_PERICENTER",
    "MEAN_ANOMALY",
    "GM",
)


def kvn(fields: dict[str, str]) -> str:
    """Return keyword = value lines."""
    return "".join(f"{keyword} = {value}\n" for keyword, value in fields.items())


def xml(*messages: dict[str, str], wrapped: bool = True) -> str:
    """Return <omm> elements as CCSDS 505.0-B-3 nests them, in an <ndm> or not."""
    body = "\n".join(_omm(fields) for fields in messages)
    root = f"<ndm>\n{body}\n</ndm>" if wrapped else body
    return f'<?xml version="1.0" encoding="UTF-8"?>\n{root}\n'


def _omm(fields: dict[str, str]) -> str:
    rest = [keyword for keyword in fields if keyword not in (*_HEADER, *_METADATA, *_ELEMENTS)]
    return (
        f'<omm id="CCSDS_OMM_VERS" version="3.0"><header>{_tags(fields, _HEADER[1:])}</header>\n'
        f"<body><segment><metadata>{_tags(fields, _METADATA)}</metadata>\n"
        f"<data><meanElements>{_tags(fields, _ELEMENTS)}\n"
        f"</meanElements><tleParameters>{_tags(fields, rest)}\n</tleParameters></data></segment></body></omm>"
    )


def _tags(fields: dict[str, str], keywords: tuple[str, ...] | list[str]) -> str:
    return "".join(f"\n<{keyword}>{fields[keyword]}</{keyword}>" for keyword in keywords if keyword in fields)


def json_list(*messages: dict[str, str]) -> str:
    """Return a list of objects whose numbers are numbers, as feeds write them."""
    return json.dumps([{keyword: _number(value) for keyword, value in fields.items()} for fields in messages])


def _number(text: str) -> str | float | int:
    """Return a plain number as one, other texts as they are."""
    if not re.fullmatch(r"[+-]?[0-9]*\.?[0-9]+(?:[eE][+-]?[0-9]{1,2})?", text):
        return text
    return int(text) if text.isdigit() else float(text)


def csv_rows(*messages: dict[str, str]) -> str:
    """Return a row of keywords and a row for each message."""
    stream = io.StringIO()
    rows = csv.DictWriter(stream, fieldnames=list(messages[0]), lineterminator="\r\n")
    rows.writeheader()
    rows.writerows(messages)
    return stream.getvalue()


def bare(element_set: ElementSet) -> ElementSet:
    """Return the set without where it came from."""
    return replace(element_set, source="", kind="")


def summed(line: str) -> str:
    """Return an element line with the checksum its first 68 columns ask for, counted the slow way."""
    total = sum(int(char) if char.isdigit() else char == "-" for char in line[:68])
    return f"{line[:68]}{total % 10}{line[69:]}"

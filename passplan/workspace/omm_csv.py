"""OMM as CSV, as public feeds write it: a row of keywords, then a row for each object."""

import csv
from itertools import accumulate

from passplan.domain.errors import Mistake
from passplan.workspace.omm import KEYWORDS, NEEDED, Record, Value, add_record
from passplan.workspace.page import Page, Reading


def read_csv(page: Page) -> Reading:
    """Return the sets of a page of CSV, and every slip in it."""
    reading = Reading()
    rows = csv.reader((f"{line}\n" for line in page.lines), strict=True)
    header: list[str] = []
    try:
        for row in rows:
            if not any(cell.strip() for cell in row):
                continue
            if reading.hopeless:
                break
            if header:
                _add_row(page, header, row, rows.line_num, reading)
                continue
            header = [cell.strip().upper() for cell in row]
            reading.mistakes.extend(_header_slips(page, header, rows.line_num))
            if reading.mistakes:
                break
    except csv.Error as error:
        told = f"not CSV ({error}); the file was cut or changed, fetch it again"
        reading.mistakes.append(page.slip(line=min(rows.line_num, len(page.lines)), text="", allowed=told))
    return reading


def _header_slips(page: Page, header: list[str], line: int) -> list[Mistake]:
    """Return what is wrong with the row of keywords."""
    twice = sorted({name for name in header if name in KEYWORDS and header.count(name) > 1})
    slips = [
        page.slip(line=line, text=name, allowed="this column is there twice; leave one") for name in twice
    ]
    missing = [keyword for keyword in NEEDED if keyword not in header and keyword != "MEAN_MOTION"]
    if missing:
        told = f"no column {', '.join(missing)}, which SGP4 needs; fetch the sets again"
        slips.append(page.slip(line=line, text="", allowed=told))
    return slips


def _add_row(page: Page, header: list[str], row: list[str], line: int, reading: Reading) -> None:
    """Add the set of one row to `reading`, or its slips."""
    if len(row) != len(header):
        told = f"the row has {len(row)} values and the first row names {len(header)}; fetch the sets again"
        reading.mistakes.append(page.slip(line=line, text=page.lines[line - 1], allowed=told))
        return
    ends = accumulate(len(cell) + 1 for cell in row)
    values = {
        keyword: Value(cell.strip(), line, end - len(cell.lstrip()))
        for keyword, cell, end in zip(header, row, ends, strict=True)
        if keyword in KEYWORDS and cell.strip()
    }
    add_record(page, Record(place=f"line {line}", kind="OMM CSV", line=line, values=values), reading)

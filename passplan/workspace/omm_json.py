"""OMM as JSON, as public feeds write it: an object of keywords, or a list of them."""

import json
from typing import Any, NoReturn

from passplan.domain.errors import Mistake
from passplan.workspace.omm import KEYWORDS, Record, Value, add_record, repeated
from passplan.workspace.page import Page, Reading


class _Pairs(dict[str, Any]):
    """An object of the file; `twice` are the keywords that stand in it more than once."""

    def __init__(self, pairs: list[tuple[str, Any]]) -> None:
        super().__init__(pair for pair in pairs if pair[0] in KEYWORDS)
        self.twice = [] if len(self) == len(pairs) else _twice([key for key, _ in pairs if key in KEYWORDS])


def _twice(keywords: list[str]) -> list[str]:
    return sorted({keyword for keyword in keywords if keywords.count(keyword) > 1})


def read_json(page: Page) -> Reading:
    """Return the sets of a page of JSON, and every slip in it.

    Numbers are taken as the text they are written in, so none is rounded on the way.
    """
    reading = Reading()
    try:
        found = json.loads(
            page.text, object_pairs_hook=_Pairs, parse_float=str, parse_int=str, parse_constant=_refuse
        )
    except json.JSONDecodeError as error:
        told = f"not JSON ({error.msg.lower()}); the file was cut or changed, fetch it again"
        reading.mistakes.append(
            page.slip(line=error.lineno, text=page.lines[error.lineno - 1], allowed=told, column=error.colno)
        )
        return reading
    except (_ConstantError, RecursionError) as error:
        told = str(error) if isinstance(error, _ConstantError) else "lists and objects are nested too deeply"
        reading.mistakes.append(Mistake(page.source, "", "", f"{told}; fetch the set again"))
        return reading
    for number, item in enumerate(found if isinstance(found, list) else [found], start=1):
        if reading.hopeless:
            break
        _add_item(page, number, item, reading)
    return reading


class _ConstantError(Exception):
    """NaN or an infinity, which JSON does not have."""


def _refuse(constant: str) -> NoReturn:
    raise _ConstantError(f"{constant} is not a number")


def _add_item(page: Page, number: int, item: object, reading: Reading) -> None:
    """Add the set of one object to `reading`, or its slips."""
    place = f"item {number}"
    if not isinstance(item, _Pairs):
        told = 'must be an object of OMM keywords, such as {"EPOCH": ...}'
        reading.mistakes.append(Mistake(page.source, place, "", told))
        return
    record = Record(place=place, kind="OMM JSON", line=0, values={})
    slips = [repeated(page, record, keyword, Value(str(item[keyword]))) for keyword in item.twice]
    for keyword, value in item.items():
        if isinstance(value, str):
            if value.strip():
                record.values[keyword] = Value(value.strip())
        elif value is not None:
            slips.append(Mistake(page.source, f"{place}.{keyword}", "", "must be a text or a number"))
    if slips:
        reading.mistakes.extend(slips)
    else:
        add_record(page, record, reading)

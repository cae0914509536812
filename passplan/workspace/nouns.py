"""From a TOML table to a noun of the domain, or to every mistake in it, in plain words.

pydantic reads the nouns' own type hints in strict JSON form: TOML's dates become
ISO texts, lists may become tuples, and nothing is converted silently (no "12" for
12, no true for 1).
"""

import difflib
import json
import math
from dataclasses import is_dataclass
from datetime import date, datetime, time
from functools import cache
from typing import Any, TypeVar, get_args, get_origin

from pydantic import TypeAdapter, ValidationError

from passplan.domain.errors import FieldError, Mistake
from passplan.workspace.documents import MOST_TEXT, Document, Place
from passplan.workspace.wording import expected, hints_of

Noun = TypeVar("Noun")

_FIRST_YEAR, _LAST_YEAR = 1990, 2200  # outside, sums of dates could leave what Python can hold
_MOST_SHOWN = 60


def read_noun(
    noun: type[Noun], data: object, document: Document, at: Place
) -> tuple[Noun | None, list[Mistake]]:
    """Return the noun a table describes, or None and what is wrong with it.

    Args:
        noun: frozen dataclass to make.
        data: the table as tomllib gives it.
        document: where it stands, for mistakes.
        at: place of the table in its document.
    """
    faults = _text_faults(data)
    made: Noun | None = None
    try:
        made = _adapter(noun).validate_json(_json(data), strict=True)
    except ValidationError as error:
        faults = _merged(faults, _faults(noun, data, error))
    except RecursionError:
        return None, [Mistake(document.file, document.key(at), "", "nested too deeply")]
    mistakes = [
        Mistake(document.file, document.key(at + place), shown(value), told)
        for place, (value, told) in faults.items()
    ]
    return (None if mistakes else made), mistakes


def shown(value: object) -> str:
    """Return an offending value as it was written, near enough, and short."""
    if value is None or value == "":
        return ""
    if isinstance(value, bool):
        text = str(value).lower()
    elif isinstance(value, dict):
        text = "{" + ", ".join(map(str, value)) + "}"
    elif isinstance(value, datetime):
        text = value.isoformat().replace("+00:00", "Z")
    else:
        text = str(list(value) if isinstance(value, tuple) else value)
    return text if len(text) <= _MOST_SHOWN else text[: _MOST_SHOWN - 3] + "..."


def nearest(word: str, known: list[str]) -> str:
    """Return ', did you mean "..."?' for a word close to a known one, else an empty text."""
    close = difflib.get_close_matches(word, known, n=1, cutoff=0.6)
    return f'; did you mean "{close[0]}"?' if close else ""


Faults = dict[Place, tuple[object, str]]


@cache
def _adapter(noun: type[Noun]) -> TypeAdapter[Noun]:
    return TypeAdapter(noun)


def _json(data: object) -> str:
    """Return tables as JSON text; dates and times in ISO 8601 form, inf and nan kept to be refused."""
    return json.dumps(data, default=lambda value: value.isoformat())


def _merged(first: Faults, second: Faults) -> Faults:
    """Return both; where one place has two faults the first is told."""
    return {**second, **first}


def _text_faults(data: object, at: Place = ()) -> Faults:
    """Return texts and names of keys that would upset a terminal or a calendar, and impossible years."""
    match data:
        case dict():
            parts: list[tuple[str | int, Any]] = list(data.items())
            faults: Faults = {}
            for key in data:
                if told := _unfit(key):
                    faults[*at, key] = ("", f"the key itself: {told}")
        case list():
            parts, faults = list(enumerate(data)), {}
        case str() if data and (told := _unfit(data)):
            return {at: (data, told)}
        case date() if not _FIRST_YEAR <= data.year <= _LAST_YEAR:
            return {at: (data, f"a year from {_FIRST_YEAR} to {_LAST_YEAR}")}
        case _:
            return {}
    for key, value in parts:
        for place, fault in _text_faults(value, (*at, key)).items():
            faults.setdefault(place, fault)
    return faults


def _unfit(text: str) -> str:
    """Return why a text is refused, "" when it is one printable line."""
    if len(text) > MOST_TEXT:
        return f"at most {MOST_TEXT} characters"
    if not text.isprintable():
        return "one line of printable characters, no control characters"
    return ""


def _faults(noun: type, data: object, error: ValidationError) -> Faults:
    """Return pydantic's findings by place, each told once and in our words."""
    found: Faults = {}
    for item in error.errors(include_url=False):
        place, hint, owner = _walk(noun, data, item["loc"])
        cause = item.get("ctx", {}).get("error")
        if item["type"] == "value_error" and isinstance(cause, FieldError):
            for name, value, allowed in cause.faults:
                found.setdefault((*place, *_split(name)), (value, allowed))
        elif item["type"] == "missing":
            told = f"missing; expected {expected(hint, str(place[-1]))}"
            found.setdefault(place, ("", told))
        elif item["type"] == "unexpected_keyword_argument":
            known = list(hints_of(owner)) if owner else []
            told = "unknown key" + nearest(str(place[-1]), known)
            found.setdefault(place, ("", told or "unknown key"))
        else:
            key = next((part for part in reversed(place) if isinstance(part, str)), "")
            found.setdefault(place, (item["input"], "expected " + expected(hint, key)))
    return found


def _walk(noun: type, data: object, loc: Place) -> tuple[Place, Any, type | None]:
    """Return how far pydantic's `loc` leads in the data, the hint there and the noun around it.

    pydantic adds the names of a union's branches to the path; the data know none
    of them, so the walk ends where the data end.
    """
    place: Place = ()
    hint: Any = noun
    owner: type | None = None
    for part in loc:
        if not isinstance(data, dict | list):
            break
        owner, hint = _inside(hint, part)
        place = (*place, part)
        try:
            data = data[part]  # type: ignore[call-overload,index]
        except (KeyError, IndexError, TypeError):
            break
    return place, hint, owner


def _inside(hint: Any, part: str | int) -> tuple[type | None, Any]:
    """Return the noun that holds `part` (None for a list) and the hint of `part` in it."""
    if is_dataclass(hint) and isinstance(hint, type):
        return hint, hints_of(hint).get(str(part))
    args = get_args(hint)
    origin = get_origin(hint)
    if origin is tuple and isinstance(part, int):
        return None, args[0] if args[-1] is Ellipsis else args[min(part, len(args) - 1)]
    if origin is dict:
        return None, args[1]
    for option in args:  # an optional noun, or a hint with limits around a list
        if is_dataclass(option) or get_origin(option) in (tuple, dict):
            return _inside(option, part)
    return None, None


def _split(name: str) -> Place:
    """Return a field name of FieldError as a place: "mask[3]" is ("mask", 3)."""
    head, _, rest = name.partition("[")
    return (head, int(rest[:-1])) if rest.endswith("]") and rest[:-1].isdigit() else (name,)

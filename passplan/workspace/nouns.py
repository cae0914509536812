"""From a TOML table to a noun of the domain, or to every mistake in it, in plain words.

pydantic reads the nouns' own type hints in strict JSON form: TOML's dates become
ISO texts, lists may become tuples, and nothing is converted silently (no "12" for
12, no true for 1).
"""

import difflib
import json
from collections.abc import Iterator
from datetime import date, datetime, time
from typing import Any, TypeVar

from pydantic import TypeAdapter, ValidationError

from passplan.domain.errors import FieldError, Mistake
from passplan.workspace.documents import MOST_TEXT, Data, Document, Place
from passplan.workspace.mend import hidden_by, holds, inside, mended, noun_of
from passplan.workspace.wording import Hint, bare_hint, expected, hints_of

Noun = TypeVar("Noun")

_FIRST_YEAR, _LAST_YEAR = 1990, 2200  # outside, sums of dates could leave what Python can hold
_MOST_SHOWN = 60
_MOST_ROUNDS = 4  # nouns stand at most four deep in one another

Faults = dict[Place, tuple[object, str]]  # place to (offending value, what is allowed)


def read_noun(
    noun: type[Noun], data: Data, document: Document, at: Place
) -> tuple[Noun | None, list[Mistake]]:
    """Return the noun a table describes, or None and what is wrong with it.

    Args:
        noun: frozen dataclass to make.
        data: the table as tomllib gives it.
        document: where it stands, for mistakes.
        at: place of the table in its document.
    """
    faults = _raw_faults(data, noun)
    made: Noun | None = None
    try:
        made = _adapter(noun).validate_json(_json(data), strict=True)
    except ValidationError as error:
        faults = _all_faults(noun, data, error) | faults
    except RecursionError:
        return None, [Mistake(document.file, document.key(at), "", "nested too deeply")]
    mistakes = [
        Mistake(document.file, document.key(at + place), shown(value), visible(told))
        for place, (value, told) in faults.items()
    ]
    return (None if mistakes else made), mistakes


def visible(text: str) -> str:
    """Return a sentence with whatever a terminal might obey spelled out; names people gave stand in some."""
    return "".join(char if char.isprintable() else repr(char)[1:-1] for char in text)


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
    """Return '; did you mean "..."?' for a word close to a known one, else an empty text."""
    longer = [name for name in known if name.startswith(word + "_")]  # the unit was forgotten
    close = longer or difflib.get_close_matches(word, known, n=1, cutoff=0.6)
    return f'; did you mean "{close[0]}"?' if close else ""


_ADAPTERS: dict[type, TypeAdapter[Any]] = {}


def _adapter(noun: type[Noun]) -> TypeAdapter[Noun]:
    """Return pydantic's reader of a noun, built once."""
    if noun not in _ADAPTERS:
        _ADAPTERS[noun] = TypeAdapter(noun)
    return _ADAPTERS[noun]


def _json(data: Data) -> str:
    """Return tables as JSON text; dates and times in ISO 8601 form, inf and nan kept to be refused."""
    return json.dumps(data, default=lambda value: value.isoformat().replace("+00:00", "Z"))


def _all_faults(noun: type, data: Data, error: ValidationError) -> Faults:
    """Return every fault, also those that pydantic sees only once the first ones are mended."""
    faults = _faults(noun, data, error)
    for _ in range(_MOST_ROUNDS):
        places = list(faults)
        try:
            _adapter(noun).validate_json(_json(mended(noun, data, places)), strict=True)
        except ValidationError as hidden:
            more = {
                (*at, *_split(name)): (value, allowed)
                for at, name, value, allowed in _told_by_nouns(hidden)
                if not hidden_by(allowed, name, places, at)
            }
            faults |= more
        if len(faults) == len(places):
            break
    return faults


def _told_by_nouns(error: ValidationError) -> Iterator[tuple[Place, str, object, str]]:
    """Yield (place of the noun, field, value, what is allowed) of what nouns say of themselves."""
    for item in error.errors(include_url=False):
        cause = item.get("ctx", {}).get("error")
        if item["type"] == "value_error" and isinstance(cause, FieldError):
            for name, value, allowed in cause.faults:
                yield item["loc"], name, value, allowed


def _raw_faults(data: Data, hint: Hint, at: Place = ()) -> Faults:
    """Return what only the data as written can tell.

    That is: texts and keys that would upset a terminal or a calendar, impossible years,
    and bare dates where a text belongs, which JSON would pass on as texts.
    """
    faults: Faults = {}
    match data:
        case dict() | list():
            for key, value in data.items() if isinstance(data, dict) else enumerate(data):
                faults |= _raw_faults(value, inside(hint, key), (*at, key))
                if isinstance(key, str) and (told := _unfit(key)):
                    faults[*at, key] = ("", f"the key itself: {told}")
        case str() if told := _unfit(data):
            faults[at] = (data, told)
        case date() | time() if bare_hint(hint)[0] is str:
            faults[at] = (data, "expected " + expected(hint))
        case date() if not _FIRST_YEAR <= data.year <= _LAST_YEAR:
            faults[at] = (data, f"a year from {_FIRST_YEAR} to {_LAST_YEAR}")
    return faults


def _unfit(text: str) -> str:
    """Return why a text is refused, "" when it is one printable line."""
    if len(text) > MOST_TEXT:
        return f"at most {MOST_TEXT} characters"
    if not text.isprintable():
        return "one line of printable characters, no control characters"
    return ""


def _faults(noun: type, data: Data, error: ValidationError) -> Faults:
    """Return pydantic's findings by place, each told once and in our words."""
    found: Faults = {
        (*at, *_split(name)): (value, allowed) for at, name, value, allowed in _told_by_nouns(error)
    }
    for item in error.errors(include_url=False):
        place, hint, owner = _walk(noun, data, item["loc"])
        if item["type"] == "value_error":
            continue
        if item["type"] == "missing":
            found.setdefault(place, ("", f"missing; expected {expected(hint, str(place[-1]))}"))
        elif item["type"] == "unexpected_keyword_argument":
            known = [] if owner is None else list(hints_of(owner))
            found.setdefault(place, ("", "unknown key" + nearest(str(place[-1]), known)))
        else:
            key = next((part for part in reversed(place) if isinstance(part, str)), "")
            found.setdefault(place, (item["input"], "expected " + expected(hint, key)))
    return found


def _walk(noun: type, data: Data, loc: Place) -> tuple[Place, Hint, type | None]:
    """Return how far pydantic's `loc` leads in the data, the hint there and the noun around it.

    pydantic adds the names of a union's branches to the path; the data know none
    of them, so the walk ends where the data end.
    """
    place: Place = ()
    hint: Hint = noun
    owner: type | None = None
    for part in loc:
        if not isinstance(data, dict | list):
            break
        owner, hint = noun_of(hint), inside(hint, part)
        place = (*place, part)
        data = _at(data, part)
    return place, hint, owner


def _at(data: Data, part: str | int) -> Data:
    """Return one key or element, None where there is none."""
    return data[part] if holds(data, part) else None


def _split(name: str) -> Place:
    """Return a field name of FieldError as a place: "mask[3]" is ("mask", 3)."""
    head, _, rest = name.partition("[")
    return (head, int(rest[:-1])) if rest.endswith("]") and rest[:-1].isdigit() else (name,)

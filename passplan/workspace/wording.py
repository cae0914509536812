"""Plain words for what a key takes: its kind, its unit, its limits.

The limits stand once, in the nouns' type hints; these functions only read them
aloud, for mistakes, for assumed values and for the hover texts of editors.
"""

import dataclasses
import types
from collections.abc import Iterable
from datetime import date, datetime, time
from functools import cache
from typing import Annotated, Any, Literal, Union, get_args, get_origin, get_type_hints

from annotated_types import Interval

# The end of a key to (words after "a number", sign after a figure).
UNITS = {
    "rev_day": ("in revolutions a day", "rev/day"),
    "bit_s": ("in bits a second", "bit/s"),
    "byte_s": ("in bytes a second", "byte/s"),
    "deg_s": ("in degrees a second", "deg/s"),
    "dbm": ("in dBm", "dBm"),
    "dbi": ("in dBi", "dBi"),
    "byte": ("of bytes", "byte"),
    "days": ("of days", "days"),
    "deg": ("in degrees", "deg"),
    "min": ("of minutes", "min"),
    "db": ("in dB", "dB"),
    "hz": ("in hertz", "Hz"),
    "wh": ("in watt-hours", "Wh"),
    "s": ("of seconds", "s"),
    "h": ("of hours", "h"),
    "m": ("in metres", "m"),
    "w": ("in watts", "W"),
    "k": ("in kelvin", "K"),
}

_EXAMPLES: dict[object, str] = {
    datetime: "a moment in UTC such as 2026-12-07T05:12:00Z, no quotes",
    date: "a day such as 2026-12-07, no quotes",
    time: "a time of day such as 22:00:00, no quotes",
    str: "a text in quotes",
    bool: "true or false",
}


def unit_of(key: str) -> tuple[str, str]:
    """Return (words, sign) of the unit in a key's name, ("", "") where it has none."""
    for end, told in UNITS.items():
        if key.endswith("_" + end):
            return told
    return ("", "")


def figure(key: str, value: object) -> str:
    """Return a value as people read it, with the unit its key carries: "45 s", "60 %"."""
    if isinstance(value, bool):
        return "yes" if value else "no"
    if isinstance(value, int | float):
        if key.endswith("_fraction"):
            return f"{100.0 * value:.3g} %"
        return f"{value:g} {unit_of(key)[1]}".rstrip()
    if isinstance(value, time):
        return f"{value:%H:%M}"
    if isinstance(value, tuple | list):
        return ", ".join(str(part) for part in value) or "none"
    return str(value)


@cache
def hints_of(noun: type) -> dict[str, Any]:
    """Return the type hint of each field of `noun`, limits included."""
    hints = get_type_hints(noun, include_extras=True)
    return {field.name: hints[field.name] for field in dataclasses.fields(noun)}


def expected(hint: Any, key: str = "") -> str:
    """Return what a value of this type hint must look like, in words.

    Args:
        hint: from `hints_of`, or a part of one.
        key: the key's name, for its unit.
    """
    bare, limits = _bare(hint)
    origin = get_origin(bare)
    if origin in (Union, types.UnionType):
        # Two number parts of one union (a weight, or a request's worth) differ in limits only.
        parts = [part for part in get_args(bare) if part is not type(None)]
        return " or ".join(dict.fromkeys(expected(part, key) for part in parts))
    if origin is Literal:
        return _any_of(get_args(bare))
    if origin is tuple:
        return _list(get_args(bare), key)
    if origin is dict:
        return "a table of names and values"
    if dataclasses.is_dataclass(bare):
        return "a table"
    if bare in (int, float):
        kind = "a whole number" if bare is int else "a number"
        return " ".join(filter(None, (kind, unit_of(key)[0], _range(limits))))
    return _EXAMPLES.get(bare, "a value")


def _bare(hint: Any) -> tuple[Any, tuple[Any, ...]]:
    """Return a hint without its limits, and the limits."""
    if get_origin(hint) is Annotated:
        return get_args(hint)[0], hint.__metadata__
    return hint, ()


def _any_of(words: Iterable[object]) -> str:
    """Return "one of ..." with the words quoted as TOML wants them."""
    quoted = [f'"{word}"' for word in words]
    return quoted[0] if len(quoted) == 1 else f"{', '.join(quoted[:-1])} or {quoted[-1]}"


def _list(parts: tuple[Any, ...], key: str) -> str:
    """Return the words for a tuple: a list of any length, or a pair of set places."""
    if len(parts) == 2 and parts[1] is Ellipsis:
        if dataclasses.is_dataclass(parts[0]):
            return "a list of tables"
        return "a list in square brackets, each " + expected(parts[0], key)
    return "a pair in square brackets, [" + ", ".join(expected(part) for part in parts) + "]"


def _range(limits: tuple[Any, ...]) -> str:
    """Return limits in words; an upper limit nobody meets is not worth a word."""
    told = []
    for limit in limits:
        if not isinstance(limit, Interval):
            continue
        low = limit.ge if limit.ge is not None else limit.gt
        high = limit.le if limit.le is not None else limit.lt
        above = "" if limit.gt is None else "more than "
        if low is not None and high is not None and high < 1e6:  # type: ignore[operator]
            joint = "and at most" if above else "to"
            told.append(f"{above or 'from '}{low:g} {joint} {high:g}")  # type: ignore[str-format]
        elif low is not None:
            told.append(f"{above or 'at least '}{low:g}")  # type: ignore[str-format]
    return " ".join(told)

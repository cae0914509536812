"""Plain words for what a key takes: its kind, its unit, its limits.

The limits stand once, in the nouns' type hints; these functions only read them
aloud, for mistakes, for assumed values and for the hover texts of editors.
"""

import dataclasses
import types
from datetime import date, datetime, time
from functools import cache
from types import NoneType
from typing import Annotated, Any, Literal, TypeAlias, Union, get_args, get_origin, get_type_hints

from annotated_types import Interval

Hint: TypeAlias = Any  # the type hint of a field, or a part of one

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
        if key.endswith(("_fraction", "_efficiency")):
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


def expected(hint: Hint, key: str = "") -> str:
    """Return what a value of this type hint must look like, in words.

    Args:
        hint: from `hints_of`, or a part of one.
        key: the key's name, for its unit.
    """
    bare, limits = bare_hint(hint)
    origin = origin_of(bare)
    if origin in (Union, types.UnionType):
        told = _either(get_args(bare), key)
    elif origin is Literal:
        told = _any_of([f'"{word}"' for word in get_args(bare)])
    elif origin is tuple:
        told = _list(get_args(bare), key)
    elif origin is dict:
        told = "a table of names and values"
    elif dataclasses.is_dataclass(bare):
        told = "a table"
    elif bare in (int, float):
        kind = "a whole number" if bare is int else "a number"
        told = " ".join(filter(None, (kind, unit_of(key)[0]))) + _range(limits)
    else:
        told = _EXAMPLES.get(bare, "a value")
    return told


def bare_hint(hint: Hint) -> tuple[Hint, tuple[Any, ...]]:
    """Return a hint without its limits, and the limits."""
    if origin_of(hint) is Annotated:
        return get_args(hint)[0], hint.__metadata__
    return hint, ()


def origin_of(hint: Hint) -> object:
    """Return what a generic hint is made from: tuple, dict, Literal, a union, or None."""
    return get_origin(hint)


def _either(parts: tuple[Any, ...], key: str) -> str:
    """Return the words for a union: set words first, then the number with the widest limits."""
    words = [f'"{word}"' for part in parts if origin_of(part) is Literal for word in get_args(part)]
    numbers = [part for part in parts if bare_hint(part)[0] in (int, float)]
    widest = max(
        numbers,
        key=lambda part: max((limit.le or 0.0 for limit in bare_hint(part)[1]), default=0.0),
        default=None,
    )
    rest = [
        part
        for part in parts
        if part not in numbers and origin_of(part) is not Literal and part is not NoneType
    ]
    if widest is not None:
        rest.append(widest)
    return _any_of([*words, *(expected(part, key) for part in rest)])


def _any_of(words: list[str]) -> str:
    """Return "a, b or c"."""
    return words[0] if len(words) == 1 else f"{', '.join(words[:-1])} or {words[-1]}"


def _list(parts: tuple[Any, ...], key: str) -> str:
    """Return the words for a tuple: a list of any length, or a pair of set places."""
    if len(parts) == 2 and parts[1] is Ellipsis:
        if dataclasses.is_dataclass(parts[0]):
            return "a list of tables"
        return "a list in square brackets, each " + expected(parts[0], key)
    return "a pair in square brackets, [" + ", ".join(expected(part) for part in parts) + "]"


def _range(limits: tuple[Any, ...]) -> str:
    """Return " from 0 to 1" and the like; an upper limit that nobody meets is not worth a word."""
    told = ""
    for limit in limits:
        if not isinstance(limit, Interval):
            continue
        low: Any = limit.ge if limit.ge is not None else limit.gt
        high: Any = limit.le if limit.le is not None else limit.lt
        low_told, high_told = f"{low:.10g}", f"{high:.10g}"
        if high >= 1e15:
            told += f", more than {low_told}" if limit.ge is None else f", at least {low_told}"
        elif limit.ge is None:
            told += f", more than {low_told} and at most {high_told}"
        else:
            told += f" from {low_told} to {high_told}"
    return told

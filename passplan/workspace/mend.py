"""A table with its mistakes taken out, so that what they hide is told in the same run.

A noun checks how its fields hang together only once each of them is sound. To tell
*all* mistakes at once, sound values are put in for the unsound ones, the noun is made
again, and what it then says about the other fields is kept.
"""

import copy
from dataclasses import MISSING, fields, is_dataclass
from datetime import date, datetime, time
from typing import Literal, get_args

from passplan.workspace.documents import Data, Place
from passplan.workspace.wording import Hint, bare_hint, hints_of, origin_of

_SOUND: dict[object, object] = {
    str: "UTC",  # a name, a code and a time zone
    bool: False,
    datetime: "2026-01-01T00:00:00Z",
    date: "2026-01-01",
    time: "00:00:00",
}


def mended(noun: type, data: Data, places: list[Place]) -> Data:
    """Return a copy of `data` with something sound at each of `places`; keys with a default are left out."""
    sound = copy.deepcopy(data)
    for place in sorted(places, key=str):
        if not place:
            return sound
        parent, hint, owner = sound, noun, None
        for part in place[:-1]:
            hint = inside(hint, part)
            parent = parent[part] if holds(parent, part) else None
        owner = noun_of(hint)
        _put(parent, place[-1], owner, inside(hint, place[-1]))
    return sound


def hidden_by(allowed: str, name: str, places: list[Place], at: Place) -> bool:
    """Return whether what a noun says is about a mended field: its own, or one that the sentence names."""
    touched = {str(place[len(at)]) for place in places if place[: len(at)] == at and len(place) > len(at)}
    return name.partition("[")[0] in touched or any(key.rstrip("s") in allowed for key in touched)


def inside(hint: Hint, part: str | int) -> Hint:
    """Return the hint of one key or element of what `hint` describes; None where it has none."""
    bare, _ = bare_hint(hint)
    noun = noun_of(bare)
    if noun is not None:
        return hints_of(noun).get(str(part))
    args, origin = get_args(bare), origin_of(bare)
    if origin is tuple and isinstance(part, int):
        return args[0] if args[-1] is Ellipsis else args[min(part, len(args) - 1)]
    return args[1] if origin is dict else None


def noun_of(hint: Hint) -> type | None:
    """Return the noun a hint names, also an optional one."""
    for option in (hint, *get_args(hint)):
        if isinstance(option, type) and is_dataclass(option):
            return option if option is hint or origin_of(hint) is not tuple else None
    return None


def holds(data: Data, part: str | int) -> bool:
    """Return whether `part` leads further into `data`."""
    if isinstance(data, dict):
        return part in data
    return isinstance(data, list) and isinstance(part, int) and part < len(data)


def _put(parent: Data, part: str | int, owner: type | None, hint: Hint) -> None:
    """Put a sound value in, or take out what needs none."""
    if isinstance(parent, dict):
        if hint is None or (owner is not None and part not in _required(owner)):
            parent.pop(part, None)
        else:
            parent[part] = _sound(hint)
    elif isinstance(parent, list) and isinstance(part, int):
        if part < len(parent):
            parent[part] = _sound(hint)
        else:
            parent.append(_sound(hint))


def _required(noun: type) -> set[str]:
    """Return the fields of a noun that have no default."""
    return {
        field.name for field in fields(noun) if field.default is MISSING and field.default_factory is MISSING
    }


def _sound(hint: Hint) -> object:
    """Return a value that `hint` allows, in JSON form."""
    bare, limits = bare_hint(hint)
    origin, args = origin_of(bare), get_args(bare)
    value: object
    if bare in (int, float):
        value = max((limit.ge if limit.ge is not None else limit.gt + 1 for limit in limits), default=0)
    elif origin is Literal:
        value = args[0]
    elif origin is tuple:
        value = [] if args[-1] is Ellipsis else [_sound(part) for part in args]
    elif origin is dict:
        value = {}
    elif isinstance(bare, type) and is_dataclass(bare):
        value = {name: _sound(hints_of(bare)[name]) for name in sorted(_required(bare))}
    else:
        value = _SOUND[bare] if bare in _SOUND else _sound(args[0])
    return value

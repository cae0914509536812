"""A plan as JSON: the form it is stored in, and what `--json` prints.

Moments are ISO 8601 UTC under keys that end in `_utc`; inside a `Plan` the same moments
are seconds of the week under keys that end in `_s`. Beside the plan's own fields the
text holds a few that are worked out from them for whoever reads it: `longest_silence`
and `battery` (of the satellite where it is tightest), each contact's `uplink` and
`downlink_byte`, each command's `contacts`, the verdict's `ok`. Reading ignores those.

Figures are rounded when written: moments to 1 ms, bytes to 0.1, angles to 0.0001 deg,
ranges to 1 m, all else to 6 decimals. A plan whose figures are already that round comes
back equal. JSON has no infinity: it is written as the text "inf".
"""

import json
import math
from dataclasses import fields, is_dataclass
from datetime import datetime
from functools import singledispatch
from typing import Any, TypeAlias

from pydantic import TypeAdapter, ValidationError
from pydantic_core import ErrorDetails

from passplan.domain.errors import InputError, Mistake
from passplan.domain.moments import Horizon, iso
from passplan.domain.plan import CommandOutcome, Contact, Plan, Silence
from passplan.domain.rules import Rule
from passplan.domain.verdict import Verdict

Json: TypeAlias = Any  # dicts, lists, texts and numbers, as the json module has them

FORM = 1  # of the text; a higher one was written by a newer passplan
ORDER = (
    *("form", "mission", "week", "edition", "week_start_utc", "lookahead_h", "proven", "good", "notices"),
    *("steps", "gives", "worth", "longest_silence", "silences", "contacts", "lookahead", "commands"),
    *("sessions", "battery", "batteries", "data", "shares", "elements", "verdict", "made_from"),
)

_DIGITS = {"byte": 1, "deg": 4, "km": 3}
_WIDEST = 110
_NO_MOMENT = "no moment: "
_BY_NAME = (
    "lowest_fraction",
    "lowest_s",
    "downlink_byte",
    "gives",
)  # objects whose keys are names people gave
_PLAN = TypeAdapter(Plan)
_RULES = {rule.name: rule for rule in Rule}


def to_json(plan: Plan) -> str:
    """Return a plan as JSON text, ending in a line feed; the same plan gives the same bytes."""
    horizon = plan.horizon
    body = _written(plan, horizon)
    body |= {"form": FORM, "week": horizon.week, "week_start_utc": iso(horizon.start)}
    body |= {"lookahead_h": horizon.lookahead_h}
    return _text({key: body[key] for key in ORDER}) + "\n"


def from_json(text: str, source: str) -> Plan:
    """Return the plan a JSON text holds.

    Args:
        text: from `to_json`.
        source: file name, for mistakes.

    Raises:
        InputError: not JSON, of a newer form, or with fields missing or wrong, all of them.
    """
    data = load(text, source)
    try:
        horizon = Horizon(week=str(data.get("week")), lookahead_h=data.get("lookahead_h", -1.0))
        own = {
            field.name: _read(data[field.name], horizon, field.name)
            for field in fields(Plan)
            if field.name in data
        }
        return _PLAN.validate_python(own | {"horizon": horizon})
    except ValidationError as error:
        raise InputError(_mistakes(error, source)) from None
    except (ValueError, TypeError) as error:
        raise InputError([Mistake(source, "", "", f"not a stored plan: {error}")]) from None


def load(text: str, source: str) -> dict[str, Json]:
    """Return the bare data of a stored plan, its fields unchecked.

    Raises:
        InputError: not JSON, or not of a form this passplan knows.
    """
    try:
        data = json.loads(text)
    except json.JSONDecodeError as error:
        key = f"line {error.lineno}, column {error.colno}"
        raise InputError([Mistake(source, key, "", f"not JSON: {error.msg.lower()}")]) from None
    except (RecursionError, ValueError):
        raise InputError([Mistake(source, "", "", "not a stored plan")]) from None
    form = data.get("form") if isinstance(data, dict) else None
    if not isinstance(data, dict) or form != FORM:
        newer = isinstance(form, int) and form > FORM
        told = "written by a newer passplan; update this one" if newer else "not a stored plan"
        raise InputError([Mistake(source, "form", "" if form is None else str(form)[:40], told)])
    return data


def _written(value: object, horizon: Horizon, key: str = "") -> Json:
    """Return a value of a plan as JSON data; `key` tells moments from figures, and the rounding."""
    if isinstance(value, Rule):
        return value.name
    if isinstance(value, tuple):
        if key == "trace":
            return [[_moment(second, horizon), _rounded(part, key)] for second, part in value]
        return [_written(part, horizon, key) for part in value]
    if isinstance(value, dict):
        return {name: _written(value[name], horizon, key) for name in sorted(value)}
    if isinstance(value, int | float) and not isinstance(value, bool):
        return _moment(value, horizon) if key.endswith("_s") else _rounded(value, key)
    return _record(value, horizon) if is_dataclass(value) else value


def _record(noun: object, horizon: Horizon) -> dict[str, Json]:
    """Return a noun of the plan as a JSON object: what is worked out from it, and its own fields."""
    own = {field.name: getattr(noun, field.name) for field in fields(noun)}  # type: ignore[arg-type]
    parts = own | _worked_out(noun)
    return {_outside(name): _written(part, horizon, name) for name, part in parts.items()}


@singledispatch
def _worked_out(noun: object) -> dict[str, object]:
    """Return what a reader of the text wants beside a noun's own fields."""
    del noun
    return {}


@_worked_out.register
def _(noun: Plan) -> dict[str, object]:
    silence = max(noun.silences, key=lambda one: one.hours, default=None)
    tightest = min(noun.batteries, key=lambda one: one.lowest_fraction - one.floor_fraction, default=None)
    return {"longest_silence": silence, "battery": tightest}


@_worked_out.register
def _(noun: Contact) -> dict[str, object]:
    uplink = tuple(slot for slot in noun.slots if slot.kind == "uplink")
    return {"uplink": uplink, "downlink_byte": noun.downlink_byte}


@_worked_out.register
def _(noun: CommandOutcome) -> dict[str, object]:
    return {"contacts": (noun.contact,) if noun.contact else ()}


@_worked_out.register
def _(noun: Silence) -> dict[str, object]:
    return {"hours": noun.hours}


@_worked_out.register
def _(noun: Verdict) -> dict[str, object]:
    return {"ok": noun.ok}


def _outside(name: str) -> str:
    """Return the key a field goes by in the text."""
    return name[: -len("_s")] + "_utc" if name.endswith("_s") else name


def _moment(seconds: float, horizon: Horizon) -> str:
    """Return a second of the week as a UTC moment to 1 ms."""
    return iso(horizon.utc(round(seconds, 3)))


def _rounded(value: float, key: str) -> Json:
    """Return a figure with the digits its unit deserves, an infinite one as text."""
    if isinstance(value, int):
        return value
    # Adding zero makes minus zero plain, so that equal plans are equal bytes.
    return round(value, _DIGITS.get(key.rpartition("_")[2], 6)) + 0.0 if math.isfinite(value) else str(value)


def _read(value: Json, horizon: Horizon, key: str) -> Json:
    """Return JSON data with moments as seconds of the week and rules as rules.

    What does not read as either is left as it is, for pydantic to find in its place.
    """
    if key == "trace" and isinstance(value, list):
        pairs = (pair if isinstance(pair, list) and pair else [None] for pair in value)
        return [[_seconds(pair[0], horizon), *pair[1:]] for pair in pairs]
    if isinstance(value, list):
        return [_read(part, horizon, key) for part in value]
    if isinstance(value, dict):
        if key in _BY_NAME:
            return {name: _read(part, horizon, key) for name, part in value.items()}
        return {_inside(name): _read(part, horizon, _inside(name)) for name, part in value.items()}
    if key in ("rule", "checked") and isinstance(value, str):
        return _RULES.get(value, value)
    return _seconds(value, horizon) if key.endswith("_s") else value


def _inside(name: str) -> str:
    """Return the field a key of the text stands for."""
    return name[: -len("_utc")] + "_s" if name.endswith("_utc") else name


def _seconds(value: Json, horizon: Horizon) -> Json:
    """Return a UTC moment as a second of the week; anything else as a text pydantic refuses."""
    if value is None:
        return None
    try:
        return horizon.seconds(datetime.fromisoformat(value))
    except (ValueError, TypeError):
        return f"{_NO_MOMENT}{value}"


def _mistakes(error: ValidationError, source: str) -> list[Mistake]:
    """Return what pydantic found, one mistake a place, keys named as in the text."""
    found: dict[str, Mistake] = {}
    for item in error.errors(include_url=False):
        names = [f"[{part}]" if isinstance(part, int) else "." + _outside(part) for part in item["loc"]]
        key = "".join(names).lstrip(".")
        missing = item["type"] == "missing"
        bare = missing or isinstance(item["input"], dict | list)
        text = "" if bare else str(item["input"]).removeprefix(_NO_MOMENT)[:60]
        found.setdefault(key, Mistake(source, key, text, "missing" if missing else _slip(key, item)))
    return list(found.values())


def _slip(key: str, item: ErrorDetails) -> str:
    """Return what is wrong at one key, in words."""
    if key.rpartition(".")[2].partition("[")[0].endswith("_utc"):
        return "expected a moment such as 2026-12-07T05:12:00Z"
    if item["type"] == "enum":
        return "no such rule"
    return item["msg"].lower().removeprefix("input ")


def _text(value: Json, indent: str = "") -> str:
    """Return JSON text with one row for whatever is short and flat, so that people can compare it."""
    row = json.dumps(value, allow_nan=False)
    if not isinstance(value, dict | list) or not value or (len(row) <= _WIDEST and _flat(value)):
        return row
    deeper = indent + "  "
    if isinstance(value, dict):
        rows = [f"{json.dumps(key)}: {_text(part, deeper)}" for key, part in value.items()]
    else:
        rows = [_text(part, deeper) for part in value]
    opening, closing = "{}" if isinstance(value, dict) else "[]"
    return opening + "\n" + ",\n".join(deeper + one for one in rows) + "\n" + indent + closing


def _flat(value: Json) -> bool:
    """Return whether nothing in a list or an object is itself a list or an object."""
    parts = value.values() if isinstance(value, dict) else value
    return not any(isinstance(part, dict | list) for part in parts)

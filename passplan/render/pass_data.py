"""The list of passes for programs: JSON and CSV with the same keys, units in the keys."""

import csv
import io
import json
from collections.abc import Callable, Sequence

from passplan.domain.moments import Horizon, iso
from passplan.domain.passes import Sky
from passplan.render.pass_list import ListedPass
from passplan.render.words import safe

Value = str | float | list[dict[str, str]] | None


def passes_json(listed: Sequence[ListedPass], sky: Sky, horizon: Horizon) -> str:
    """Return the passes as JSON: ISO 8601 UTC to a millisecond, units in the keys, a line feed at the end."""
    told = {
        "week": horizon.week,
        "propagation_ends_utc": {
            name: _moment(horizon, second) for name, second in sorted(sky.propagation_end_s.items())
        },
        "passes": [{key: value(each, horizon) for key, value in _FACTS.items()} for each in listed],
    }
    return json.dumps(told, indent=2, ensure_ascii=False, allow_nan=False) + "\n"


def passes_csv(listed: Sequence[ListedPass], horizon: Horizon) -> str:
    """Return the passes as CSV (RFC 4180: a header, commas, CRLF), with the keys of the JSON.

    Text that a spreadsheet would take for a formula gets an apostrophe in front.
    """
    sink = io.StringIO()
    writer = csv.writer(sink, lineterminator="\r\n")
    writer.writerow(_FACTS)
    for each in listed:
        writer.writerow(_plain(value(each, horizon)) for value in _FACTS.values())
    return sink.getvalue()


def _moment(horizon: Horizon, second: float) -> str:
    """Return a second of the week as ISO 8601 UTC, to a millisecond."""
    return iso(horizon.utc(round(second, 3)))


def _span(horizon: Horizon, begin_s: float, end_s: float) -> dict[str, str]:
    """Return a span of the week as two moments."""
    return {"from_utc": _moment(horizon, begin_s), "to_utc": _moment(horizon, end_s)}


def _rounded(value: float | None, digits: int) -> float | None:
    """Return a figure without the digits that only differ from machine to machine."""
    return None if value is None else round(value, digits)


def _plain(value: Value) -> str | float | None:
    """Return a value as one cell of a CSV file."""
    if isinstance(value, list):
        return " ".join(f"{span['from_utc']}/{span['to_utc']}" for span in value)
    if not isinstance(value, str):
        return value
    text = safe(value)
    return "'" + text if text[:1] in {"=", "+", "-", "@"} else text


_FACTS: dict[str, Callable[[ListedPass, Horizon], Value]] = {
    "satellite": lambda each, _: safe(each.sight.satellite),
    "station": lambda each, _: safe(each.sight.station),
    "aos_utc": lambda each, horizon: _moment(horizon, each.sight.aos_s),
    "tca_utc": lambda each, horizon: _moment(horizon, each.sight.tca_s),
    "los_utc": lambda each, horizon: _moment(horizon, each.sight.los_s),
    "length_s": lambda each, _: _rounded(each.sight.length_s, 3),
    "useful_s": lambda each, _: _rounded(each.useful_s, 1),
    "max_elevation_deg": lambda each, _: _rounded(each.sight.max_elevation_deg, 3),
    "aos_azimuth_deg": lambda each, _: _rounded(each.sight.aos_azimuth_deg, 3),
    "tca_azimuth_deg": lambda each, _: _rounded(each.sight.tca_azimuth_deg, 3),
    "los_azimuth_deg": lambda each, _: _rounded(each.sight.los_azimuth_deg, 3),
    "aos_range_km": lambda each, _: _rounded(each.sight.aos_range_km, 3),
    "tca_range_km": lambda each, _: _rounded(each.sight.tca_range_km, 3),
    "los_range_km": lambda each, _: _rounded(each.sight.los_range_km, 3),
    "largest_range_rate_km_s": lambda each, _: _rounded(each.sight.largest_range_rate_km_s, 6),
    "largest_doppler_down_hz": lambda each, _: _rounded(each.doppler_down_hz, 1),
    "largest_doppler_up_hz": lambda each, _: _rounded(each.doppler_up_hz, 1),
    "sunlit": lambda each, horizon: [
        {"from_utc": _moment(horizon, begin), "to_utc": _moment(horizon, end)}
        for begin, end in each.sight.sunlit
    ],
    "clipped": lambda each, _: each.sight.clipped,
}

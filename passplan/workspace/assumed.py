"""What a workspace left alone: every default in force, with its unit and why it is what it is."""

from collections.abc import Callable, Iterator
from dataclasses import fields, is_dataclass
from pathlib import Path
from typing import Any, NamedTuple

from passplan.domain.mission import Planning
from passplan.domain.people import Operator
from passplan.domain.requests import Command, Session
from passplan.domain.satellite import Battery, DataKind, Framing, Power, Radio
from passplan.domain.station import GroundRadio, Rotator, Station
from passplan.workspace.documents import Data, Place
from passplan.workspace.entries import Entry
from passplan.workspace.read import read_entries
from passplan.workspace.wording import figure


class Assumption(NamedTuple):
    """One default in force.

    Attributes:
        file, key: where it could be written.
        value: with its unit, as people read it.
        why: one sentence.
    """

    file: str
    key: str
    value: str
    why: str


# Text for people, once: noun and field to why this default. A field not named here has a
# default that says nothing new (an empty list of outages) or that the team has to know anyway.
WHY: dict[type, dict[str, str]] = {
    Planning: {
        "lookahead_h": "a day beyond the week, so that Sunday night leaves a charged battery",
        "acquire_s": "finding the signal, tuning and the request take about that (common practice)",
        "close_s": "to say good-bye",
        "least_contact_s": "shorter ones are not worth sitting down for",
        "guard_s": "off both ends of every pass, until guard times are learned from your own element sets",
        "hand_over_gap_s": "between two stations that speak to one satellite",
        "sitting_gap_h": "passes of a station begun within it count as one sitting",
        "night_begin": "where night begins for everybody, in their own zone",
        "night_end": "where night ends",
        "end_fraction": "charge wanted at the end of the horizon, or the charge at its start if that is less",
        "success_fraction": "chance that a contact works; a stated guess until there is a log",
        "longest_silence_h": "longer ones are reported, as emissions must be stoppable",
        "warn_age_days": "of an element set at a contact",
        "refuse_age_days": "older sets need --old-elements",
    },
    Radio: {
        "bit_rate_bit_s": "the usual rate on amateur UHF (common practice)",
        "modulation": "the plainest receiver",
        "scrambled": "a self-synchronising scrambler makes three errors of one",
        "line_loss_db": "connectors and a short cable",
        "antenna_gain_dbi": "mean over the directions of a turnstile or a dipole",
        "polarisation": "a turnstile of four phased elements (common practice)",
        "receive_sensitivity_dbm": "a plain UHF receiver at 9600 bit/s",
        "turn_round_s": "from listening to speaking or back, each time",
        "expected_repeats": "every second exchange is repeated once",
    },
    Framing: {
        "information_byte": "the usual AX.25 information field (common practice)",
        "keying_delay_s": "carrier on before the first flag (common practice)",
        "stuffing_fraction": "one stuffed bit in 62 of random data",
        "frames_per_keying": "sent in one go on the downlink",
    },
    Power: {
        "attitude": "a spinner that keeps its panels on the Sun (common practice): 95 % of full Sun",
        "degradation_fraction": "a new array",
        "heater_eclipse_w": "no heater",
    },
    Battery: {
        "health_fraction": "new cells",
        "floor_fraction": "never below, so that a bad pass or a safe mode still has power",
        "transmit_floor_fraction": "no contact begins below, a tenth above the floor",
        "charge_efficiency": "lithium cells and their converter",
        "discharge_efficiency": "lithium cells and their converter",
    },
    DataKind: {"weight": "worth of a kilobyte; low 1, normal 3, high 10"},
    Station: {
        "altitude_m": "sea level",
        "least_receive_elevation_deg": "lower passes are noisy and blocked (common practice)",
        "least_transmit_elevation_deg": "lower passes are noisy and blocked (common practice)",
        "set_up_s": "between two contacts of one station",
    },
    Rotator: {
        "azimuth_rate_deg_s": "a light rotator (common practice)",
        "elevation_rate_deg_s": "a light rotator (common practice)",
        "azimuth_to_deg": "90 deg of overlap, so that few passes cross the stop",
    },
    GroundRadio: {
        "transmit_power_w": "a usual amplifier; your licence decides",
        "transmit_line_loss_db": "some metres of good cable",
        "antenna_gain_dbi": "one crossed Yagi (common practice)",
        "polarisation": "circular, as linear costs 3 dB",
        "pointing_loss_db": "rotators only",
        "atmosphere_loss_db": "low elevations at UHF",
        "receive_line_loss_db": "a short cable ahead of the preamplifier",
        "noise_figure_db": "a mast preamplifier",
        "antenna_noise_k": "sky, ground and neighbours of a suburb at UHF",
        "margin_db": "above the required Eb/N0 before a link counts",
    },
    Operator: {
        "may_control": "receives only, until you say they are licensed and designated",
        "most_duties_day": "three are enough for a day",
        "most_duties_week": "eight are enough for a week",
        "rest_h": "between two sittings",
        "preparation_min": "from sitting down to the start of a contact",
        "travel_min": "between two stations",
    },
    Command: {"length_byte": "a short command; the exchange is worked out from it"},
    Session: {"grid_s": "starts are tried every so many seconds of a window"},
}

# Where nothing is written and the value follows from elsewhere: (value, why), given the
# noun and the one that stands for the whole file.
Told = Callable[[Any, Any], tuple[str, str]]
FOLLOWS: dict[type, dict[str, Told]] = {
    Radio: {
        "required_ebn0_db": lambda radio, _: (
            f"closed form of {radio.modulation} + {radio.implementation_loss_db:g} dB",
            "a measured value is better",
        ),
    },
    Power: {
        "transmitter_draw_w": lambda _, satellite: (
            f"{satellite.transmitter_draw_w:.3g} W",
            "the RF power at an efficiency of 30 %",
        ),
    },
    Battery: {
        "telemetry": lambda *_: ("none", "the week is taken to begin at end_fraction, and the plan says so"),
    },
    Station: {
        "mask": lambda *_: ("flat at 0 deg", "no hills and no houses; the least elevations hold"),
        "hours": lambda *_: ("always open", "no weekly hours"),
    },
    Rotator: {
        "beam_width_deg": lambda *_: ("from the antenna's gain", "sqrt(27000 / gain) deg, Kraus, Antennas"),
    },
}

# What does not matter where something else is so.
_LISTENS = ("transmit_power_w", "transmit_line_loss_db", "least_transmit_elevation_deg")
_FIXED = ("antenna_gain_dbi", "pointing_loss_db")


def assumed(folder: Path) -> list[Assumption]:
    """Return every default that the files of a workspace left alone, in the order of the files.

    What several stations, people or requests leave alone in the same way stands in one
    line, with their names behind the key.

    Raises:
        InputError: the workspace cannot be read.
    """
    lines: dict[tuple[str, str, str], list[Entry]] = {}
    for entry in read_entries(folder):
        for place, value, why in _left_alone(entry.noun, entry.data, entry.noun):
            key = entry.document.path((*entry.at[:1], *place))
            lines.setdefault((key, value, why), []).append(entry)
    return [
        Assumption(_file(seats), key + _names(seats), value, why)
        for (key, value, why), seats in lines.items()
    ]


def _file(seats: list[Entry]) -> str:
    """Return the file all share, or their folder."""
    files = {entry.document.file for entry in seats}
    return files.pop() if len(files) == 1 else seats[0].document.file.partition("/")[0] + "/"


def _names(seats: list[Entry]) -> str:
    """Return whose it is, "" where the file tells."""
    alone = len(seats) == 1 and not seats[0].at
    return "" if alone else f" ({', '.join(entry.called for entry in seats)})"


def _left_alone(noun: Any, data: Data, whole: Any, at: Place = ()) -> Iterator[tuple[Place, str, str]]:  # noqa: ANN401
    """Yield (place, value, why) of each default in a noun and the nouns inside it."""
    for field in fields(noun):
        value = getattr(noun, field.name)
        place = (*at, field.name)
        written = data.get(field.name)
        if is_dataclass(value):
            yield from _left_alone(value, written or {}, whole, place)
        elif isinstance(value, tuple) and written and is_dataclass(value[0]):
            for number, (part, table) in enumerate(zip(value, written, strict=True)):
                yield from _left_alone(part, table, whole, (*place, number))
        elif written is None and not _idle(noun, field.name, whole):
            if told := FOLLOWS.get(type(noun), {}).get(field.name):
                yield place, *told(noun, whole)
            elif why := WHY.get(type(noun), {}).get(field.name):
                yield place, figure(field.name, value), why


def _idle(noun: Any, name: str, whole: Any) -> bool:  # noqa: ANN401
    """Return whether a default has no effect here."""
    if isinstance(whole, Station):
        return (name in _LISTENS and not whole.radio.transmits) or (name in _FIXED and whole.rotator is None)
    if isinstance(noun, Operator):
        return name == "travel_min" and len(noun.stations) < 2
    return isinstance(noun, Command) and noun.exchange_s is not None

"""Weeks of a few passes drawn by chance, with every limit close by: battery, store, people, order."""

from dataclasses import replace

import numpy as np

from passplan.domain.passes import Floats
from passplan.domain.problem import (
    Craft,
    OfferedPass,
    Person,
    Problem,
    StoredPartition,
    WantedCommand,
    WantedSession,
)
from passplan.domain.requests import Order
from tests.draws import Draws
from tests.second_ledger import SecondLedger
from tests.small_weeks import (
    COMMAND,
    CRAFT,
    HORIZON,
    IMAGES,
    OPERATOR,
    SESSION,
    TERMS,
    offer,
    power,
    sight,
    week,
)

_ORDERS: tuple[Order, ...] = ("after", "after_ack", "after_contact")
_FIRST_S = 7200
_HIGH_DEG = 30.0


def drawn_week(seed: int) -> Problem:
    """Return a small problem; the same seed gives the same one for ever."""
    draws = Draws(seed)
    people = tuple(_person(draws, number) for number in range(1 + draws.below(2)))
    commands = tuple(_commands(draws, pair=len(people) == 2))
    terms = replace(
        TERMS,
        close_s=10 * draws.below(2),
        give_worth_fraction=0.03 if draws.chance(0.5) else 0.0,
        give_night_min=15.0 * draws.below(2),
    )
    passes = tuple(_passes(draws, len(people), len(commands)))
    sessions = (_session(draws, passes),) if draws.chance(0.4) else ()
    return week(
        passes,
        craft=_craft(draws, passes),
        commands=commands,
        sessions=sessions,
        people=people,
        set_up_s=60.0 * draws.below(3),
        terms=terms,
    )


def _person(draws: Draws, number: int) -> Person:
    """Return an operator; the first one is licensed."""
    return replace(
        OPERATOR,
        handle=f"q{'ab'[number]}",
        may_control=number == 0 or draws.chance(0.6),
        most_duties_day=1 + draws.below(4),
        rest_s=round(draws.between(0.0, 9000.0)) if draws.chance(0.5) else 0.0,
        preparation_s=60.0 * draws.below(11),
        travel_s=60.0 * draws.below(31),
    )


def _commands(draws: Draws, *, pair: bool) -> list[WantedCommand]:
    """Return up to three commands; ones in a chain that may share a window want the same elevation."""
    found: list[WantedCommand] = []
    for number in range(draws.below(4)):
        must = draws.chance(0.3)
        command = replace(
            COMMAND,
            seconds=15 + draws.below(76),
            reply_s=round(draws.between(0.0, 3.0), 1),
            must=must,
            urgent=must and draws.chance(0.5),
            worth=0.0 if must else round(draws.between(1.0, 60.0)),
            deadline_s=float(86_400 * (number + 1)),
            least_elevation_deg=_HIGH_DEG if draws.chance(0.3) else None,
            least_charge_fraction=round(draws.between(0.5, 0.95), 2) if draws.chance(0.3) else None,
            two_people=pair and draws.chance(0.3),
        )
        order = _ORDERS[draws.below(3)]
        if found and draws.chance(0.5):
            command = replace(command, after=((number - 1, order),))
            if order != "after_contact":
                command = replace(command, least_elevation_deg=found[-1].least_elevation_deg)
        found.append(command)
    return found


def _passes(draws: Draws, people: int, commands: int) -> list[OfferedPass]:
    """Return one to four passes, some of them over each other at two stations."""
    found: list[OfferedPass] = []
    begin = _FIRST_S + draws.below(3600)
    count = 1 + draws.below(4)
    for number in range(count):
        length = 150 + 10 * draws.below(25)
        found.append(
            _pass(draws, begin, length, people=people, commands=commands, most_pieces=3 if count < 4 else 2)
        )
        overlaps = draws.chance(0.4)
        begin += draws.below(length) + 20 if overlaps else length + draws.below(6000)
        if number and draws.chance(0.2):
            begin += 80_000
    return found


def _pass(
    draws: Draws, begin: int, length: int, *, people: int, commands: int, most_pieces: int
) -> OfferedPass:
    """Return one pass with its pieces, its reaches and who and what it suits."""
    end, peak = begin + length, begin + int(draws.between(0.2, 0.8) * length)
    pieces = {(begin, end)}
    for _ in range(draws.below(most_pieces)):
        low, high = begin + draws.below(length - 100), end - draws.below(length - 100)
        if high - low >= 100:
            pieces.add((low, high))
    ordered = sorted(pieces)
    everywhere = range(len(ordered))
    return offer(
        begin,
        end,
        rate=_curve(draws, begin, end, peak),
        peak_s=peak,
        pieces=ordered,
        station=draws.below(2),
        seen=sight(begin - draws.between(0.0, 40.0), end + draws.between(0.0, 40.0)),
        success=1.0 if draws.chance(0.5) else round(draws.between(0.5, 1.0), 2),
        reaches=[(_HIGH_DEG, int(draws.between(begin, peak)), int(draws.between(peak, end)))],
        commands={
            c: [n for n in everywhere if draws.chance(0.8)] or [0]
            for c in range(commands)
            if draws.chance(0.8)
        },
        people={
            p: [n for n in everywhere if draws.chance(0.8)] or [0]
            for p in range(people)
            if p == 0 or draws.chance(0.8)
        },
        night_min=15.0 * draws.below(3),
    )


def _curve(draws: Draws, begin: int, end: int, peak: int) -> Floats:
    """Return a rate that falls on both sides of the peak, with a little roughness."""
    seconds = np.arange(begin, end, dtype=np.float64)
    far = np.abs(seconds - peak) / (end - begin)
    return np.round(draws.between(50.0, 300.0) * (1.0 - draws.between(0.0, 0.9) * far), 1)


def _craft(draws: Draws, passes: tuple[OfferedPass, ...]) -> Craft:
    """Return a satellite whose battery and store may or may not bind."""
    efficiency = 0.95 if draws.chance(0.5) else 1.0
    capacity = round(draws.between(10e3, 40e3))
    idle = power(*_light(draws, int(passes[-1].slices[-1].end_s)))
    start = round(draws.between(0.6, 1.0) * capacity)
    craft = replace(
        CRAFT,
        idle=idle,
        capacity_j=float(capacity),
        start_j=float(start),
        charge_efficiency=efficiency,
        discharge_efficiency=efficiency,
    )
    if draws.chance(0.3):
        craft = replace(craft, charge_limit_w=round(draws.between(0.3, 2.0), 2))
    floor = min(round(draws.between(0.2, 0.9) * capacity), _lowest(craft))
    size = round(draws.between(20e3, 200e3))
    kind = replace(
        IMAGES,
        on_board_byte=round(draws.between(0.0, 1.0) * size),
        made_byte_s=round(draws.between(0.0, 8.0), 2),
        halves_every_days=2.0 if draws.chance(0.3) else None,
    )
    return replace(
        craft,
        floor_j=floor,
        transmit_floor_j=floor + round(0.1 * capacity) * draws.below(2),
        end_j=round(draws.between(0.3, 1.0) * min(start, capacity)) if draws.chance(0.5) else 0.0,
        kinds=(kind,),
        partitions=(StoredPartition(name="main", size_byte=float(size), overwrites=draws.chance(0.3)),),
    )


def _lowest(craft: Craft) -> float:
    """Return the lowest charge with no contact and no session."""
    ledger, charges = SecondLedger(craft, HORIZON.end_s), [craft.start_j]
    for span in craft.idle:
        change = ledger.change_w(span.net_w) * (span.end_s - span.start_s)
        charges.append(min(charges[-1] + change, craft.capacity_j))
    return min(charges)


def _light(draws: Draws, last_s: int) -> list[tuple[float, float]]:
    """Return sun and shadow until a while after the last pass, then hardly any power at all."""
    spans: list[tuple[float, float]] = []
    now = 0.0
    while now < last_s + 3000:
        for low, high, watts in ((3000.0, 3900.0, 1.8), (1200.0, 2200.0, -2.3)):
            now = round(now + draws.between(low, high), 1)
            spans.append((now, watts))
    return [*spans, (0.0, 0.002 * draws.below(3))]


def _session(draws: Draws, passes: tuple[OfferedPass, ...]) -> WantedSession:
    """Return a session that may start at two or three moments around the passes."""
    first, last = passes[0].slices[0].start_s, passes[-1].slices[-1].end_s
    starts = {int(draws.between(first - 3000, last + 3000)) for _ in range(2 + draws.below(2))}
    return replace(
        SESSION,
        starts_s=tuple(sorted(starts)),
        length_s=120 + 60 * draws.below(10),
        draw_w=round(draws.between(0.5, 6.0), 1),
        makes=(("images", float(round(draws.between(0.0, 40e3)))),),
        worth=float(round(draws.between(5.0, 40.0))),
    )

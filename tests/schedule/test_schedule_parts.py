"""Parts of the model by themselves: cliques, idle stretches, the ledger, ladders."""

from dataclasses import replace
from itertools import product

import pytest
from hypothesis import given
from hypothesis import strategies as st

from passplan.domain.problem import Craft, IdleSpan, Problem
from passplan.domain.requests import Order
from passplan.schedule.ledger import play
from passplan.schedule.rows_charge import idle, spans_between
from passplan.schedule.rows_contacts import Interval, cliques
from passplan.schedule.whole_model import build
from tests.enumerated_choices import in_order
from tests.second_ledger import SecondLedger, stretch
from tests.small_weeks import COMMAND, CRAFT, offer, week

_TIMES = st.integers(min_value=0, max_value=30)
_INTERVALS = st.lists(st.tuples(_TIMES, st.integers(min_value=1, max_value=12)), max_size=8)
_SPANS = st.lists(
    st.tuples(st.integers(min_value=1, max_value=40), st.floats(min_value=-5.0, max_value=5.0)),
    min_size=1,
    max_size=8,
)
_LOADS = st.lists(
    st.tuples(
        st.integers(min_value=0, max_value=60),
        st.integers(min_value=1, max_value=40),
        st.floats(min_value=0.1, max_value=9.0),
    ),
    max_size=4,
)


def intervals_of(drawn: list[tuple[int, int]]) -> list[Interval]:
    """Return half-open intervals labelled by their place."""
    return [(float(start), float(start + length), label) for label, (start, length) in enumerate(drawn)]


@given(_INTERVALS)
def test_cliques_are_all_the_largest_sets_that_share_a_moment(drawn: list[tuple[int, int]]) -> None:
    # Tried at every half second: starts and ends are whole, so those moments see every set.
    intervals = intervals_of(drawn)
    moments = [n + 0.5 for n in range(45)]
    shared = {frozenset(n for a, b, n in intervals if a <= moment < b) for moment in moments}
    largest = {one for one in shared if len(one) > 1 and not any(one < other for other in shared)}
    found = [frozenset(clique) for clique in cliques(intervals)]
    assert set(found) == largest
    assert len(found) == len(set(found))


def test_intervals_that_touch_share_no_clique() -> None:
    assert list(cliques([(0.0, 10.0, 7), (10.0, 20.0, 8)])) == []
    assert list(cliques([(0.0, 10.5, 7), (10.0, 20.0, 8)])) == [[7, 8]]


def craft_of(spans: list[tuple[int, float]], start_fraction: float = 1.0) -> Craft:
    """Return a satellite with idle spans of these lengths and powers, and small lossy cells."""
    begin, found = 0, []
    for length, net_w in spans:
        end = begin + length
        found.append(IdleSpan(start_s=float(begin), end_s=float(end), sunlit=net_w > 0.0, net_w=net_w))
        begin = end
    return replace(
        CRAFT,
        idle=tuple(found),
        capacity_j=100.0,
        start_j=100.0 * start_fraction,
        charge_efficiency=0.9,
        discharge_efficiency=0.8,
        charge_limit_w=3.0,
    )


def walked(craft: Craft, loads: list[tuple[int, int, float]], start_j: float) -> list[float]:
    """Return the charge at each whole second by a plain loop, loads (start, length, W) added up."""
    charges = [start_j]
    for second in range(int(craft.idle[-1].end_s)):
        net_w = next(span.net_w for span in craft.idle if span.start_s <= second < span.end_s)
        net_w -= sum(load for start, length, load in loads if start <= second < start + length)
        change = net_w / 0.8 if net_w < 0.0 else 0.9 * min(net_w, 3.0)
        charges.append(min(charges[-1] + change, craft.capacity_j))
    return charges


@given(_SPANS, st.floats(min_value=0.0, max_value=1.0))
def test_an_idle_stretch_is_one_step(spans: list[tuple[int, float]], start_fraction: float) -> None:
    craft = craft_of(spans)
    start_j = 100.0 * start_fraction
    charges = walked(craft, [], start_j)
    whole = idle(craft, list(craft.idle))
    assert min(start_j + whole.gain_j, whole.top_j) == pytest.approx(charges[-1], abs=1e-6)
    # Charge that a full battery refuses makes the low point lower than the dip alone would.
    assert start_j + whole.dip_j >= min(charges) - 1e-6
    if max(charges) < craft.capacity_j:
        assert start_j + whole.dip_j == pytest.approx(min(charges), abs=1e-6)


@given(_SPANS, st.integers(min_value=0, max_value=300))
def test_two_idle_stretches_in_a_row_are_one(spans: list[tuple[int, float]], cut: int) -> None:
    craft = craft_of(spans)
    end = craft.idle[-1].end_s
    middle = min(float(cut), end)
    first, second = (idle(craft, spans_between(craft, a, b)) for a, b in ((0.0, middle), (middle, end)))
    whole = idle(craft, list(craft.idle))
    for start_j in (0.0, 40.0, 100.0):
        between = min(start_j + first.gain_j, first.top_j)
        after = min(between + second.gain_j, second.top_j)
        assert after == pytest.approx(min(start_j + whole.gain_j, whole.top_j), abs=1e-6)


@given(_SPANS, _LOADS, st.floats(min_value=0.0, max_value=1.0))
def test_the_ledger_is_a_walk_second_by_second(
    spans: list[tuple[int, float]], loads: list[tuple[int, int, float]], start_fraction: float
) -> None:
    craft = craft_of(spans, start_fraction)
    end = int(craft.idle[-1].end_s)
    inside = [(a, min(length, end - a), load) for a, length, load in loads if a < end]
    charges = walked(craft, inside, craft.start_j)
    charge = play(craft, [(float(a), float(a + length), load) for a, length, load in inside])
    for second in range(end + 1):
        assert charge.at(float(second)) == pytest.approx(charges[second], abs=1e-6)
    moment_s, lowest_j = charge.lowest(0.0, float(end))
    assert lowest_j == pytest.approx(min(charges), abs=1e-6)
    assert charge.at(moment_s) == pytest.approx(lowest_j)


@given(_SPANS, st.floats(min_value=0.0, max_value=1.0), st.floats(min_value=0.0, max_value=8.0))
def test_the_enumerators_stretch_is_a_walk_too(
    spans: list[tuple[int, float]], start_fraction: float, load_w: float
) -> None:
    craft = craft_of(spans)
    ledger = SecondLedger(craft, craft.idle[-1].end_s)
    changes = ledger.under(load_w)
    told, start_j = stretch(changes, craft.capacity_j), 100.0 * start_fraction
    charges = walked(craft, [(0, len(changes), load_w)], start_j)
    assert min(start_j + float(told.gain_j), float(told.top_j)) == pytest.approx(charges[-1], abs=1e-6)
    assert min(start_j + float(told.dip_j), float(told.low_j)) == pytest.approx(min(charges), abs=1e-6)
    assert ledger.replay(start_j, 0, len(changes), [(0.0, float(len(changes)), load_w)])[-1] == pytest.approx(
        charges[-1], abs=1e-6
    )


def chain_of(order: Order, elevation_deg: float | None) -> Problem:
    """Return three passes and a chain of three commands that fit together on either side of each."""
    first = replace(COMMAND, least_elevation_deg=elevation_deg)
    second, third = (replace(first, after=((n, order),)) for n in (0, 1))
    passes = [
        offer(a, a + 1000, commands=[0, 1, 2], reaches=[(30.0, a + 100, a + 900)])
        for a in (3600, 9000, 15_000)
    ]
    return week(passes, commands=[first, second, third])


@pytest.mark.parametrize("elevation_deg", [None, 30.0])
@pytest.mark.parametrize("order", ["after", "after_ack", "after_contact"])
def test_a_ladder_allows_what_the_order_does_and_nothing_else(
    order: Order, elevation_deg: float | None
) -> None:
    problem = chain_of(order, elevation_deg)
    model, names = build(problem)
    for gone in product([None, 0, 1, 2], repeat=3):
        held = model.copy()
        for command, place in enumerate(gone):
            for index in range(3):
                columns = names.up(command, index)
                held.row(
                    [(column, 1.0) for column in columns], *((1.0, 1.0) if index == place else (0.0, 0.0))
                )
        # Sides are the lay-out's to choose, so any order inside one window may be had.
        up = [None if place is None else (place, False) for place in gone]
        allowed = all(in_order(problem, up, command) for command in range(3))
        assert held.solve({}, maximise=True, seconds=5.0).found == allowed, gone

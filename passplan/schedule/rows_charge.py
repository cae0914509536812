"""Rows of the battery: charge from node to node, floors, and the end of the horizon.

Between nodes at which nothing is decided a whole run of sun and shadow is one step:
min(E + gain, top), as a chain of such steps is again one.
"""

import itertools
from bisect import bisect_right
from collections import defaultdict
from dataclasses import dataclass, replace

from passplan.domain.moments import merged
from passplan.domain.problem import Craft, IdleSpan, Problem
from passplan.domain.rules import Rule
from passplan.schedule.model import Model, Term
from passplan.schedule.variables import Variables

RULES = frozenset({Rule.BATTERY_FLOOR, Rule.TRANSMIT_FLOOR, Rule.END_CHARGE, Rule.COMMAND_CHARGE})
GRID_S = 60
SESSION_GRID_S = 300
_KJ = 1e-3


@dataclass(frozen=True, slots=True)
class Idle:
    """What an idle stretch does to the charge E at its start (J).

    Attributes:
        gain_j: change without clipping at capacity.
        top_j: most that can be left at its end.
        dip_j: lowest change inside, at most 0.
    """

    gain_j: float
    top_j: float
    dip_j: float


def idle(craft: Craft, spans: list[IdleSpan]) -> Idle:
    """Return what a run of idle spans does to the charge."""
    gain, top, dip = 0.0, craft.capacity_j, 0.0
    for span in spans:
        change = craft.stored_w(span.net_w) * (span.end_s - span.start_s)
        gain += change
        top = min(top + change, craft.capacity_j)
        dip = min(dip, gain)
    return Idle(gain, top, dip)


def spans_between(craft: Craft, begin_s: float, end_s: float) -> list[IdleSpan]:
    """Return the idle spans of a stretch, cut to it."""
    first = bisect_right(craft.idle, begin_s, key=lambda span: span.end_s)
    found = []
    for span in craft.idle[first:]:
        if span.start_s >= end_s:
            break
        found.append(replace(span, start_s=max(begin_s, span.start_s), end_s=min(end_s, span.end_s)))
    return found


def charge_rows(problem: Problem, model: Model, names: Variables) -> None:
    """Add the rows of every satellite's battery."""
    for number, craft in enumerate(problem.crafts):
        nodes = _nodes(problem, craft, number)
        loads = _loads(problem, names, craft, number, nodes)
        columns = [
            model.column(_floor_kj(craft, spans_between(craft, low, high)), craft.capacity_j * _KJ)
            for low, high in zip(nodes, [*nodes[1:], nodes[-1]], strict=True)
        ]
        model.fix(columns[0], craft.start_j * _KJ)
        for place, (low, high) in enumerate(itertools.pairwise(nodes)):
            _step(
                model,
                craft,
                columns[place],
                columns[place + 1],
                spans_between(craft, low, high),
                loads[place],
            )
        model.row([(columns[-1], 1.0), (names.short[number], 1.0)], lower=craft.end_j * _KJ)
        _starts(problem, model, names, craft, number, nodes, columns)


def _floor_kj(craft: Craft, after: list[IdleSpan]) -> float:
    """Return the least charge at a node from which the idle stretch behind it keeps the floor."""
    return (craft.floor_j - idle(craft, after).dip_j) * _KJ - 1e-6


def _nodes(problem: Problem, craft: Craft, number: int) -> list[float]:
    """Return the moments at which charge has a column: minutes of passes, edges of sessions, both ends."""
    edges = {0.0, problem.horizon.end_s}
    for offered in problem.passes:
        if offered.satellite == number:
            for part in offered.slices:
                edges |= {float(part.minute_s), float(part.minute_s + GRID_S)}
    runs = [
        (float(start), float(start + session.length_s))
        for session in problem.sessions
        if session.satellite == number
        for start in session.starts_s
    ]
    for low, high in merged(runs, 0.0, problem.horizon.end_s):
        edges |= {span.start_s for span in craft.idle if low < span.start_s < high}
        first, last = int(low // SESSION_GRID_S), int(-(-high // SESSION_GRID_S))
        edges |= {float(number_of * SESSION_GRID_S) for number_of in range(first, last + 1)}
    return sorted(edge for edge in edges if 0.0 <= edge <= problem.horizon.end_s)


def _loads(  # noqa: C901  (three kinds of load, each a loop of its own)
    problem: Problem, names: Variables, craft: Craft, number: int, nodes: list[float]
) -> dict[int, list[Term]]:
    """Return, for each step, the energy (kJ) that decisions take from it."""
    loads: dict[int, list[Term]] = defaultdict(list)
    for index, offered in enumerate(problem.passes):
        if offered.satellite != number:
            continue
        for part, column in zip(offered.slices, names.t[index], strict=True):
            place = bisect_right(nodes, part.start_s) - 1
            loads[place].append((column, _extra_w(craft, nodes[place], nodes[place + 1], craft.draw_w) * _KJ))
        first = bisect_right(nodes, min(option.start_s for option in offered.options)) - 1
        extra = _extra_w(craft, nodes[first], nodes[first + 1], craft.draw_w)
        for placing in offered.placings:
            for column in names.up(placing.command, index):
                loads[first].append((column, problem.commands[placing.command].reply_s * extra * _KJ))
    for which, session in enumerate(problem.sessions):
        if session.satellite != number:
            continue
        for start, column in zip(session.starts_s, names.run[which], strict=True):
            end = start + session.length_s
            first, last = bisect_right(nodes, start) - 1, bisect_right(nodes, end - 1e-6) - 1
            for place in range(first, last + 1):
                extra = _extra_w(craft, nodes[place], nodes[place + 1], session.draw_w)
                seconds = min(end, nodes[place + 1]) - max(start, nodes[place])
                loads[place].append((column, extra * seconds * _KJ))
    return loads


def _extra_w(craft: Craft, begin_s: float, end_s: float, draw_w: float) -> float:
    """Return by how much a load changes the rate of charge, at the worst in a stretch (negative)."""
    return min(
        craft.stored_w(span.net_w - draw_w) - craft.stored_w(span.net_w)
        for span in spans_between(craft, begin_s, end_s)
    )


def _step(
    model: Model, craft: Craft, before: int, after: int, spans: list[IdleSpan], load: list[Term]
) -> None:
    """Charge after <= charge before + gains - loads, and <= what an idle stretch can leave."""
    change = idle(craft, spans)
    terms = [(after, 1.0), (before, -1.0), *((column, -energy) for column, energy in load)]
    model.row(terms, upper=change.gain_j * _KJ)
    if change.top_j < craft.capacity_j:
        model.row([(after, 1.0)], upper=change.top_j * _KJ)


def _starts(  # noqa: C901  (contacts and commands ask at the same nodes)
    problem: Problem,
    model: Model,
    names: Variables,
    craft: Craft,
    number: int,
    nodes: list[float],
    columns: list[int],
) -> None:
    """A contact begins above the transmit floor, and with the charge its commands want."""
    starting: dict[int, list[int]] = defaultdict(list)
    floor = craft.floor_j * _KJ
    for index, offered in enumerate(problem.passes):
        if offered.satellite != number:
            continue
        for option, chosen in zip(offered.options, names.x[index], strict=True):
            starting[bisect_right(nodes, option.start_s) - 1].append(chosen)
        for placing in offered.placings:
            least = problem.commands[placing.command].least_charge_fraction
            wanted = 0.0 if least is None else least * craft.capacity_j * _KJ - floor
            if wanted <= 0.0:
                continue
            for column in names.up(placing.command, index):
                for number_o, chosen in enumerate(names.x[index]):
                    place = bisect_right(nodes, offered.options[number_o].start_s) - 1
                    model.row(
                        [(columns[place], 1.0), (column, -wanted), (chosen, -wanted)], lower=floor - wanted
                    )
    more = craft.transmit_floor_j * _KJ - floor
    if more > 0.0:
        for place, chosen_here in sorted(starting.items()):
            model.row([(columns[place], 1.0), *((column, -more) for column in chosen_here)], lower=floor)

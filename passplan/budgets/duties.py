"""Who could run which pass: hours, days away, night minutes."""

from collections.abc import Mapping, Sequence

from passplan.domain.constants import MINUTE_S
from passplan.domain.mission import Mission
from passplan.domain.moments import Horizon, Span, away_spans, local, weekly_spans, without
from passplan.domain.passes import Pass
from passplan.domain.people import Operator
from passplan.domain.problem import Duty, Option
from passplan.domain.rules import Rule

RULES = frozenset({Rule.OPERATOR_STATION, Rule.OPERATOR_HOURS})  # kept by offering no other duty


def free_spans(operator: Operator, horizon: Horizon) -> list[Span]:
    """Return the spans (s of the week) in which an operator may serve: hours less days away."""
    hours = weekly_spans(operator.hours, operator.time_zone, horizon)
    return without(hours, away_spans(operator.away, operator.time_zone, horizon))


def duties(
    mission: Mission,
    horizon: Horizon,
    sight: Pass,
    pieces: Sequence[Option],
    free: Mapping[str, Sequence[Span]],
    nights: Mapping[str, Sequence[Span]],
) -> tuple[Duty, ...]:
    """Return the duties that a pass could be, one an operator of its station with a fitting piece.

    Args:
        mission: for the operators, in whose order indices count.
        horizon: the week.
        sight: the pass.
        pieces: its contact options.
        free: handle to free spans.
        nights: handle to night spans.
    """
    found = []
    for index, operator in enumerate(mission.operators):
        if sight.station not in operator.stations:
            continue
        ready_s = operator.preparation_min * MINUTE_S
        fitting = tuple(
            number
            for number, piece in enumerate(pieces)
            if any(
                low <= piece.start_s - ready_s and piece.end_s <= high for low, high in free[operator.handle]
            )
        )
        if not fitting:
            continue
        begin, end = sight.aos_s - ready_s, sight.los_s
        dark = sum(max(0.0, min(end, high) - max(begin, low)) for low, high in nights[operator.handle])
        days = {local(horizon.utc(pieces[n].start_s), operator.time_zone).toordinal() for n in fitting}
        found.append(
            Duty(
                operator=index,
                options=fitting,
                load_min=(end - begin) / MINUTE_S,
                night_min=dark / MINUTE_S,
                days=tuple(sorted(days)),
            )
        )
    return tuple(found)

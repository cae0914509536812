"""The people as the rule of thumb sees them: who is where, and who may take one more duty."""

from collections.abc import Callable, Sequence
from itertools import pairwise

from passplan.domain.constants import HOUR_S, MINUTE_S
from passplan.domain.mission import Mission
from passplan.domain.moments import Horizon, away_spans, local, week_of, weekly_spans, without
from passplan.domain.people import Operator
from tests.rough_sky import UsablePass


class People:
    """Who is where, and who may take one more duty."""

    def __init__(self, mission: Mission, horizon: Horizon) -> None:
        self._mission, self._horizon = mission, horizon
        self._taken: dict[str, list[UsablePass]] = {one.handle: [] for one in mission.operators}
        self._open = {
            one.handle: without(
                weekly_spans(one.hours, one.time_zone, horizon),
                away_spans(one.away, one.time_zone, horizon),
            )
            for one in mission.operators
        }

    def add(self, operator: Operator, one: UsablePass) -> None:
        """Give an operator a duty."""
        self._taken[operator.handle].append(one)

    def free(self, one: UsablePass) -> Operator | None:
        """Return the least-loaded licensed operator who may take a pass; first in the file among equals."""
        able = [person for person in self._mission.operators if self._able(person, one)]
        return min(able, key=self._load_s, default=None)

    def _load_s(self, operator: Operator) -> float:
        prepared_s = operator.preparation_min * MINUTE_S
        return sum(one.end_s - one.start_s + prepared_s for one in self._taken[operator.handle])

    def _able(self, person: Operator, one: UsablePass) -> bool:
        begin_s = one.start_s - person.preparation_min * MINUTE_S
        return (
            person.may_control
            and one.station in person.stations
            and any(a <= begin_s and one.end_s <= b for a, b in self._open[person.handle])
            and self._under_caps(person, one)
            and self._rested(person, one)
        )

    def _under_caps(self, person: Operator, one: UsablePass) -> bool:
        taken = self._taken[person.handle]

        def day(other: UsablePass) -> object:
            return local(self._horizon.utc(other.start_s), person.time_zone).date()

        def week(other: UsablePass) -> object:
            return week_of(self._horizon.utc(other.start_s))

        return (
            _alike(taken, one, day) < person.most_duties_day
            and _alike(taken, one, week) < person.most_duties_week
        )

    def _rested(self, person: Operator, one: UsablePass) -> bool:
        """Return whether duties with this one keep apart: preparation, travel, rest between sittings."""
        ordered = sorted([*self._taken[person.handle], one], key=lambda other: other.start_s)
        sitting_s = self._mission.planning.sitting_gap_h * HOUR_S
        for before, after in pairwise(ordered):
            free_s = after.start_s - person.preparation_min * MINUTE_S - before.end_s
            moves = before.station != after.station
            needed_s = person.travel_min * MINUTE_S if moves else 0.0
            if moves or after.start_s - before.start_s >= sitting_s:
                needed_s = max(needed_s, person.rest_h * HOUR_S)
            if free_s < needed_s:
                return False
        return True


def _alike(taken: Sequence[UsablePass], one: UsablePass, mark: Callable[[UsablePass], object]) -> int:
    """Return how many duties share a mark (a day, a week) with `one`."""
    return sum(mark(other) == mark(one) for other in taken)

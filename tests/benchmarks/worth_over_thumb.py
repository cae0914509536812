"""How much more worth the optimiser lays out than best elevation first."""

import statistics
from dataclasses import dataclass

from passplan.schedule.outcome import Outcome, outcome
from passplan.schedule.solve import solve
from tests.benchmarks.aloud import say
from tests.generated import WeekKind
from tests.planning_weeks import joined_week
from tests.thumb_week import brought_kb, plans_by_hand


@dataclass(frozen=True, kw_only=True, slots=True)
class Compared:
    """One week by the optimiser over the same by hand.

    Attributes:
        worth_ratio, byte_ratio: over the better plan by hand.
        anywhere_ratio: worth over the one whose uplink may stand anywhere in a pass.
    """

    worth_ratio: float
    anywhere_ratio: float
    byte_ratio: float


def _counted(made: Outcome) -> str:
    """Return contacts, commands, worth and data in words."""
    commands = sum(len(laid.commands) for laid in made.contacts)
    return f"{len(made.contacts):3} contacts {commands:3} commands {made.worth():9.1f}"


def compare(kind: WeekKind, seed: int, limit_s: float) -> Compared:
    """Plan one week by hand and by the optimiser, nothing given, and print both."""
    ready = joined_week(kind, seed, give_fraction=0.0)
    plans = plans_by_hand(ready)
    thumb = max(plans, key=Outcome.worth)
    solved = solve(ready.problem, time_limit_s=limit_s)
    ours = outcome(ready.problem, solved.names, solved.values)
    compared = Compared(
        worth_ratio=ours.worth() / thumb.worth(),
        anywhere_ratio=ours.worth() / plans[0].worth(),
        byte_ratio=brought_kb(ours) / brought_kb(thumb),
    )
    proven = all(step.proven for step in solved.steps)
    borne = all(made.bears(number) for made in (ours, *plans) for number in range(len(made.stocks)))
    say(
        f"  {kind:11} {seed:2}  ours {_counted(ours)}  by hand {_counted(thumb)}  "
        f"worth x {compared.worth_ratio:.4f} ({compared.anywhere_ratio:.4f})  "
        f"bytes x {compared.byte_ratio:.4f}  {sum(solved.seconds.values()):5.1f} s"
        f"{'' if proven else ', not all proven'}{'' if borne else ', A FLOOR OR THE END CHARGE IS MISSED'}"
    )
    return compared


def against_thumb(pairs: list[tuple[WeekKind, int]], limit_s: float) -> None:
    """Print worth and bytes over best elevation first, median and least."""
    say(
        "(e) laid-out worth, give 0, over best elevation first: the better of uplink anywhere and by the peak"
    )
    say("    bar: 1.15 in the median of 20 easy seeds, never under 1")
    for kind in dict.fromkeys(kind for kind, _ in pairs):
        found = [compare(kind, seed, limit_s) for other, seed in pairs if other == kind]
        worth, byte = [one.worth_ratio for one in found], [one.byte_ratio for one in found]
        say(
            f"  {kind}, {len(found)} seeds: "
            f"worth median x {statistics.median(worth):.4f}, least x {min(worth):.4f} "
            f"(uplink anywhere {statistics.median(one.anywhere_ratio for one in found):.4f}); "
            f"bytes median x {statistics.median(byte):.4f}, least x {min(byte):.4f}"
        )

"""How a check gathers what it finds: broken rules, and the tightest place where none is broken."""

import math
from dataclasses import dataclass

from passplan.domain.rules import Rule
from passplan.domain.verdict import Finding, Margin

# The planner keeps these as margins, so that a plan never fails on rounding.
HALF_SECOND = 0.5
TWENTIETH_DEG = 0.05
HALF_PERCENT = 0.005


@dataclass(frozen=True, kw_only=True, slots=True)
class Reading:
    """What one check found."""

    findings: tuple[Finding, ...]
    margin: Margin | None = None


class Tally:
    """Collects the findings of one rule and remembers its tightest place.

    Attributes:
        rule: which rule is read.
        unit: of every slack weighed.
    """

    def __init__(self, rule: Rule, unit: str = "") -> None:
        self.rule = rule
        self.unit = unit
        self._findings: list[Finding] = []
        self._margin: Margin | None = None

    def weigh(self, where: str, slack: float, allowed: float, sentence: str) -> None:
        """Take one place into account.

        Args:
            where: contact, command, operator, satellite or session.
            slack: how far the rule is from being broken, negative when it is; not a
                number counts as broken.
            allowed: disagreement that is forgiven, in the same unit.
            sentence: what is wrong, used when it is.
        """
        if not slack >= -allowed:
            self._break(where, sentence, -slack)
        elif self._margin is None or slack < self._margin.value:
            self._margin = Margin(rule=self.rule, where=where, value=max(0.0, slack), unit=self.unit)

    def compare(self, where: str, off: float, allowed: float, sentence: str) -> None:
        """Take down a figure of the plan that is off by more than is allowed; it gives no margin."""
        if not off <= allowed:
            self._break(where, sentence, off)

    def fail(self, where: str, sentence: str) -> None:
        """Take down a broken rule that has no figure."""
        self._findings.append(Finding(rule=self.rule, where=where, sentence=sentence))

    def _break(self, where: str, sentence: str, shortfall: float) -> None:
        figure = 0.0 if math.isnan(shortfall) else shortfall
        self._findings.append(
            Finding(rule=self.rule, where=where, sentence=sentence, shortfall=figure, unit=self.unit)
        )

    @property
    def reading(self) -> Reading:
        """What was found, in the order in which it was found."""
        return Reading(findings=tuple(self._findings), margin=self._margin)

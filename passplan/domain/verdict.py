"""What the second reading found."""

from dataclasses import dataclass

from passplan.domain.rules import Rule


@dataclass(frozen=True, kw_only=True, slots=True)
class Finding:
    """One broken rule in one place.

    Attributes:
        rule: which.
        where: contact id, command, operator, satellite or session it is about.
        sentence: what is wrong, with figures.
        shortfall: by how much, in `unit`; what the planner tightens its row by.
        unit: "s", "deg", "byte", "J", "dB", "duties", ... or "" for a yes-or-no rule.
    """

    rule: Rule
    where: str
    sentence: str
    shortfall: float = 0.0
    unit: str = ""


@dataclass(frozen=True, kw_only=True, slots=True)
class Margin:
    """How close the plan comes to breaking a rule, at its tightest place; never negative when it holds."""

    rule: Rule
    where: str
    value: float
    unit: str


@dataclass(frozen=True, kw_only=True, slots=True)
class Verdict:
    """The second opinion on one plan.

    Attributes:
        findings: broken rules; none means the plan may be published.
        checked: the rules read, in the order of the list.
        margins: the tightest place of each rule that has a figure.
        lowest_fraction: satellite name to the lowest charge of its own ledger.
        lowest_s: satellite name to the second at which it was met.
        downlink_byte: bytes its own link sum says come down, by contact id.
        shared: what both readings stand on, for people ("SGP4").
    """

    findings: tuple[Finding, ...]
    checked: tuple[Rule, ...]
    margins: tuple[Margin, ...] = ()
    lowest_fraction: dict[str, float]
    lowest_s: dict[str, float]
    downlink_byte: dict[str, float]
    shared: str = "the SGP4 engine"

    @property
    def ok(self) -> bool:
        """True when nothing is broken."""
        return not self.findings

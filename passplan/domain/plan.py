"""What was decided for a week, as plain facts."""

from dataclasses import dataclass, field
from datetime import datetime
from typing import Literal

from passplan.domain.moments import Horizon
from passplan.domain.verdict import Verdict

SlotKind = Literal["acquire", "uplink", "downlink", "close"]


@dataclass(frozen=True, kw_only=True, slots=True)
class Slot:
    """A stretch of one contact in whole seconds of the week, half-open.

    Attributes:
        kind: what is done in it.
        command: the command an uplink slot is for, one slot a command; "" elsewhere.
    """

    kind: SlotKind
    start_s: int
    end_s: int
    command: str = ""


@dataclass(frozen=True, kw_only=True, slots=True)
class Carried:
    """Bytes of one kind that one contact is expected to bring down if it works.

    Attributes:
        made_day: day of the week the data were made (0 = Monday; -1 = on board at the
            start), or None for a kind that does not age.
        byte: whole kind and day, before the chance of success is applied.
    """

    kind: str
    made_day: int | None
    byte: float


@dataclass(frozen=True, kw_only=True, slots=True)
class Contact:
    """One contact: who speaks when with which satellite.

    Attributes:
        id: short name people type, station code and a number given once ("QUA-01").
        operators: handles, the licensed one who controls first.
        listeners: station codes that listen along.
        aos_s, tca_s, los_s: of the pass above the mask; half seconds matter to nobody here.
        azimuths, max_elevation_deg, tca_range_km: of the pass, as in `Pass`.
        start_s, end_s: the contact itself, whole seconds, acquire to close.
        slots: in order, touching or with gaps, inside [start_s, end_s].
        success_fraction: chance that it works.
        charge_start_fraction, charge_lowest_fraction: at its start, and lowest in it.
        hand_over_from, hand_over_to: ids of the partner contacts, "" for none.
    """

    id: str
    satellite: str
    station: str
    operators: tuple[str, ...]
    listeners: tuple[str, ...] = ()
    aos_s: float
    tca_s: float
    los_s: float
    aos_azimuth_deg: float
    tca_azimuth_deg: float
    los_azimuth_deg: float
    max_elevation_deg: float
    tca_range_km: float
    start_s: int
    end_s: int
    slots: tuple[Slot, ...]
    carried: tuple[Carried, ...] = ()
    success_fraction: float
    charge_start_fraction: float
    charge_lowest_fraction: float
    hand_over_from: str = ""
    hand_over_to: str = ""

    @property
    def commands(self) -> tuple[str, ...]:
        """Names of the commands that go up, in order."""
        return tuple(slot.command for slot in self.slots if slot.kind == "uplink")

    @property
    def downlink_byte(self) -> dict[str, float]:
        """Expected bytes by kind if the contact works."""
        total: dict[str, float] = {}
        for part in self.carried:
            total[part.kind] = total.get(part.kind, 0.0) + part.byte
        return total

    def seconds_of(self, kind: SlotKind) -> int:
        """Return the seconds of all slots of one kind."""
        return sum(slot.end_s - slot.start_s for slot in self.slots if slot.kind == kind)


@dataclass(frozen=True, kw_only=True, slots=True)
class CommandOutcome:
    """What became of one command.

    Attributes:
        contact: id of the contact it goes up in, "" when it does not.
        left_for_next_week: it goes up only in the look-ahead.
        reason: in words, why it is not placed; "" when it is.
    """

    name: str
    satellite: str
    must: bool
    placed: bool
    contact: str = ""
    left_for_next_week: bool = False
    reason: str = ""


@dataclass(frozen=True, kw_only=True, slots=True)
class SessionOutcome:
    """What became of one payload session; start_s is None when it does not run."""

    name: str
    satellite: str
    start_s: int | None
    end_s: int | None
    in_lookahead: bool = False
    reason: str = ""


@dataclass(frozen=True, kw_only=True, slots=True)
class StepReport:
    """One objective of the chain.

    Attributes:
        name: what it asks for, in words.
        unit: of value, bound, give and kept.
        value: best found when the step was solved.
        bound: no plan can do better, given the earlier steps and their gives.
        give: how much of `value` the later steps were allowed to give away.
        kept: what the plan has.
        proven: |bound - value| within 1e-4 max(1, |value|).
    """

    name: str
    unit: str
    value: float
    bound: float
    give: float
    kept: float
    proven: bool


@dataclass(frozen=True, kw_only=True, slots=True)
class WorthReport:
    """Worth of week and look-ahead together, in expected kB of `low` data, and the week's share.

    Attributes:
        bound: of the model, nothing given.
        best_laid_out: laid-out worth of the worth step's solution, nothing given.
        laid_out: of the plan.
        gap_fraction: (bound - best_laid_out) / bound, never under 0.
        week_laid_out: the part of `laid_out` that falls in the week.
    """

    bound: float
    best_laid_out: float
    laid_out: float
    gap_fraction: float
    week_laid_out: float


@dataclass(frozen=True, kw_only=True, slots=True)
class BatteryReport:
    """The battery over week and look-ahead.

    Attributes:
        floor_fraction: asked for; floor_in_force_fraction: what the bus alone can hold.
        lowest_fraction, lowest_s: over the week.
        start_fraction, end_fraction: at Monday 00:00 and at the end of the horizon.
        end_wanted_fraction: asked for at the end of the horizon.
        start_assumed: True when there was no telemetry and the start is a guess.
        shadow_s: spans in shadow.
        trace: (second of the week, fraction) at every change of slope.
    """

    satellite: str
    floor_fraction: float
    floor_in_force_fraction: float
    lowest_fraction: float
    lowest_s: float
    start_fraction: float
    end_fraction: float
    end_wanted_fraction: float
    start_assumed: bool
    shadow_s: tuple[tuple[float, float], ...] = ()
    trace: tuple[tuple[float, float], ...] = ()


@dataclass(frozen=True, kw_only=True, slots=True)
class DataReport:
    """One kind of data over the week; down is expected, chance of success applied.

    Attributes:
        backlog_weeks: weeks that what is on board at the end would take to clear at this
            week's rate of this kind with nothing new made; None when nothing comes down.
    """

    satellite: str
    kind: str
    on_board_start_byte: float
    made_byte: float
    down_byte: float
    lost_byte: float
    on_board_end_byte: float
    backlog_weeks: float | None


@dataclass(frozen=True, kw_only=True, slots=True)
class Share:
    """One operator's part of the week; offered_min counts the duty minutes of all passes in their hours."""

    operator: str
    contacts: int
    sittings: int
    duty_min: float
    night_min: float
    offered_min: float


@dataclass(frozen=True, kw_only=True, slots=True)
class Silence:
    """The longest time without a contact of a transmitting station, seconds of the week."""

    satellite: str
    from_s: float
    to_s: float

    @property
    def hours(self) -> float:
        """Length in hours."""
        return (self.to_s - self.from_s) / 3600.0


@dataclass(frozen=True, kw_only=True, slots=True)
class ElementsUsed:
    """The element set the plan stands on, with its age at the contact farthest from its epoch."""

    satellite: str
    name: str
    number: int | None
    epoch_s: float
    source: str
    farthest_days: float
    old: bool = False


@dataclass(frozen=True, kw_only=True, slots=True)
class Plan:
    """One edition of one week.

    Attributes:
        made_from: (file, SHA-256 of its bytes) of every input, sorted.
        contacts: of the week, in order of start; `lookahead`: planned beyond it, not published.
        notices: sentences the lead must read first (floor not held, must not placed, ...).
        good: False when a must or the floor is not met (exit code 1).
        steps: objectives in order.
    """

    mission: str
    horizon: Horizon
    edition: int
    made_from: tuple[tuple[str, str], ...] = ()
    elements: tuple[ElementsUsed, ...]
    proven: bool
    good: bool
    notices: tuple[str, ...] = ()
    steps: tuple[StepReport, ...]
    worth: WorthReport
    silences: tuple[Silence, ...]
    contacts: tuple[Contact, ...]
    lookahead: tuple[Contact, ...] = ()
    commands: tuple[CommandOutcome, ...]
    sessions: tuple[SessionOutcome, ...]
    batteries: tuple[BatteryReport, ...]
    data: tuple[DataReport, ...]
    shares: tuple[Share, ...]
    verdict: Verdict | None = None
    gives: dict[str, str] = field(default_factory=dict)

    @property
    def all_contacts(self) -> tuple[Contact, ...]:
        """Contacts of the week and of the look-ahead, in order."""
        return self.contacts + self.lookahead


@dataclass(frozen=True, kw_only=True, slots=True)
class IssuedPlan:
    """One edition as it was handed out: the plan and the aware moment at which it was made."""

    plan: Plan
    made_utc: datetime

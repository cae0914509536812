"""A small mission and one edition of its week, built by hand; every feature of a plan once."""

from datetime import UTC, datetime, time

from passplan.domain.mission import Mission
from passplan.domain.moments import Horizon, WeeklyHours
from passplan.domain.people import Operator
from passplan.domain.plan import (
    BatteryReport,
    Carried,
    CommandOutcome,
    Contact,
    DataReport,
    ElementsUsed,
    Plan,
    SessionOutcome,
    Share,
    Silence,
    Slot,
    StepReport,
    WorthReport,
)
from passplan.domain.requests import Command
from passplan.domain.rules import Rule
from passplan.domain.satellite import Battery, DataKind, Partition, Power, Radio, Satellite, Store
from passplan.domain.station import FixedAntenna, GroundRadio, Rotator, Station
from passplan.domain.verdict import Margin, Verdict

WEEK = "2026-W50"
HORIZON = Horizon(week=WEEK)
DAY = 86_400
ALWAYS = (WeeklyHours(begin=time(0), end=time(0)),)


def satellite(name: str = "Teasel-1") -> Satellite:
    return Satellite(
        name=name,
        number=100123,
        radio=Radio(down_hz=437.31e6, up_hz=437.31e6, transmit_power_w=0.5),
        power=Power(array_w=8.0, bus_load_w=2.0),
        battery=Battery(capacity_wh=37.0),
        store=Store(
            partitions=(Partition(name="main", size_byte=64e6),),
            kinds=(DataKind(name="images", weight="high"), DataKind(name="health", weight="low")),
        ),
    )


def mission() -> Mission:
    rotator = Rotator()
    return Mission(
        name="Teasel",
        satellites=(satellite(),),
        stations=(
            Station(
                name="Quarry Hill",
                code="QUA",
                latitude_deg=53.3,
                longitude_deg=-6.4,
                time_zone="Europe/Dublin",
                rotator=rotator,
            ),
            Station(
                name="Skerry",
                code="SKE",
                latitude_deg=63.4,
                longitude_deg=10.4,
                time_zone="Europe/Oslo",
                rotator=rotator,
            ),
            Station(
                name="Tussock Bay, shed; north",
                code="TUS",
                latitude_deg=-45.9,
                longitude_deg=170.5,
                time_zone="Pacific/Auckland",
                rotator=rotator,
            ),
            Station(
                name="Low Field",
                code="LOW",
                latitude_deg=52.0,
                longitude_deg=5.0,
                time_zone="Europe/Amsterdam",
                fixed_antenna=FixedAntenna(gain_table=((0.0, 2.0),)),
                radio=GroundRadio(transmits=False),
            ),
        ),
        operators=(
            Operator(
                handle="QX3AB", stations=("QUA",), may_control=True, time_zone="Europe/Dublin", hours=ALWAYS
            ),
            Operator(
                handle="QY1K",
                stations=("SKE", "QUA"),
                may_control=True,
                time_zone="Europe/Oslo",
                hours=ALWAYS,
            ),
            Operator(
                handle="QT5Z",
                stations=("TUS",),
                may_control=True,
                time_zone="Pacific/Auckland",
                hours=ALWAYS,
                preparation_min=22.5,
            ),
            Operator(handle="Fern", stations=("LOW", "QUA"), time_zone="Europe/Amsterdam", hours=ALWAYS),
        ),
        commands=(Command(name="load-114", satellite="Teasel-1"),),
    )


def contact(
    ident: str,
    begin: tuple[int, int, int],
    length_s: int,
    operators: tuple[str, ...],
    *,
    commands: tuple[str, ...] = (),
    byte: dict[str, float] | None = None,
    highest_deg: float = 40.0,
    charge: float = 0.78,
    hand_over: tuple[str, str] = ("", ""),
    listeners: tuple[str, ...] = (),
    satellite: str = "Teasel-1",
) -> Contact:
    """Build a contact that begins at (day, hour, minute) and 10 s, commands 40 s each, the rest downlink."""
    start = begin[0] * DAY + begin[1] * 3600 + begin[2] * 60 + 10
    end = start + length_s
    slots = [Slot(kind="acquire", start_s=start, end_s=start + 45)]
    for name in commands:
        at = slots[-1].end_s
        slots.append(Slot(kind="uplink", start_s=at, end_s=at + 40, command=name))
    slots.append(Slot(kind="downlink", start_s=slots[-1].end_s, end_s=end - 10))
    slots.append(Slot(kind="close", start_s=end - 10, end_s=end))
    return Contact(
        id=ident,
        satellite=satellite,
        station=ident.split("-", maxsplit=1)[0],
        operators=operators,
        listeners=listeners,
        aos_s=start - 11.4,
        tca_s=start + length_s / 2,
        los_s=end + 12.6,
        aos_azimuth_deg=22.6,
        tca_azimuth_deg=92.0,
        los_azimuth_deg=161.0,
        max_elevation_deg=highest_deg,
        tca_range_km=700.0,
        start_s=start,
        end_s=end,
        slots=tuple(slots),
        carried=tuple(Carried(kind=kind, made_day=None, byte=value) for kind, value in (byte or {}).items()),
        success_fraction=0.9,
        charge_start_fraction=charge + 0.02,
        charge_lowest_fraction=charge,
        hand_over_from=hand_over[0],
        hand_over_to=hand_over[1],
    )


def contacts() -> tuple[Contact, ...]:
    return (
        contact(
            "QUA-01",
            (0, 5, 12),
            410,
            ("QX3AB",),
            commands=("clock 2026-12-07", "load-114"),
            byte={"images": 290e3, "health": 20e3},
            highest_deg=47.3,
            hand_over=("", "SKE-01"),
        ),
        contact(
            "SKE-01",
            (0, 5, 20),
            300,
            ("QY1K",),
            byte={"images": 350e3},
            highest_deg=23.0,
            charge=0.76,
            hand_over=("QUA-01", ""),
        ),
        contact(
            "TUS-01", (0, 11, 47), 430, ("QT5Z",), byte={"images": 400e3}, highest_deg=66.0, charge=0.743
        ),
        contact("LOW-01", (0, 18, 2), 300, ("Fern",), byte={"health": 640.0}, highest_deg=18.0),
        contact(
            "QUA-02",
            (0, 23, 56),
            420,
            ("QX3AB", "Fern"),
            commands=("load-115", "load-116", "safe-mode-timer", "load-117"),
            byte={"health": 31e3},
            charge=0.71,
            listeners=("LOW",),
        ),
        contact("SKE-02", (1, 6, 30), 480, ("QY1K",), commands=("clock 2026-12-08",), byte={"images": 512e3}),
        contact("TUS-02", (1, 12, 5), 200, ("QT5Z",), byte={"images": 98e3}),
        contact("QUA-03", (1, 17, 40), 520, ("QX3AB",), byte={"images": 611e3}, charge=0.72),
        contact("SKE-03", (1, 19, 15), 330, ("QY1K",), byte={"images": 204e3}),
        contact(
            "QUA-04",
            (2, 5, 1),
            360,
            ("QY1K",),
            commands=("clock 2026-12-09", "load-118"),
            byte={"images": 222e3},
        ),
        contact("TUS-03", (2, 10, 55), 450, ("QT5Z",), byte={"images": 431e3}, charge=0.73),
        contact("SKE-04", (2, 21, 59), 400, ("QY1K",), byte={"images": 377e3}, charge=0.79),
    )


def verdict() -> Verdict:
    return Verdict(
        findings=(),
        checked=tuple(Rule)[:24],
        margins=(
            Margin(rule=Rule.BATTERY_FLOOR, where="Teasel-1", value=0.11 * 37 * 3600, unit="J"),
            Margin(rule=Rule.REST, where="QX3AB", value=1200.0, unit="s"),
            Margin(rule=Rule.IN_VIEW, where="SKE-01", value=1.4, unit="deg"),
            Margin(rule=Rule.LINK_CLOSES, where="TUS-02", value=0.62, unit="dB"),
            Margin(rule=Rule.STORE, where="Teasel-1", value=2_400_000.0, unit="byte"),
            Margin(rule=Rule.BYTES_FIT, where="QUA-02", value=12.0, unit="byte"),
            Margin(rule=Rule.DUTIES_DAY, where="QX3AB", value=0.0, unit="duties"),
        ),
        lowest_fraction={"Teasel-1": 0.711},
        lowest_s={"Teasel-1": 86_200.0},
        downlink_byte={},
    )


def commands() -> tuple[CommandOutcome, ...]:
    placed = [
        CommandOutcome(
            name=name, satellite="Teasel-1", must=name.startswith("clock"), placed=True, contact=each.id
        )
        for each in contacts()
        for name in each.commands
    ]
    return (
        *placed,
        CommandOutcome(
            name="load-131",
            satellite="Teasel-1",
            must=False,
            placed=False,
            reason="no licensed operator is free before Thu 18:00",
        ),
        CommandOutcome(
            name="load-132", satellite="Teasel-1", must=False, placed=False, left_for_next_week=True
        ),
    )


def plan() -> Plan:
    return Plan(
        mission="Teasel",
        horizon=HORIZON,
        edition=1,
        elements=(
            ElementsUsed(
                satellite="Teasel-1",
                name="TEASEL-1",
                number=100123,
                epoch_s=-20_000.0,
                source="elements/teasel-1.tle, line 1",
                farthest_days=3.1,
            ),
        ),
        proven=True,
        good=True,
        steps=(
            StepReport(name="musts placed", unit="commands", value=3, bound=3, give=0, kept=3, proven=True),
            StepReport(
                name="worth",
                unit="kB of low data",
                value=10412.4,
                bound=10412.6,
                give=312.4,
                kept=10240.1,
                proven=True,
            ),
            StepReport(
                name="sittings at night", unit="min", value=0, bound=0, give=15, kept=12.5, proven=True
            ),
            StepReport(
                name="largest share of any one person",
                unit="%",
                value=31.25,
                bound=31.25,
                give=0,
                kept=31.25,
                proven=True,
            ),
        ),
        worth=WorthReport(
            bound=10412.6, best_laid_out=10400.0, laid_out=10231.0, gap_fraction=0.0012, week_laid_out=8700.0
        ),
        silences=(Silence(satellite="Teasel-1", from_s=2 * DAY + 79_550.0, to_s=3 * DAY + 63_900.0),),
        contacts=contacts(),
        commands=commands(),
        sessions=(
            SessionOutcome(
                name="image-north", satellite="Teasel-1", start_s=DAY + 37_200, end_s=DAY + 38_100
            ),
            SessionOutcome(
                name="image-south",
                satellite="Teasel-1",
                start_s=None,
                end_s=None,
                reason="the battery would fall to 58 % at Tue 03:12",
            ),
            SessionOutcome(
                name="listen",
                satellite="Teasel-1",
                start_s=7 * DAY + 600,
                end_s=7 * DAY + 1200,
                in_lookahead=True,
            ),
        ),
        batteries=(
            BatteryReport(
                satellite="Teasel-1",
                floor_fraction=0.6,
                floor_in_force_fraction=0.6,
                lowest_fraction=0.7104,
                lowest_s=86_300.0,
                start_fraction=0.9,
                end_fraction=0.84,
                end_wanted_fraction=0.8,
                start_assumed=True,
            ),
        ),
        data=(
            DataReport(
                satellite="Teasel-1",
                kind="images",
                on_board_start_byte=4.0e6,
                made_byte=3.1e6,
                down_byte=2.9e6,
                lost_byte=120e3,
                on_board_end_byte=4.08e6,
                backlog_weeks=1.41,
            ),
            DataReport(
                satellite="Teasel-1",
                kind="health",
                on_board_start_byte=0.0,
                made_byte=61e3,
                down_byte=46e3,
                lost_byte=0.0,
                on_board_end_byte=15e3,
                backlog_weeks=None,
            ),
        ),
        shares=(
            Share(
                operator="QX3AB", contacts=3, sittings=3, duty_min=67.0, night_min=22.0, offered_min=1260.0
            ),
            Share(operator="QY1K", contacts=5, sittings=5, duty_min=106.0, night_min=0.0, offered_min=2040.0),
            Share(operator="QT5Z", contacts=3, sittings=3, duty_min=85.5, night_min=60.0, offered_min=900.0),
            Share(operator="Fern", contacts=2, sittings=2, duty_min=42.0, night_min=0.0, offered_min=0.0),
        ),
        verdict=verdict(),
        gives={"worth": "3 % (0.19 MB) for three night sittings fewer"},
    )


MADE = datetime(2026, 12, 5, 18, 20, tzinfo=UTC)

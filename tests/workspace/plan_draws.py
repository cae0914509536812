"""Plans drawn by chance, and one made by hand; their figures already as round as the stored form."""

from datetime import UTC, datetime

from hypothesis import strategies as st

from passplan.domain.moments import Horizon
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
from passplan.domain.rules import Rule
from passplan.domain.verdict import Finding, Margin, Verdict

MADE = datetime(2026, 12, 6, 20, 15, tzinfo=UTC)


def rounded(low: float, high: float, digits: int) -> st.SearchStrategy[float]:
    return st.floats(low, high, allow_nan=False).map(lambda value: round(value, digits) + 0.0)


TEXT = st.text(max_size=12)
MOMENT = rounded(-2e6, 1.2e6, 3)
SECOND = st.integers(-1000, 800_000)
FRACTION = rounded(0.0, 1.0, 6)
BYTE = rounded(0.0, 1e9, 1)
DEGREE = rounded(-360.0, 360.0, 4)
FIGURE = rounded(-1e9, 1e9, 6) | st.sampled_from([float("inf"), float("-inf"), 0.0])
COUNT = st.integers(0, 99)

SLOTS = st.builds(
    Slot,
    kind=st.sampled_from(["acquire", "uplink", "downlink", "close"]),
    start_s=SECOND,
    end_s=SECOND,
    command=TEXT,
)
CARRIED = st.builds(Carried, kind=TEXT, made_day=st.none() | st.integers(-1, 7), byte=BYTE)
CONTACTS = st.builds(
    Contact,
    id=TEXT,
    satellite=TEXT,
    station=TEXT,
    operators=st.lists(TEXT, max_size=2).map(tuple),
    listeners=st.lists(TEXT, max_size=2).map(tuple),
    aos_s=MOMENT,
    tca_s=MOMENT,
    los_s=MOMENT,
    aos_azimuth_deg=DEGREE,
    tca_azimuth_deg=DEGREE,
    los_azimuth_deg=DEGREE,
    max_elevation_deg=DEGREE,
    tca_range_km=rounded(0.0, 1e5, 3),
    start_s=SECOND,
    end_s=SECOND,
    slots=st.lists(SLOTS, max_size=3).map(tuple),
    carried=st.lists(CARRIED, max_size=2).map(tuple),
    success_fraction=FRACTION,
    charge_start_fraction=FRACTION,
    charge_lowest_fraction=FRACTION,
    hand_over_from=TEXT,
    hand_over_to=TEXT,
)
STEPS = st.builds(
    StepReport,
    name=TEXT,
    unit=TEXT,
    value=FIGURE,
    bound=FIGURE,
    give=FIGURE,
    kept=FIGURE,
    proven=st.booleans(),
)
WORTHS = st.builds(
    WorthReport,
    bound=FIGURE,
    best_laid_out=FIGURE,
    laid_out=FIGURE,
    gap_fraction=FRACTION,
    week_laid_out=FIGURE,
)
BATTERIES = st.builds(
    BatteryReport,
    satellite=TEXT,
    floor_fraction=FRACTION,
    floor_in_force_fraction=FRACTION,
    lowest_fraction=FRACTION,
    lowest_s=MOMENT,
    start_fraction=FRACTION,
    end_fraction=FRACTION,
    end_wanted_fraction=FRACTION,
    start_assumed=st.booleans(),
    shadow_s=st.lists(st.tuples(MOMENT, MOMENT), max_size=2).map(tuple),
    trace=st.lists(st.tuples(MOMENT, FRACTION), max_size=2).map(tuple),
)
DATA = st.builds(
    DataReport,
    satellite=TEXT,
    kind=TEXT,
    on_board_start_byte=BYTE,
    made_byte=BYTE,
    down_byte=BYTE,
    lost_byte=BYTE,
    on_board_end_byte=BYTE,
    backlog_weeks=st.none() | FIGURE,
)
SHARES = st.builds(
    Share,
    operator=TEXT,
    contacts=COUNT,
    sittings=COUNT,
    duty_min=FIGURE,
    night_min=FIGURE,
    offered_min=FIGURE,
)
ELEMENTS = st.builds(
    ElementsUsed,
    satellite=TEXT,
    name=TEXT,
    number=st.none() | st.integers(1, 999_999_999),
    epoch_s=MOMENT,
    source=TEXT,
    farthest_days=FIGURE,
    old=st.booleans(),
)
VERDICTS = st.builds(
    Verdict,
    findings=st.lists(
        st.builds(
            Finding, rule=st.sampled_from(Rule), where=TEXT, sentence=TEXT, shortfall=FIGURE, unit=TEXT
        ),
        max_size=2,
    ).map(tuple),
    checked=st.lists(st.sampled_from(Rule), max_size=4).map(tuple),
    margins=st.lists(
        st.builds(Margin, rule=st.sampled_from(Rule), where=TEXT, value=FIGURE, unit=TEXT), max_size=2
    ).map(tuple),
    lowest_fraction=st.dictionaries(TEXT, FRACTION, max_size=2),
    # Names that look like keys with a unit must come back untouched.
    lowest_s=st.dictionaries(TEXT | st.sampled_from(["a_s", "a_utc"]), MOMENT, max_size=2),
    downlink_byte=st.dictionaries(TEXT | st.sampled_from(["a_s", "a_utc"]), BYTE, max_size=2),
    shared=TEXT,
)
PLANS = st.builds(
    Plan,
    mission=TEXT,
    horizon=st.builds(
        Horizon,
        week=st.sampled_from(["2026-W50", "2026-W53", "2000-W01"]),
        lookahead_h=rounded(0.0, 168.0, 6),
    ),
    edition=st.integers(1, 99),
    made_from=st.lists(st.tuples(TEXT, TEXT), max_size=2).map(tuple),
    elements=st.lists(ELEMENTS, max_size=1).map(tuple),
    proven=st.booleans(),
    good=st.booleans(),
    notices=st.lists(TEXT, max_size=2).map(tuple),
    steps=st.lists(STEPS, max_size=2).map(tuple),
    worth=WORTHS,
    silences=st.lists(st.builds(Silence, satellite=TEXT, from_s=MOMENT, to_s=MOMENT), max_size=2).map(tuple),
    contacts=st.lists(CONTACTS, max_size=2).map(tuple),
    lookahead=st.lists(CONTACTS, max_size=1).map(tuple),
    commands=st.lists(
        st.builds(
            CommandOutcome,
            name=TEXT,
            satellite=TEXT,
            must=st.booleans(),
            placed=st.booleans(),
            contact=TEXT,
            left_for_next_week=st.booleans(),
            reason=TEXT,
        ),
        max_size=2,
    ).map(tuple),
    sessions=st.lists(
        st.builds(
            SessionOutcome,
            name=TEXT,
            satellite=TEXT,
            start_s=st.none() | SECOND,
            end_s=st.none() | SECOND,
            in_lookahead=st.booleans(),
            reason=TEXT,
        ),
        max_size=2,
    ).map(tuple),
    batteries=st.lists(BATTERIES, max_size=2).map(tuple),
    data=st.lists(DATA, max_size=2).map(tuple),
    shares=st.lists(SHARES, max_size=2).map(tuple),
    verdict=st.none() | VERDICTS,
    gives=st.dictionaries(TEXT, TEXT, max_size=2),
)


def contact(name: str = "QUA-01", tca_s: float = 19_120.0, satellite: str = "Teasel-1") -> Contact:
    """Return one contact of five minutes around TCA, with a command and two kinds of data."""
    start_s = int(tca_s) - 150
    return Contact(
        id=name,
        satellite=satellite,
        station=name.partition("-")[0],
        operators=("QX3AB",),
        aos_s=tca_s - 240.5,
        tca_s=tca_s,
        los_s=tca_s + 240.25,
        aos_azimuth_deg=12.5,
        tca_azimuth_deg=95.0,
        los_azimuth_deg=170.0,
        max_elevation_deg=47.0,
        tca_range_km=700.5,
        start_s=start_s,
        end_s=start_s + 300,
        slots=(
            Slot(kind="acquire", start_s=start_s, end_s=start_s + 45),
            Slot(kind="uplink", start_s=start_s + 45, end_s=start_s + 57, command="clock"),
            Slot(kind="downlink", start_s=start_s + 57, end_s=start_s + 290),
            Slot(kind="close", start_s=start_s + 290, end_s=start_s + 300),
        ),
        carried=(
            Carried(kind="dust", made_day=None, byte=150_000.0),
            Carried(kind="health", made_day=-1, byte=30_000.5),
            Carried(kind="health", made_day=0, byte=1000.0),
        ),
        success_fraction=0.9,
        charge_start_fraction=0.84,
        charge_lowest_fraction=0.81,
    )


def plan(edition: int = 1, week: str = "2026-W50", contacts: tuple[Contact, ...] | None = None) -> Plan:
    """Return a small whole plan of two satellites."""
    return Plan(
        mission="Teasel",
        horizon=Horizon(week=week),
        edition=edition,
        made_from=(("mission.toml", "ab12"),),
        elements=(),
        proven=True,
        good=True,
        steps=(StepReport(name="worth", unit="kB", value=10.0, bound=10.5, give=0.3, kept=9.8, proven=True),),
        worth=WorthReport(
            bound=10.5, best_laid_out=10.0, laid_out=9.8, gap_fraction=0.047619, week_laid_out=9.0
        ),
        silences=(
            Silence(satellite="Teasel-1", from_s=0.0, to_s=36_000.0),
            Silence(satellite="Teasel-2", from_s=3600.0, to_s=90_000.5),
        ),
        contacts=(contact(),) if contacts is None else contacts,
        commands=(
            CommandOutcome(name="clock", satellite="Teasel-1", must=True, placed=True, contact="QUA-01"),
            CommandOutcome(name="load", satellite="Teasel-1", must=False, placed=False, reason="no room"),
        ),
        sessions=(SessionOutcome(name="dust-1", satellite="Teasel-1", start_s=600, end_s=1200),),
        batteries=(
            _battery("Teasel-1", lowest_fraction=0.71),
            _battery("Teasel-2", lowest_fraction=0.66),
        ),
        data=(),
        shares=(),
        verdict=Verdict(
            findings=(),
            checked=(Rule.IN_VIEW, Rule.REST),
            margins=(Margin(rule=Rule.REST, where="QX3AB", value=20.0, unit="min"),),
            lowest_fraction={"Teasel-1": 0.71},
            lowest_s={"Teasel-1": 43_200.0},
            downlink_byte={"QUA-01": 181_000.5},
        ),
    )


def _battery(satellite: str, lowest_fraction: float) -> BatteryReport:
    """Return a battery that stands lowest at Monday noon."""
    return BatteryReport(
        satellite=satellite,
        floor_fraction=0.6,
        floor_in_force_fraction=0.6,
        lowest_fraction=lowest_fraction,
        lowest_s=43_200.0,
        start_fraction=0.84,
        end_fraction=0.82,
        end_wanted_fraction=0.8,
        start_assumed=False,
        shadow_s=((1200.0, 2700.25),),
        trace=((0.0, 0.84), (1200.0, 0.9)),
    )

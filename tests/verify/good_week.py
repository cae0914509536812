"""A small invented mission and a plan for it laid out by hand, good in every rule.

The passes are found with Skyfield's own event search, not with the code under test. What
a plan tells about battery, data and bytes is filled in from a first reading, so that a
test may change the mission and tell the plan's figures anew.
"""

import math
from dataclasses import dataclass, replace
from datetime import UTC, datetime, time
from functools import cache

from skyfield.api import load, wgs84

from passplan.domain.elements import ElementSet
from passplan.domain.mission import Mission, Planning
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
    Slot,
    WorthReport,
)
from passplan.domain.requests import After, Command, Session, Window
from passplan.domain.satellite import (
    Battery,
    Beacon,
    DataKind,
    Partition,
    Power,
    Radio,
    Satellite,
    Store,
    Telemetry,
)
from passplan.domain.station import FixedAntenna, GroundRadio, Rotator, Station
from passplan.verify.checks_radio import store_story
from passplan.verify.evidence import gather
from passplan.verify.skyfield_view import orbit

WEEK = "2026-W50"
HORIZON = Horizon(week=WEEK, lookahead_h=24.0)
ALWAYS = (WeeklyHours(begin=time(0), end=time(0)),)
MARGIN_S = 2  # inside the guard time

# Invented, not an object: 550 km, Sun-synchronous.
ELEMENTS = ElementSet(
    name="TEASEL-1",
    number=None,
    designator="",
    epoch=datetime(2026, 12, 5, 6, 30, tzinfo=UTC),
    inclination_deg=97.59,
    node_deg=35.0,
    eccentricity=0.0012,
    argument_of_perigee_deg=80.0,
    mean_anomaly_deg=10.0,
    mean_motion_rev_day=15.05,
    bstar_per_earth_radius=3e-5,
)

SATELLITE = Satellite(
    name="TEASEL-1",
    radio=Radio(
        down_hz=437.1e6,
        up_hz=437.1e6,
        transmit_power_w=1.0,
        receive_sensitivity_dbm=-112.0,
        beacon=Beacon(interval_s=60.0, length_s=1.0),
    ),
    power=Power(array_w=9.0, bus_load_w=2.2, heater_eclipse_w=0.4, transmitter_draw_w=5.0),
    battery=Battery(
        capacity_wh=37.0,
        discharge_limit_w=20.0,
        charge_limit_w=8.0,
        telemetry=Telemetry(at_utc=datetime(2026, 12, 6, 12, tzinfo=UTC), charge_fraction=0.9),
    ),
    store=Store(
        partitions=(Partition(name="main", size_byte=60e6),),
        kinds=(
            DataKind(name="housekeeping", made_byte_s=4.0, on_board_byte=2e6),
            DataKind(name="picture", weight="high", halves_every_days=3.0, on_board_byte=3e6),
        ),
    ),
)

WEST = Station(
    name="Quarry Hill",
    code="QUA",
    latitude_deg=52.9,
    longitude_deg=-8.1,
    altitude_m=120.0,
    time_zone="Europe/Dublin",
    mask=((0.0, 4.0), (90.0, 8.0), (180.0, 3.0), (270.0, 5.0)),
    rotator=Rotator(azimuth_rate_deg_s=6.0, elevation_rate_deg_s=4.0, flip=True, beam_width_deg=30.0),
    radio=GroundRadio(antenna_gain_dbi=13.0),
)
EAST = Station(
    name="Quiet Shore",
    code="QUB",
    latitude_deg=55.4,
    longitude_deg=10.4,
    time_zone="Europe/Copenhagen",
    fixed_antenna=FixedAntenna(gain_table=((0.0, 8.0), (45.0, 9.0), (90.0, 10.0))),
    radio=GroundRadio(antenna_noise_k=150.0, transmit_power_w=100.0),
    hours=ALWAYS,
)

MISSION = Mission(
    name="Teasel",
    planning=Planning(),
    satellites=(SATELLITE,),
    stations=(WEST, EAST),
    operators=(
        Operator(
            handle="Q1AB",
            stations=("QUA", "QUB"),
            may_control=True,
            time_zone="Europe/Dublin",
            hours=ALWAYS,
        ),
        Operator(
            handle="Q2CD",
            stations=("QUB",),
            may_control=True,
            time_zone="Europe/Copenhagen",
            hours=ALWAYS,
        ),
        Operator(handle="Q3EF", stations=("QUB",), time_zone="Europe/Copenhagen", hours=ALWAYS),
    ),
    commands=(
        Command(name="set clock", satellite="TEASEL-1", must=True, length_byte=32),
        Command(
            name="load table", satellite="TEASEL-1", length_byte=900, after=(After(command="set clock"),)
        ),
        Command(
            name="take picture",
            satellite="TEASEL-1",
            exchange_s=20.0,
            after=(After(command="load table", order="after_contact"),),
            two_people=True,
            stations=("QUB",),
            least_elevation_deg=12.0,
            least_charge_fraction=0.75,
        ),
        Command(name="new keys", satellite="TEASEL-1", exchange_s=40.0),
    ),
    sessions=(
        Session(
            name="camera",
            satellite="TEASEL-1",
            windows=(
                Window(
                    begin_utc=datetime(2026, 12, 8, 12, tzinfo=UTC), end_utc=datetime(2026, 12, 9, tzinfo=UTC)
                ),
                Window(
                    begin_utc=datetime(2026, 12, 14, 2, tzinfo=UTC),
                    end_utc=datetime(2026, 12, 15, tzinfo=UTC),
                ),
            ),
            length_s=600.0,
            draw_w=3.0,
            makes={"picture": 400_000.0},
        ),
    ),
)


@dataclass(frozen=True, kw_only=True, slots=True)
class Flyby:
    """One pass as Skyfield's event search gives it."""

    aos_s: float
    los_s: float
    highest_deg: float


@dataclass(frozen=True, kw_only=True, slots=True)
class Week:
    """A mission, the elements, and a plan."""

    mission: Mission
    elements: dict[str, ElementSet]
    plan: Plan


@cache
def flybys(code: str) -> tuple[Flyby, ...]:
    """Return the passes of the horizon above 10 deg, which is over both stations' masks."""
    station = MISSION.station(code)
    place = wgs84.latlon(station.latitude_deg, station.longitude_deg, elevation_m=station.altitude_m)
    scale, start = load.timescale(builtin=True), HORIZON.start
    first = scale.utc(start.year, start.month, start.day)
    last = scale.utc(start.year, start.month, start.day, 0, 0, HORIZON.end_s)
    body = orbit(ELEMENTS)
    times, events = body.find_events(place, first, last, altitude_degrees=10.0)
    seconds = [HORIZON.seconds(moment.utc_datetime()) for moment in times]
    found = []
    for index, event in enumerate(events):
        if event == 1 and 0 < index < len(events) - 1:
            height, _, _ = (body - place).at(times[index]).altaz()
            found.append(
                Flyby(aos_s=seconds[index - 1], los_s=seconds[index + 1], highest_deg=float(height.degrees))
            )
    return tuple(found)


def pass_after(code: str, second: float, least_deg: float = 30.0) -> Flyby:
    """Return the first pass of a station that begins after a second and comes that high."""
    return next(fly for fly in flybys(code) if fly.aos_s > second and fly.highest_deg >= least_deg)


def contact(
    name: str, fly: Flyby, operators: tuple[str, ...], uplinks: tuple[tuple[str, int], ...]
) -> Contact:
    """Lay a contact over a whole pass: acquire, commands of so many seconds, downlink, close."""
    guard = 10 + MARGIN_S
    return between(
        name, fly, (math.ceil(fly.aos_s) + guard, math.floor(fly.los_s) - guard), operators, uplinks
    )


def between(
    name: str,
    fly: Flyby,
    ends: tuple[int, int],
    operators: tuple[str, ...],
    uplinks: tuple[tuple[str, int], ...],
) -> Contact:
    """Lay a contact over a part of a pass."""
    start, end = ends
    now = start + 45
    slots = [Slot(kind="acquire", start_s=start, end_s=now)]
    for command, seconds in uplinks:
        slots.append(Slot(kind="uplink", start_s=now, end_s=now + seconds, command=command))
        now += seconds
    slots += [
        Slot(kind="downlink", start_s=now, end_s=end - 10),
        Slot(kind="close", start_s=end - 10, end_s=end),
    ]
    return Contact(
        id=name,
        satellite="TEASEL-1",
        station=name[:3],
        operators=operators,
        aos_s=fly.aos_s,
        tca_s=(fly.aos_s + fly.los_s) / 2.0,
        los_s=fly.los_s,
        aos_azimuth_deg=0.0,
        tca_azimuth_deg=0.0,
        los_azimuth_deg=0.0,
        max_elevation_deg=fly.highest_deg,
        tca_range_km=0.0,
        start_s=start,
        end_s=end,
        slots=tuple(slots),
        success_fraction=0.9,
        charge_start_fraction=0.0,
        charge_lowest_fraction=0.0,
    )


def told(mission: Mission, plan: Plan, elements: dict[str, ElementSet] | None = None) -> Week:
    """Return the week with what the plan tells of battery and data filled in from a reading of its slots."""
    known = elements if elements is not None else {"TEASEL-1": ELEMENTS}
    evidence = gather(mission, known, plan)
    ledger, satellite = evidence.ledgers["TEASEL-1"], mission.satellite("TEASEL-1")
    capacity = ledger.capacity_j
    lowest_s, lowest_j = ledger.lowest(0, 604_800)
    floor_j = min(satellite.battery.floor_fraction * capacity, ledger.idle_lowest_j)
    battery = BatteryReport(
        satellite="TEASEL-1",
        floor_fraction=satellite.battery.floor_fraction,
        floor_in_force_fraction=floor_j / capacity,
        lowest_fraction=lowest_j / capacity,
        lowest_s=lowest_s,
        start_fraction=ledger.at(0) / capacity,
        end_fraction=float(ledger.energy_j[-1]) / capacity,
        end_wanted_fraction=min(mission.planning.end_fraction, ledger.at(0) / capacity),
        start_assumed=False,
    )
    data = tuple(
        DataReport(
            satellite="TEASEL-1",
            kind=kind.name,
            on_board_start_byte=kind.on_board_byte,
            made_byte=sums.made_byte,
            down_byte=sums.down_byte,
            lost_byte=sums.lost_byte,
            on_board_end_byte=kind.on_board_byte + sums.made_byte - sums.down_byte - sums.lost_byte,
            backlog_weeks=None,
        )
        for kind in satellite.store.kinds
        for sums in [store_story(evidence, satellite).week[kind.name]]
    )
    charged = {
        case.id: replace(
            case.contact,
            charge_start_fraction=ledger.at(case.contact.start_s) / capacity,
            charge_lowest_fraction=ledger.lowest(case.contact.start_s, case.contact.end_s)[1] / capacity,
        )
        for case in evidence.cases
    }
    plan = replace(
        plan,
        contacts=tuple(charged.get(each.id, each) for each in plan.contacts),
        lookahead=tuple(charged.get(each.id, each) for each in plan.lookahead),
        batteries=(battery,),
        data=data,
    )
    return Week(mission=mission, elements=known, plan=plan)


def _contacts() -> tuple[Contact, ...]:
    """Lay out the contacts: two of one sitting, a hand-over, one at night and one in the look-ahead."""
    first = pass_after("QUA", 20_000.0)
    second = pass_after("QUA", first.los_s, 12.0)
    shared, taken = next(
        (fly, other)
        for fly in flybys("QUA")
        for other in flybys("QUB")
        if fly.aos_s > second.los_s + 100_000.0
        and min(fly.los_s, other.los_s) - max(fly.aos_s, other.aos_s) > 330
    )
    middle = round((max(shared.aos_s, taken.aos_s) + min(shared.los_s, taken.los_s)) / 2.0)
    dark = pass_after("QUB", taken.los_s + 50_000.0, 40.0)
    ahead = pass_after("QUA", 604_800.0 + 7200.0)
    return (
        contact("QUA-01", first, ("Q1AB",), (("set clock", 4), ("load table", 6))),
        contact("QUA-02", second, ("Q1AB",), ()),
        between("QUA-03", shared, (math.ceil(shared.aos_s) + 12, middle), ("Q1AB",), ()),
        between("QUB-01", taken, (middle + 10, math.floor(taken.los_s) - 12), ("Q2CD",), ()),
        contact("QUB-02", dark, ("Q2CD", "Q3EF"), (("take picture", 20),)),
        contact("QUA-04", ahead, ("Q1AB",), (("new keys", 40),)),
    )


@cache
def good_week() -> Week:
    """Return the good plan over the small mission."""
    laid = _contacts()
    placed = {name: each.id for each in laid for name in each.commands}
    outcomes = tuple(
        CommandOutcome(
            name=command.name,
            satellite="TEASEL-1",
            must=command.must,
            placed=command.name != "new keys",
            contact=placed[command.name],
            left_for_next_week=command.name == "new keys",
        )
        for command in MISSION.commands
    )
    camera_s = int(HORIZON.seconds(datetime(2026, 12, 8, 14, tzinfo=UTC)))
    plan = Plan(
        mission="Teasel",
        horizon=HORIZON,
        edition=1,
        elements=(
            ElementsUsed(
                satellite="TEASEL-1",
                name="TEASEL-1",
                number=None,
                epoch_s=HORIZON.seconds(ELEMENTS.epoch),
                source="made up",
                farthest_days=9.0,
            ),
        ),
        proven=True,
        good=True,
        steps=(),
        worth=WorthReport(bound=1.0, best_laid_out=1.0, laid_out=1.0, gap_fraction=0.0, week_laid_out=1.0),
        silences=(),
        contacts=laid[:-1],
        lookahead=laid[-1:],
        commands=outcomes,
        sessions=(
            SessionOutcome(name="camera", satellite="TEASEL-1", start_s=camera_s, end_s=camera_s + 600),
        ),
        batteries=(),
        data=(),
        shares=(),
    )
    carried = {
        case.id: (
            Carried(kind="housekeeping", made_day=None, byte=0.6 * case.byte),
            Carried(kind="picture", made_day=-1, byte=0.3 * case.byte),
        )
        for case in gather(MISSION, {"TEASEL-1": ELEMENTS}, plan).cases
    }
    return told(
        MISSION,
        replace(
            plan,
            contacts=tuple(replace(each, carried=carried[each.id]) for each in plan.contacts),
            lookahead=tuple(replace(each, carried=carried[each.id]) for each in plan.lookahead),
        ),
    )

"""A circular orbit flown over one station of a round Earth that does not turn: passes in closed form.

The relations are the usual ones of Earth geometry (Wertz and Larson, Space Mission
Analysis and Design, chapter 5; from memory), so ranges and range rates here owe nothing
to the package.
"""

import math
from datetime import datetime

import numpy as np

from passplan.domain.constants import EARTH_MU_KM3_S2, EARTH_RADIUS_KM
from passplan.domain.passes import Floats, Track
from passplan.domain.satellite import Battery, Partition, Power, Radio, Satellite, Store, Telemetry
from passplan.domain.station import FixedAntenna, GroundRadio, Rotator, Station


def earth_angle_deg(height_km: float, elevation_deg: float) -> float:
    """Return the angle at the Earth's centre between station and satellite."""
    near = EARTH_RADIUS_KM / (EARTH_RADIUS_KM + height_km) * math.cos(math.radians(elevation_deg))
    return 90.0 - elevation_deg - math.degrees(math.asin(near))


def slant_range_km(height_km: float, elevation_deg: float) -> float:
    """Return the distance to a satellite seen at an elevation."""
    up = math.radians(elevation_deg)
    across = EARTH_RADIUS_KM * math.cos(up)
    return math.sqrt((EARTH_RADIUS_KM + height_km) ** 2 - across**2) - EARTH_RADIUS_KM * math.sin(up)


def flyby(
    height_km: float = 550.0,
    highest_deg: float = 90.0,
    *,
    from_deg: float = 0.0,
    heading_deg: float = 0.0,
    step_s: float = 1.0,
) -> Track:
    """Return a pass that culminates at `highest_deg`, as long as it stands above `from_deg`.

    It runs towards `heading_deg`, the station on its left unless overhead. `step_s`
    other than 1 stretches the time between elements, for rates measured on fine steps.
    """
    aside = math.radians(earth_angle_deg(height_km, highest_deg))
    edge = math.radians(earth_angle_deg(height_km, from_deg))
    size_km = EARTH_RADIUS_KM + height_km
    rate_rad_s = math.sqrt(EARTH_MU_KM3_S2 / size_km**3)
    half = math.floor(math.acos(math.cos(edge) / math.cos(aside)) / rate_rad_s / step_s)
    along = rate_rad_s * step_s * np.arange(-half, half + 1)
    forward = size_km * np.sin(along)
    right = size_km * np.cos(along) * math.sin(aside)
    up = size_km * np.cos(along) * math.cos(aside) - EARTH_RADIUS_KM
    range_km: Floats = np.sqrt(forward**2 + right**2 + up**2)
    return Track(
        start_s=1000,
        azimuth_deg=(heading_deg + np.degrees(np.arctan2(right, forward))) % 360.0,
        elevation_deg=np.degrees(np.arcsin(up / range_km)),
        range_km=range_km,
        range_rate_km_s=size_km * EARTH_RADIUS_KM * rate_rad_s * np.sin(along) * math.cos(aside) / range_km,
    )


def still(range_km: float, elevation_deg: float = 10.0, seconds: int = 1) -> Track:
    """Return a satellite that stays where it is."""
    return Track(
        start_s=0,
        azimuth_deg=np.full(seconds, 90.0),
        elevation_deg=np.full(seconds, elevation_deg),
        range_km=np.full(seconds, range_km),
        range_rate_km_s=np.zeros(seconds),
    )


def satellite_with(
    radio: Radio | None = None, power: Power | None = None, battery: Battery | None = None
) -> Satellite:
    """Return an invented satellite with the parts given, the rest plain."""
    return Satellite(
        name="TEASEL",
        radio=radio or Radio(down_hz=437e6, up_hz=437e6, transmit_power_w=1.0),
        power=power or Power(array_w=4.2, bus_load_w=2.0),
        battery=battery or Battery(capacity_wh=40.0),
        store=Store(partitions=(Partition(name="main", size_byte=1e6),), kinds=()),
    )


def charged(battery: Battery, at_utc: datetime, fraction: float) -> Battery:
    """Return the battery with a charge that was read."""
    return Battery(
        capacity_wh=battery.capacity_wh,
        floor_fraction=battery.floor_fraction,
        transmit_floor_fraction=battery.transmit_floor_fraction,
        charge_efficiency=battery.charge_efficiency,
        discharge_efficiency=battery.discharge_efficiency,
        telemetry=Telemetry(at_utc=at_utc, charge_fraction=fraction),
    )


def station_with(
    radio: GroundRadio | None = None,
    rotator: Rotator | None = None,
    fixed_antenna: FixedAntenna | None = None,
) -> Station:
    """Return an invented station; with no antenna given it has the usual rotator."""
    return Station(
        name="Quarry Hill",
        code="QUA",
        latitude_deg=50.0,
        longitude_deg=10.0,
        time_zone="UTC",
        radio=radio or GroundRadio(),
        rotator=rotator or (None if fixed_antenna else Rotator()),
        fixed_antenna=fixed_antenna,
    )

"""A ground station: place, horizon, antenna, radio, hours."""

from dataclasses import dataclass
from itertools import pairwise
from typing import Annotated
from zoneinfo import ZoneInfo

from annotated_types import Interval

from passplan.domain.checked import (
    Azimuth,
    Checked,
    Decibel,
    Elevation,
    Loss,
    Seconds,
    code_fault,
    text_fault,
)
from passplan.domain.moments import Outage, WeeklyHours
from passplan.domain.satellite import Polarisation


@dataclass(frozen=True, kw_only=True, slots=True)
class Rotator(Checked):
    """An azimuth-elevation rotator.

    Attributes:
        azimuth_from_deg, azimuth_to_deg: travel of the azimuth axis; 0 to 450 has 90 deg overlap.
        flip: the elevation axis goes to 180 deg, so the antenna may lean over backwards.
        beam_width_deg: half-power beam width; a lag inside half of it costs nothing.
            None takes sqrt(27000 / gain) deg (Kraus, Antennas, directivity of a beam).
    """

    azimuth_rate_deg_s: Annotated[float, Interval(gt=0.0, le=360.0)] = 3.0
    elevation_rate_deg_s: Annotated[float, Interval(gt=0.0, le=360.0)] = 2.0
    azimuth_from_deg: Annotated[float, Interval(ge=-360.0, le=360.0)] = 0.0
    azimuth_to_deg: Annotated[float, Interval(ge=0.0, le=720.0)] = 450.0
    flip: bool = False
    beam_width_deg: Annotated[float, Interval(gt=0.0, le=360.0)] | None = None

    def _faults(self) -> list[tuple[str, object, str]]:
        if self.azimuth_to_deg - self.azimuth_from_deg < 360.0:
            told = "the azimuth axis must turn at least 360 deg from azimuth_from_deg"
            return [("azimuth_to_deg", self.azimuth_to_deg, told)]
        return []


@dataclass(frozen=True, kw_only=True, slots=True)
class FixedAntenna(Checked):
    """An antenna that does not move: gain over elevation, the same in every azimuth.

    Attributes:
        gain_table: (elevation deg, gain dBi) in rising elevation; straight lines
            between, held constant beyond both ends.
    """

    gain_table: tuple[tuple[Elevation, Decibel], ...]

    def _faults(self) -> list[tuple[str, object, str]]:
        elevations = [row[0] for row in self.gain_table]
        if not elevations:
            return [("gain_table", self.gain_table, "needs at least one [elevation, gain] pair")]
        if any(b <= a for a, b in pairwise(elevations)):
            return [("gain_table", elevations, "elevations must rise from pair to pair")]
        return []


@dataclass(frozen=True, kw_only=True, slots=True)
class GroundRadio(Checked):
    """The station's radio and the chain between it and the antenna.

    Attributes:
        transmits: False for a station that only listens.
        transmit_power_w: RF power at the transmitter's output.
        antenna_gain_dbi: at boresight; a fixed antenna's table takes its place.
        receive_line_loss_db: between antenna and preamplifier.
        noise_figure_db: of the preamplifier and all behind it.
        antenna_noise_k: what the antenna picks up from sky, ground and neighbours.
        required_ebn0_db: measured at this station for a bit error rate of 1e-5; None
            takes the satellite's value.
        margin_db: Eb/N0 above the required at which a link counts as closed.
    """

    transmits: bool = True
    transmit_power_w: Annotated[float, Interval(gt=0.0, le=10_000.0)] = 50.0
    transmit_line_loss_db: Loss = 1.5
    antenna_gain_dbi: Decibel = 12.0
    polarisation: Polarisation = "right-circular"
    pointing_loss_db: Loss = 0.5
    atmosphere_loss_db: Loss = 0.8
    receive_line_loss_db: Loss = 0.5
    noise_figure_db: Annotated[float, Interval(ge=0.0, le=30.0)] = 1.0
    antenna_noise_k: Annotated[float, Interval(gt=0.0, le=100_000.0)] = 250.0
    required_ebn0_db: Decibel | None = None
    margin_db: Annotated[float, Interval(ge=0.0, le=40.0)] = 3.0


@dataclass(frozen=True, kw_only=True, slots=True)
class Station(Checked):
    """One ground station.

    Attributes:
        code: short and capital, the first part of every contact's name.
        latitude_deg, longitude_deg: WGS 84, north and east positive.
        altitude_m: above the ellipsoid.
        time_zone: IANA name, such as "Europe/Dublin".
        mask: (azimuth deg, least elevation deg) in rising azimuth, straight lines
            between and across north; empty = flat at 0 deg. May be negative.
        least_receive_elevation_deg: never used below, whatever the mask says.
        least_transmit_elevation_deg: never transmits below.
        rotator, fixed_antenna: one of the two.
        set_up_s: between the end of one contact and the start of the next.
        hours: weekly hours in the station's zone; empty = always.
        outages: when it cannot be used.
        success_fraction: chance that a contact works here; None takes the mission's.
    """

    name: str
    code: str
    latitude_deg: Annotated[float, Interval(ge=-90.0, le=90.0)]
    longitude_deg: Annotated[float, Interval(ge=-180.0, le=180.0)]
    altitude_m: Annotated[float, Interval(ge=-500.0, le=9000.0)] = 0.0
    time_zone: str
    mask: tuple[tuple[Azimuth, Elevation], ...] = ()
    least_receive_elevation_deg: Elevation = 10.0
    least_transmit_elevation_deg: Elevation = 10.0
    rotator: Rotator | None = None
    fixed_antenna: FixedAntenna | None = None
    radio: GroundRadio = GroundRadio()
    set_up_s: Seconds = 60.0
    hours: tuple[WeeklyHours, ...] = ()
    outages: tuple[Outage, ...] = ()
    success_fraction: Annotated[float, Interval(gt=0.0, le=1.0)] | None = None

    def _faults(self) -> list[tuple[str, object, str]]:
        faults = text_fault("name", self.name) + code_fault("code", self.code)
        faults += zone_fault("time_zone", self.time_zone)
        azimuths = [pair[0] for pair in self.mask]
        for index, (before, after) in enumerate(pairwise(azimuths)):
            if after <= before:
                told = f"azimuths must rise; the pair before has {before:g}"
                faults.append((f"mask[{index + 1}]", after, told))
        if (self.rotator is None) == (self.fixed_antenna is None):
            faults.append(("rotator", "", "give either a [rotator] or a [fixed_antenna], one of the two"))
        return faults

    @property
    def transmit_floor_deg(self) -> float:
        """Elevation under which the station never transmits."""
        return max(self.least_transmit_elevation_deg, self.least_receive_elevation_deg)

    @property
    def horizon(self) -> tuple[tuple[float, float], ...]:
        """The mask and the least receive elevation in one: (azimuth deg, elevation deg) corners.

        Azimuths rise within [0, 360]; straight lines between corners and across north.
        One corner stands for a flat horizon. A pass is a stretch above this line. With no
        mask it is never under 0 deg: who sees lower than that says so with a mask.
        """
        least = self.least_receive_elevation_deg
        if len(self.mask) < 2 or all(high <= least for _, high in self.mask):
            highest = max((high for _, high in self.mask), default=0.0)
            return ((0.0, max(least, highest)),)
        corners: list[tuple[float, float]] = []
        ring = [*self.mask, (self.mask[0][0] + 360.0, self.mask[0][1])]
        for (azimuth, low), (after, high) in pairwise(ring):
            corners.append((azimuth % 360.0, max(low, least)))
            if (low - least) * (high - least) < 0.0:
                crossing = azimuth + (after - azimuth) * (least - low) / (high - low)
                corners.append((crossing % 360.0, least))
        return tuple(sorted(dict(corners).items()))


def zone_fault(name: str, zone: str) -> list[tuple[str, object, str]]:
    """Return a fault unless `zone` is an IANA time zone this machine knows."""
    try:
        ZoneInfo(zone)
    except (KeyError, ValueError, OSError):
        return [(name, zone, 'no such time zone; use an IANA name such as "Europe/Dublin"')]
    return []

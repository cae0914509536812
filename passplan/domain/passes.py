"""When a station can see a satellite, and when the satellite sees the Sun."""

from dataclasses import dataclass
from typing import Literal

import numpy as np
from numpy.typing import NDArray

from passplan.domain.checked import Checked
from passplan.domain.moments import Span

Floats = NDArray[np.float64]
ShadowModel = Literal["umbra", "half", "penumbra"]


@dataclass(frozen=True, kw_only=True, slots=True)
class Pass(Checked):
    """One stretch of a satellite above one station's mask.

    Times are seconds of the week (see Horizon), in UTC. One visibility cut in two by
    a notch of the mask gives two passes.

    Attributes:
        satellite, station: satellite name and station code.
        aos_s, tca_s, los_s: first and last moment above the mask, and the moment of
            highest elevation in between.
        aos_azimuth_deg, tca_azimuth_deg, los_azimuth_deg: where it enters, culminates, leaves.
        max_elevation_deg: at tca_s.
        aos_range_km, tca_range_km, los_range_km: distances.
        largest_range_rate_km_s: largest absolute range rate in the pass, at an end or between.
        sunlit: spans (s) of the pass in which the satellite is in sunlight ("half" model).
        clipped: "" or "start" or "end" or "both": the pass is open where the horizon ends.
    """

    satellite: str
    station: str
    aos_s: float
    tca_s: float
    los_s: float
    aos_azimuth_deg: float
    tca_azimuth_deg: float
    los_azimuth_deg: float
    max_elevation_deg: float
    aos_range_km: float
    tca_range_km: float
    los_range_km: float
    largest_range_rate_km_s: float
    sunlit: tuple[Span, ...] = ()
    clipped: Literal["", "start", "end", "both"] = ""

    def _faults(self) -> list[tuple[str, object, str]]:
        if not self.aos_s <= self.tca_s <= self.los_s:
            return [("tca_s", (self.aos_s, self.tca_s, self.los_s), "AOS, TCA and LOS must be in order")]
        return []

    @property
    def length_s(self) -> float:
        """Seconds above the mask."""
        return self.los_s - self.aos_s


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class Track:
    """A pass second by second; element k belongs to the whole second `start_s` + k.

    Attributes:
        start_s: first whole second of the week at or after AOS.
        azimuth_deg, elevation_deg, range_km, range_rate_km_s: arrays of one shape (n,),
            read-only; range rate is positive when the satellite recedes.
    """

    start_s: int
    azimuth_deg: Floats
    elevation_deg: Floats
    range_km: Floats
    range_rate_km_s: Floats

    def __post_init__(self) -> None:
        """Freeze the arrays; ValueError when their shapes differ."""
        shapes = set()
        for name in ("azimuth_deg", "elevation_deg", "range_km", "range_rate_km_s"):
            array = np.array(getattr(self, name), dtype=np.float64)
            array.setflags(write=False)
            object.__setattr__(self, name, array)
            shapes.add(array.shape)
        if len(shapes) != 1:
            told = f"arrays of a track differ in shape: {sorted(shapes)}"
            raise ValueError(told)

    @property
    def seconds(self) -> Floats:
        """The seconds of the week the elements belong to, shape (n,)."""
        return self.start_s + np.arange(len(self.elevation_deg), dtype=np.float64)


@dataclass(frozen=True, kw_only=True, slots=True)
class Sky:
    """What the search found for one horizon.

    Attributes:
        passes: all passes in order of AOS, then satellite, then station.
        shadows: satellite name to its spans in shadow (s of the week, merged, in order),
            "half" model: the Sun's centre behind the Earth's limb.
        propagation_end_s: satellite name to the second at which SGP4 gave up (decay),
            only where it did.
    """

    passes: tuple[Pass, ...]
    shadows: dict[str, tuple[Span, ...]]
    propagation_end_s: dict[str, float]

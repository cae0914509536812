"""The satellite: radio, power, battery and store, in the units its data sheet uses."""

from dataclasses import dataclass, field
from datetime import datetime
from typing import Annotated, Literal

from annotated_types import Interval

from passplan.domain.checked import (
    Checked,
    Decibel,
    Fraction,
    Loss,
    NotNegative,
    Positive,
    Seconds,
    text_fault,
)
from passplan.domain.constants import HOUR_S
from passplan.domain.moments import Outage

Modulation = Literal["fsk-noncoherent", "fsk-coherent", "dpsk", "bpsk", "gmsk"]
Polarisation = Literal["right-circular", "left-circular", "linear"]
AttitudeMode = Literal["sun-pointing", "tumbling"]
Weight = Annotated[float, Interval(ge=0.0, le=1000.0)] | Literal["low", "normal", "high"]

# Mean projection on the Sun line. A sun-pointing spinner keeps its panels within about
# 18 deg of the Sun (cos 18 deg = 0.95, common practice); a flat array tumbling with no
# preferred direction sees max(0, cos) averaged over the sphere = 1/4.
ATTITUDE_FACTOR: dict[AttitudeMode, float] = {"sun-pointing": 0.95, "tumbling": 0.25}


@dataclass(frozen=True, kw_only=True, slots=True)
class Framing(Checked):
    """AX.25 UI frames as the radio sends them (AX.25 v2.2, section 3).

    Attributes:
        information_byte: octets of payload in one frame, before bit stuffing.
        digipeaters: repeater addresses in the header, 7 octets each.
        stuffing_fraction: expected growth of the body by bit stuffing; 1/62 for random bits.
        keying_delay_s: carrier on before the first flag, each time the transmitter is keyed.
        frames_per_keying: frames sent in one go on the downlink.
    """

    information_byte: Annotated[int, Interval(ge=1, le=2048)] = 256
    digipeaters: Annotated[int, Interval(ge=0, le=8)] = 0
    stuffing_fraction: Annotated[float, Interval(ge=0.0, le=0.2)] = 1.0 / 62.0
    keying_delay_s: Annotated[float, Interval(ge=0.0, le=10.0)] = 0.3
    frames_per_keying: Annotated[int, Interval(ge=1, le=10_000)] = 16


@dataclass(frozen=True, kw_only=True, slots=True)
class Beacon(Checked):
    """What the satellite says unasked: `length_s` of carrier every `interval_s`."""

    interval_s: Positive
    length_s: Seconds

    def _faults(self) -> list[tuple[str, object, str]]:
        if self.length_s >= self.interval_s:
            return [("length_s", self.length_s, "must be shorter than interval_s")]
        return []

    @property
    def duty_fraction(self) -> float:
        """Share of the time on the air."""
        return self.length_s / self.interval_s


@dataclass(frozen=True, kw_only=True, slots=True)
class Radio(Checked):
    """The half-duplex radio.

    Attributes:
        down_hz, up_hz: carrier.
        bit_rate_bit_s: on the air, the same both ways.
        required_ebn0_db: Eb/N0 at which the bit error rate is 1e-5 through the real
            receivers, measured or from a data sheet; None takes the closed form of
            `modulation` plus `implementation_loss_db`.
        implementation_loss_db: what real receivers lose against the closed form.
        scrambled: a self-synchronising scrambler turns one channel error into three.
        transmit_power_w: RF power at the transmitter's output.
        line_loss_db: between radio and antenna.
        antenna_gain_dbi: mean over what the attitude does to it.
        receive_sensitivity_dbm: power at the satellite's receiver input at which the
            required Eb/N0 is just met.
        turn_round_s: from listening to speaking or back, each time.
        expected_repeats: how often an exchange is repeated on average, 0.5 = every second.
        beacon: what it says unasked; None = nothing.
    """

    down_hz: Annotated[float, Interval(ge=1e6, le=1e11)]
    up_hz: Annotated[float, Interval(ge=1e6, le=1e11)]
    bit_rate_bit_s: Annotated[float, Interval(ge=10.0, le=1e9)] = 9600.0
    modulation: Modulation = "fsk-noncoherent"
    required_ebn0_db: Decibel | None = None
    implementation_loss_db: Loss = 2.0
    scrambled: bool = True
    transmit_power_w: Annotated[float, Interval(gt=0.0, le=1000.0)]
    line_loss_db: Loss = 0.5
    antenna_gain_dbi: Decibel = 0.0
    polarisation: Polarisation = "right-circular"
    receive_sensitivity_dbm: Annotated[float, Interval(ge=-180.0, le=0.0)] = -110.0
    turn_round_s: Annotated[float, Interval(ge=0.0, le=60.0)] = 0.3
    expected_repeats: Annotated[float, Interval(ge=0.0, le=10.0)] = 0.5
    framing: Framing = field(default_factory=Framing)
    beacon: Beacon | None = None


@dataclass(frozen=True, kw_only=True, slots=True)
class Power(Checked):
    """Generation and loads at the bus.

    Attributes:
        array_w: solar array output at normal incidence when new.
        attitude: mode, or the mean fraction of `array_w` reached in sunlight.
        degradation_fraction: share of the array's output lost since it was new.
        bus_load_w: everything that runs all the time, the receiver included.
        transmitter_draw_w: what keying adds to the bus load; None takes the radio's
            RF power at 30 % efficiency.
        heater_eclipse_w: what shadow adds to the bus load.
    """

    array_w: Annotated[float, Interval(ge=0.0, le=10_000.0)]
    attitude: Fraction | AttitudeMode = "sun-pointing"
    degradation_fraction: Fraction = 0.0
    bus_load_w: Annotated[float, Interval(ge=0.0, le=10_000.0)]
    transmitter_draw_w: Annotated[float, Interval(gt=0.0, le=10_000.0)] | None = None
    heater_eclipse_w: Annotated[float, Interval(ge=0.0, le=10_000.0)] = 0.0

    @property
    def sunlit_w(self) -> float:
        """Array output in full sunlight in the present attitude and age."""
        mode = self.attitude
        factor = mode if isinstance(mode, int | float) else ATTITUDE_FACTOR[mode]
        return self.array_w * factor * (1.0 - self.degradation_fraction)


@dataclass(frozen=True, kw_only=True, slots=True)
class Telemetry(Checked):
    """The last charge read: when, and as a fraction of the usable capacity."""

    at_utc: datetime
    charge_fraction: Fraction

    def _faults(self) -> list[tuple[str, object, str]]:
        if self.at_utc.tzinfo is None:
            return [("at_utc", str(self.at_utc), "needs a zone: write it in UTC with a Z")]
        return []


@dataclass(frozen=True, kw_only=True, slots=True)
class Battery(Checked):
    """Cells behind a shunt regulator: what they do not take is burned off.

    Attributes:
        capacity_wh: energy of the new battery between empty and full.
        health_fraction: share of it that is left.
        floor_fraction: never below, of the capacity left.
        transmit_floor_fraction: no contact begins below this.
        charge_efficiency, discharge_efficiency: energy out by energy in, on the way to and from the cells.
        charge_limit_w: most the cells may take; None = no limit of their own.
        discharge_limit_w: most they may give; None = no limit of their own.
        telemetry: the last charge read; None = the week begins at the mission's end_fraction.
    """

    capacity_wh: Annotated[float, Interval(gt=0.0, le=100_000.0)]
    health_fraction: Annotated[float, Interval(gt=0.0, le=1.0)] = 1.0
    floor_fraction: Fraction = 0.60
    transmit_floor_fraction: Fraction = 0.70
    charge_efficiency: Annotated[float, Interval(gt=0.0, le=1.0)] = 0.95
    discharge_efficiency: Annotated[float, Interval(gt=0.0, le=1.0)] = 0.95
    charge_limit_w: Positive | None = None
    discharge_limit_w: Positive | None = None
    telemetry: Telemetry | None = None

    def _faults(self) -> list[tuple[str, object, str]]:
        if self.transmit_floor_fraction < self.floor_fraction:
            value = self.transmit_floor_fraction
            return [("transmit_floor_fraction", value, "must not be under floor_fraction")]
        return []

    @property
    def capacity_j(self) -> float:
        """Usable capacity left, from empty to full."""
        return self.capacity_wh * self.health_fraction * HOUR_S


@dataclass(frozen=True, kw_only=True, slots=True)
class DataKind(Checked):
    """One kind of data the satellite makes.

    Attributes:
        weight: worth of one kilobyte: low 1, normal 3, high 10, or a number.
        halves_every_days: the weight halves each so many days after the data was made; None = never.
        made_byte_s: made all the time; sessions add their own.
        on_board_byte: waiting on board at the start of the week.
        partition: name of the part of the store it is kept in.
    """

    name: str
    weight: Weight = "normal"
    halves_every_days: Positive | None = None
    made_byte_s: NotNegative = 0.0
    on_board_byte: NotNegative = 0.0
    partition: str = "main"

    def _faults(self) -> list[tuple[str, object, str]]:
        return text_fault("name", self.name)


@dataclass(frozen=True, kw_only=True, slots=True)
class Partition(Checked):
    """A part of the store, and what happens when it is full.

    Attributes:
        when_full: "refuse" loses what is being made, "overwrite_oldest" what is oldest on board.
    """

    name: str
    size_byte: Positive
    when_full: Literal["refuse", "overwrite_oldest"] = "refuse"


@dataclass(frozen=True, kw_only=True, slots=True)
class Store(Checked):
    """The memory on board: partitions, and the kinds of data kept in them."""

    partitions: tuple[Partition, ...]
    kinds: tuple[DataKind, ...]

    def _faults(self) -> list[tuple[str, object, str]]:
        known = [part.name for part in self.partitions]
        faults = _twice("partitions", known) + _twice("kinds", [kind.name for kind in self.kinds])
        there = ", ".join(known) or "none"
        faults += [
            ("kinds", kind.partition, f"{kind.name}: no such partition; there are: {there}")
            for kind in self.kinds
            if kind.partition not in known
        ]
        for part in self.partitions:
            held = sum(kind.on_board_byte for kind in self.kinds if kind.partition == part.name)
            if held > part.size_byte:
                told = f"holds {held:g} byte at the start, more than its size"
                faults.append(("partitions", part.name, told))
        return faults


def _twice(key: str, names: list[str]) -> list[tuple[str, object, str]]:
    """Return a fault of each name that is given more than once."""
    return [(key, name, "is there twice") for name in sorted({n for n in names if names.count(n) > 1})]


@dataclass(frozen=True, kw_only=True, slots=True)
class Satellite(Checked):
    """One satellite.

    Attributes:
        number: catalogue number; None = it has none yet and is found by its name.
        closed: when nobody may have a contact with it.
    """

    name: str
    number: Annotated[int, Interval(ge=1, le=999_999_999)] | None = None
    radio: Radio
    power: Power
    battery: Battery
    store: Store
    closed: tuple[Outage, ...] = ()

    def _faults(self) -> list[tuple[str, object, str]]:
        return text_fault("name", self.name)

    @property
    def transmitter_draw_w(self) -> float:
        """What keying adds to the bus load; RF power at 30 % efficiency when not told."""
        told = self.power.transmitter_draw_w
        return told if told is not None else self.radio.transmit_power_w / 0.30

    @property
    def idle_sun_w(self) -> float:
        """Mean load in sunlight with no contact and no session, the beacon included."""
        beacon = self.radio.beacon
        return self.power.bus_load_w + (beacon.duty_fraction * self.transmitter_draw_w if beacon else 0.0)

    @property
    def idle_shadow_w(self) -> float:
        """Mean load in shadow with no contact and no session, beacon and heater included."""
        return self.idle_sun_w + self.power.heater_eclipse_w

"""Every default in force is said, with its unit, and only where it was left alone."""

from dataclasses import fields
from pathlib import Path

import pytest

from passplan.workspace.assumed import FOLLOWS, WHY, assumed
from tests.workspace.conftest import Spoil

SAT = "satellites/teasel-1.toml"

# The defaults that a newcomer must hear of, and the line that takes each out of the file.
DEFAULTS = [
    ("mission.toml", "acquire_s = 45.0", "planning.acquire_s", "45 s"),
    ("mission.toml", "least_contact_s = 120.0", "planning.least_contact_s", "120 s"),
    ("mission.toml", "guard_s = 10.0", "planning.guard_s", "10 s"),
    ("mission.toml", "night_begin = 22:00:00", "planning.night_begin", "22:00"),
    ("mission.toml", "end_fraction = 0.80", "planning.end_fraction", "80 %"),
    ("mission.toml", "success_fraction = 0.90", "planning.success_fraction", "90 %"),
    (SAT, "keying_delay_s = 0.3", "radio.framing.keying_delay_s", "0.3 s"),
    (SAT, "bit_rate_bit_s = 9600.0", "radio.bit_rate_bit_s", "9600 bit/s"),
    (SAT, "receive_sensitivity_dbm = -107.0", "radio.receive_sensitivity_dbm", "-110 dBm"),
    (SAT, "required_ebn0_db = 13.5", "radio.required_ebn0_db", "closed form of gmsk + 2 dB"),
    (SAT, "floor_fraction = 0.60\n", "battery.floor_fraction", "60 %"),
    (SAT, "transmit_floor_fraction = 0.70", "battery.transmit_floor_fraction", "70 %"),
    (SAT, "transmitter_draw_w = 7.2", "power.transmitter_draw_w", "5.33 W"),
    (SAT, 'attitude = "sun-pointing"', "power.attitude", "sun-pointing"),
    (SAT, 'weight = "low"', "store.kinds[2].weight", "normal"),
    ("stations/owl.toml", "altitude_m = 610.0", "altitude_m", "0 m"),
]


@pytest.mark.parametrize("default", DEFAULTS, ids=lambda default: default[2])
def test_a_default_left_alone_is_said(
    workspace: Path, spoil: Spoil, default: tuple[str, str, str, str]
) -> None:
    file, line, key, value = default
    before = {(row.file, row.key) for row in assumed(workspace)}
    assert (file, key) not in before
    spoil(file, ("\n" if line.endswith("\n") else "") + line, "\n" if line.endswith("\n") else "")
    new = [row for row in assumed(workspace) if (row.file, row.key) not in before]
    assert [(row.file, row.key, row.value) for row in new] == [(file, key, value)]
    assert new[0].why


def test_stations_and_people_that_share_a_default_share_a_line(workspace: Path) -> None:
    rows = {row.key: row for row in assumed(workspace)}
    least = rows["least_receive_elevation_deg (CAR, JUN, TUS)"]
    assert (least.file, least.value) == ("stations/", "10 deg")
    assert rows["mask (CAR, LAT, OWL, PLM)"].value == "flat at 0 deg"
    assert rows["operator.may_control (QX9LO, QO2WL)"].value == "no"


def test_what_has_no_effect_is_not_said(workspace: Path) -> None:
    """A listener's transmitter, a fixed antenna's pointing, a lone station's travel, a told exchange."""
    said = " ".join(row.key for row in assumed(workspace))
    assert "travel_min" not in said
    assert "command.length_byte" not in said
    transmit = next(row.key for row in assumed(workspace) if "transmit_line_loss_db" in row.key)
    pointing = next(row.key for row in assumed(workspace) if "pointing_loss_db" in row.key)
    assert "OWL" not in transmit
    assert "LAT" not in pointing


def test_telemetry_that_is_missing_is_said(workspace: Path, spoil: Spoil) -> None:
    told = "[battery.telemetry]             # the last reading; carried forward to Monday\n"
    spoil(SAT, told + "at_utc = 2026-12-06T19:42:00Z\ncharge_fraction = 0.84\n", "")
    rows = {row.key: row for row in assumed(workspace)}
    assert rows["battery.telemetry"].value == "none"


def test_the_table_names_only_fields_that_exist() -> None:
    named = [(noun, set(texts)) for noun, texts in WHY.items()]
    named += [(noun, set(texts)) for noun, texts in FOLLOWS.items()]
    for noun, names in named:
        assert names <= {field.name for field in fields(noun)}, noun

"""The stored form of a plan: it comes back equal, people can read it, and slips in it are told."""

import json
from dataclasses import fields, replace
from typing import Any

import pytest
from hypothesis import HealthCheck, given, settings

from passplan.domain.errors import InputError
from passplan.domain.plan import Plan
from passplan.workspace.plan_json import ORDER, from_json, to_json
from tests.workspace.plan_draws import PLANS, contact, plan


@settings(
    max_examples=60, deadline=None, suppress_health_check=[HealthCheck.too_slow, HealthCheck.data_too_large]
)
@given(PLANS)
def test_a_plan_comes_back_equal(drawn: Plan) -> None:
    text = to_json(drawn)
    assert from_json(text, "plan.json") == drawn
    assert to_json(from_json(text, "plan.json")) == text
    assert text.isascii()
    assert text.replace("\n", "").isprintable()


def data_of(stored: Plan) -> dict[str, Any]:
    data = json.loads(to_json(stored))
    assert isinstance(data, dict)
    return data


def test_the_head_of_the_text_answers_first() -> None:
    data = data_of(plan())
    assert list(data) == list(ORDER)
    assert (data["week"], data["edition"], data["proven"]) == ("2026-W50", 1, True)
    assert data["week_start_utc"] == "2026-12-07T00:00:00Z"


def test_every_field_of_a_plan_is_in_the_text() -> None:
    assert {field.name for field in fields(Plan)} - {"horizon"} <= set(ORDER)


def test_moments_are_utc_and_figures_carry_units() -> None:
    (row,) = data_of(plan())["contacts"]
    assert row["start_utc"] == "2026-12-07T05:16:10Z"
    assert row["aos_utc"] == "2026-12-07T05:14:39.500000Z"
    assert row["max_elevation_deg"] == 47.0
    assert row["downlink_byte"] == {"dust": 150_000.0, "health": 31_000.5}
    (up,) = row["uplink"]
    assert (up["command"], up["start_utc"], up["end_utc"]) == (
        "clock",
        "2026-12-07T05:16:55Z",
        "2026-12-07T05:17:07Z",
    )
    assert not [key for key in row if key.endswith("_s")]


def test_the_tightest_satellite_speaks_for_all() -> None:
    data = data_of(plan())
    assert data["battery"]["satellite"] == "Teasel-2"
    assert data["battery"]["lowest_utc"] == "2026-12-07T12:00:00Z"
    assert data["longest_silence"] == {
        "satellite": "Teasel-2",
        "from_utc": "2026-12-07T01:00:00Z",
        "to_utc": "2026-12-08T01:00:00.500000Z",
        "hours": 24.000139,
    }
    alone = data_of(replace(plan(), batteries=(), silences=()))
    assert (alone["battery"], alone["longest_silence"]) == (None, None)


def test_commands_name_their_contacts_and_the_verdict_its_rules() -> None:
    data = data_of(plan())
    assert [(row["name"], row["placed"], row["contacts"]) for row in data["commands"]] == [
        ("clock", True, ["QUA-01"]),
        ("load", False, []),
    ]
    assert (data["verdict"]["ok"], data["verdict"]["checked"]) == (True, ["IN_VIEW", "REST"])
    assert data["verdict"]["lowest_utc"] == {"Teasel-1": "2026-12-07T12:00:00Z"}


def test_what_is_short_and_flat_stands_in_one_row() -> None:
    rows = to_json(plan()).splitlines()
    assert '        {"kind": "dust", "made_day": null, "byte": 150000.0},' in rows
    assert max(map(len, rows)) < 200


def test_figures_are_rounded_as_the_head_says() -> None:
    rough = replace(contact(), aos_s=18_879.50049, max_elevation_deg=47.123456, tca_range_km=700.12345)
    rough = replace(rough, success_fraction=0.123456789, charge_start_fraction=-0.0)
    (back,) = from_json(to_json(replace(plan(), contacts=(rough,))), "x").contacts
    assert (back.aos_s, back.max_elevation_deg, back.tca_range_km) == (18_879.5, 47.1235, 700.123)
    assert back.success_fraction == 0.123457
    assert '"charge_start_fraction": 0.0,' in to_json(replace(plan(), contacts=(rough,)))


MOMENT = "expected a moment such as 2026-12-07T05:12:00Z"
SLIPS = {
    "no JSON": ('"form": 1', '"form": ', "plan.json: line 2, column 11: not JSON: expecting value"),
    "newer": ('"form": 1', '"form": 2', "plan.json: form: '2': written by a newer passplan; update this one"),
    "no plan": ('"form": 1', '"from": 1', "plan.json: form: not a stored plan"),
    "no such week": (
        '"week": "2026-W50"',
        '"week": "2026-W99"',
        (
            "plan.json: not a stored plan: Horizon: week = '2026-W99': '2026-W99' is not an ISO week; "
            "write it like 2026-W50 (a year has 52 or 53)"
        ),
    ),
    "no moment": (
        '"start_utc": "2026-12-07T05:16:10Z",\n      "end_utc"',
        '"start_utc": "early",\n      "end_utc"',
        f"plan.json: contacts[0].start_utc: 'early': {MOMENT}",
    ),
    "no zone": (
        '"tca_utc": "2026-12-07T05:18:40Z"',
        '"tca_utc": "2026-12-07T05:18:40"',
        f"plan.json: contacts[0].tca_utc: '2026-12-07T05:18:40': {MOMENT}",
    ),
    "a number for a moment": (
        '"tca_utc": "2026-12-07T05:18:40Z"',
        '"tca_utc": 3',
        f"plan.json: contacts[0].tca_utc: '3': {MOMENT}",
    ),
    "no such rule": (
        '"checked": ["IN_VIEW", "REST"]',
        '"checked": ["IN_VIEW", "SLEEP"]',
        "plan.json: verdict.checked[1]: 'SLEEP': no such rule",
    ),
    "missing": ('"good": true,\n', "", "plan.json: good: missing"),
    "wrong kind": (
        '"max_elevation_deg": 47.0',
        '"max_elevation_deg": "high"',
        (
            "plan.json: contacts[0].max_elevation_deg: 'high': "
            "should be a valid number, unable to parse string as a number"
        ),
    ),
}


@pytest.mark.parametrize("slip", SLIPS)
def test_a_slip_in_a_stored_plan_is_told_with_its_place(slip: str) -> None:
    old, new, line = SLIPS[slip]
    text = to_json(plan())
    assert old in text
    with pytest.raises(InputError) as caught:
        from_json(text.replace(old, new, 1), "plan.json")
    assert [str(mistake) for mistake in caught.value.mistakes] == [line]


@pytest.mark.parametrize(
    "text", ["", "[]", "null", "3", '"plan"', "[" * 100_000, '{"form": 1}', '{"form": true}']
)
def test_other_texts_are_no_plans(text: str) -> None:
    with pytest.raises(InputError, match=r"^plan\.json: "):
        from_json(text, "plan.json")

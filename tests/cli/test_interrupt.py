"""Ctrl-C: before there is a plan, and once there is one."""

import os
import signal
import subprocess
import sys
import time
from pathlib import Path

import pytest

from passplan.domain.plan import Plan
from passplan.errands import planning
from passplan.week import PlanInterrupted
from passplan.week import plan_week as real_plan_week
from passplan.workspace.plans import PlanStore
from tests.cli.conftest import Type, environment

pytestmark = pytest.mark.usefixtures("week")

# Runs the command with a search for passes that takes a minute.
SLOW = """
import time
import passplan.week
from passplan import cli
passplan.week.sky_of = lambda *_: (print("at work", flush=True), time.sleep(60))
cli.main.__globals__["take_stdout"] = lambda: None
cli.main()
"""


def test_ctrl_c_before_there_is_a_plan_keeps_everything_as_it_was(typed: Type, week: Path) -> None:
    typed("plan")
    before = {path.name: path.read_bytes() for path in (week / "plans").iterdir()}
    process = subprocess.Popen(
        [sys.executable, "-c", SLOW, "plan"],
        env=environment(),
        stdout=subprocess.PIPE,
        stderr=subprocess.PIPE,
        text=True,
    )
    assert process.stdout is not None
    assert process.stdout.readline() == "at work\n"
    begin = time.monotonic()
    process.send_signal(signal.SIGINT)
    out, err = process.communicate(timeout=30)
    assert time.monotonic() - begin < 30.0
    assert (process.returncode, out) == (130, "")
    assert err == "Interrupted. Earlier plans are untouched.\n"
    assert {path.name: path.read_bytes() for path in (week / "plans").iterdir()} == before


def interrupted(plan: Plan) -> None:
    """Do what the solver does at Ctrl-C."""
    try:
        os.kill(os.getpid(), signal.SIGINT)
        time.sleep(5.0)
    except KeyboardInterrupt:
        raise PlanInterrupted(plan) from None


def test_ctrl_c_once_there_is_a_plan_keeps_the_best_so_far(
    typed: Type, week: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    def cut_short(*arguments: object, **more: object) -> None:
        interrupted(real_plan_week(*arguments, **more))  # type: ignore[arg-type]

    monkeypatch.setattr(planning, "plan_week", cut_short)
    code, out, err = typed("plan")
    assert code == 130
    assert out.startswith("Week 2026-W50, edition 1")
    assert "Interrupted. The best plan so far is verified and kept." in err
    assert PlanStore(folder=week).editions("2026-W50") == (1,)
    assert signal.getsignal(signal.SIGINT) is signal.default_int_handler


def test_ctrl_c_with_no_contact_found_stores_nothing(
    typed: Type, week: Path, monkeypatch: pytest.MonkeyPatch, spoil: object
) -> None:
    del spoil
    for station in ("nor", "sud"):
        path = week / "stations" / f"{station}.toml"
        path.write_text(path.read_text().replace("[rotator]", "mask = [[0, 90], [180, 90]]\n[rotator]"))

    def cut_short(*arguments: object, **more: object) -> None:
        interrupted(real_plan_week(*arguments, **more))  # type: ignore[arg-type]

    monkeypatch.setattr(planning, "plan_week", cut_short)
    code, out, err = typed("plan")
    assert (code, out) == (130, "")
    assert err.endswith("Interrupted. Earlier plans are untouched.\n")
    assert PlanStore(folder=week).editions("2026-W50") == ()

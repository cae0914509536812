"""The folder of plans: whole editions only, none overwritten, names of contacts given once."""

import csv
import errno
import hashlib
import os
from datetime import UTC, datetime, timedelta, timezone
from pathlib import Path

import pytest

from passplan.domain.errors import InputError
from passplan.domain.moments import week_start
from passplan.workspace import plans as plans_module
from passplan.workspace import whole_file as whole_file_module
from passplan.workspace.plan_json import to_json
from passplan.workspace.plans import PlanStore
from tests.workspace.plan_draws import MADE, contact, plan

MONDAY = week_start("2026-W50")


@pytest.fixture
def store(tmp_path: Path) -> PlanStore:
    return PlanStore(folder=tmp_path)


def files(store: PlanStore) -> list[str]:
    return sorted(path.name for path in store.home.iterdir())


def test_nothing_was_planned_yet(store: PlanStore) -> None:
    assert store.weeks() == ()
    assert store.editions("2026-W50") == ()
    assert store.latest("2026-W50") is None
    assert store.contact_numbers() == ()
    assert store.next_id("QUA") == "QUA-01"
    assert store.issued("2026-W50") == ()
    with pytest.raises(InputError, match="no plan for this week; there are plans for: none"):
        store.read("2026-W50")


def test_editions_are_read_back(store: PlanStore) -> None:
    for edition in (1, 2, 10):
        store.write(plan(edition), MADE + timedelta(hours=edition))
    store.write(plan(1, "2026-W51"), MADE)
    assert store.weeks() == ("2026-W50", "2026-W51")
    assert store.editions("2026-W50") == (1, 2, 10)
    assert store.latest("2026-W50") == 10
    assert store.read("2026-W50") == plan(10)
    assert store.read("2026-W50", 2) == plan(2)
    issued = store.issued("2026-W50")
    assert [(one.plan.edition, one.made_utc - MADE) for one in issued] == [
        (edition, timedelta(hours=edition)) for edition in (1, 2, 10)
    ]
    with pytest.raises(InputError) as caught:
        store.read("2026-W50", 3)
    assert str(caught.value) == "plans/: '2026-W50 edition 3': no such edition; there are: 1, 2, 10"


def test_the_file_is_the_text_and_the_register_has_its_digest(store: PlanStore) -> None:
    path = store.write(plan(), datetime(2026, 12, 6, 21, 15, tzinfo=timezone(timedelta(hours=1))))
    assert path == store.home / "2026-W50-1.json"
    assert path.read_text(encoding="ascii") == to_json(plan())
    with (store.home / "editions.csv").open(encoding="ascii", newline="") as register:
        rows = list(csv.DictReader(register))
    assert rows == [
        {
            "week": "2026-W50",
            "edition": "1",
            "made_utc": "2026-12-06T20:15:00Z",
            "sha256": hashlib.sha256(path.read_bytes()).hexdigest(),
        }
    ]
    assert files(store) == ["2026-W50-1.json", "editions.csv"]


def test_an_edition_is_never_overwritten(store: PlanStore) -> None:
    path = store.write(plan(), MADE)
    before = (path.read_bytes(), (store.home / "editions.csv").read_bytes())
    with pytest.raises(InputError) as caught:
        store.write(plan(contacts=()), MADE)
    line = "plans/2026-W50-1.json: there already, and editions are never overwritten"
    assert str(caught.value) == line
    assert (path.read_bytes(), (store.home / "editions.csv").read_bytes()) == before
    assert files(store) == ["2026-W50-1.json", "editions.csv"]


FAILURES = {
    "disk full": OSError(errno.ENOSPC, os.strerror(errno.ENOSPC)),
    "interrupted": KeyboardInterrupt(),
    "a slip of ours": RuntimeError("boom"),
}


@pytest.mark.parametrize("failure", FAILURES)
@pytest.mark.parametrize("step", ["fsync", "link", "register"])
def test_a_write_that_fails_leaves_nothing_behind(
    store: PlanStore, monkeypatch: pytest.MonkeyPatch, failure: str, step: str
) -> None:
    store.write(plan(), MADE)
    before = {path.name: path.read_bytes() for path in store.home.iterdir()}

    def fail(*_: object) -> None:
        raise FAILURES[failure]

    match step:
        case "fsync":
            monkeypatch.setattr(os, "fsync", fail)
        case "link":
            monkeypatch.setattr(whole_file_module, "claim", fail)
        case "register":
            monkeypatch.setattr(plans_module, "enter", fail)
    expected = InputError if failure == "disk full" else type(FAILURES[failure])
    with pytest.raises(expected) as caught:
        store.write(plan(2), MADE)
    monkeypatch.undo()
    if failure == "disk full":
        assert str(caught.value) == "plans/2026-W50-2.json: cannot be written: no space left on device"
    assert {path.name: path.read_bytes() for path in store.home.iterdir()} == before
    store.write(plan(2), MADE)
    assert store.editions("2026-W50") == (1, 2)


def test_a_register_that_cannot_be_forced_to_the_disk_is_taken_back(
    store: PlanStore, monkeypatch: pytest.MonkeyPatch
) -> None:
    """The third fsync is the register's: the plan's and its folder's come before."""
    store.write(plan(), MADE)
    before = {path.name: path.read_bytes() for path in store.home.iterdir()}
    forced = os.fsync
    calls = iter([forced, forced])

    def fsync(handle: int) -> None:
        call = next(calls, None)
        if call is None:
            raise FAILURES["disk full"]
        call(handle)

    monkeypatch.setattr(os, "fsync", fsync)
    with pytest.raises(InputError, match="no space left on device"):
        store.write(plan(2), MADE)
    monkeypatch.undo()
    assert {path.name: path.read_bytes() for path in store.home.iterdir()} == before


def test_a_file_system_without_links_does_not_overwrite_either(
    store: PlanStore, monkeypatch: pytest.MonkeyPatch
) -> None:
    def link(*_: object) -> None:
        raise OSError(errno.EPERM, os.strerror(errno.EPERM))

    monkeypatch.setattr(os, "link", link)
    store.write(plan(), MADE)
    with pytest.raises(InputError, match="there already"):
        store.write(plan(contacts=()), MADE)
    assert store.read("2026-W50") == plan()


def test_a_folder_that_cannot_be_made(tmp_path: Path) -> None:
    (tmp_path / "plans").write_text("", encoding="utf-8")
    with pytest.raises(InputError, match=r"^plans/2026-W50-1\.json: cannot be written: "):
        PlanStore(folder=tmp_path).write(plan(), MADE)


@pytest.mark.skipif(os.geteuid() == 0, reason="root writes everywhere")
def test_a_folder_one_may_not_write(tmp_path: Path) -> None:
    tmp_path.chmod(0o555)
    with pytest.raises(InputError, match="cannot be written: permission denied"):
        PlanStore(folder=tmp_path).write(plan(), MADE)
    tmp_path.chmod(0o755)


def test_a_torn_register_is_told_and_not_made_worse(store: PlanStore) -> None:
    store.write(plan(), MADE)
    register = store.home / "editions.csv"
    with register.open("ab") as file:
        file.write(b"2026-W50,2,20")
    store.write(plan(2), MADE)
    assert register.read_text(encoding="ascii").splitlines()[2] == "2026-W50,2,20"
    with pytest.raises(InputError) as caught:
        store.issued("2026-W50")
    assert str(caught.value) == (
        "plans/editions.csv: line 3: '2026-W50,2,20': expected week, edition, made_utc, sha256; "
        "put the line back as it was written, or take it out"
    )
    lines = register.read_text(encoding="ascii").splitlines(keepends=True)
    register.write_text("".join(lines[:2] + lines[3:]), encoding="ascii")
    assert len(store.issued("2026-W50")) == 2


def test_a_plan_that_the_register_does_not_know(store: PlanStore) -> None:
    store.write(plan(), MADE)
    (store.home / "2026-W50-2.json").write_text(to_json(plan(2)), encoding="ascii")
    assert store.read("2026-W50").edition == 2
    with pytest.raises(InputError, match=r"^plans/2026-W50-2\.json: the register has no line for this plan"):
        store.issued("2026-W50")


def test_other_files_in_the_folder_are_no_plans(store: PlanStore) -> None:
    store.write(plan(), MADE)
    for name in (
        "2026-W50-01.json",
        "2026-W50-x.json",
        ".2026-W50-3.json",
        "2026-W50-3.json.part",
        "notes.md",
    ):
        (store.home / name).write_text("", encoding="ascii")
    assert store.editions("2026-W50") == (1,)


def test_a_name_is_given_once_and_kept_by_its_contact(store: PlanStore) -> None:
    early, late = contact("QUA-01", 19_120.0), contact("QUA-02", 60_000.0)
    store.write(plan(contacts=(early, late)), MADE)
    moved_utc = MONDAY + timedelta(seconds=19_120.0 + 8.0)  # newer elements
    new_utc = MONDAY + timedelta(seconds=200_000.0)
    wanted = [
        ("Teasel-1", "QUA", new_utc),
        ("Teasel-1", "QUA", moved_utc),
        ("Teasel-1", "SKE", moved_utc),
        ("Teasel-2", "QUA", moved_utc),
    ]
    assert store.contact_ids(wanted) == ("QUA-03", "QUA-01", "SKE-01", "QUA-04")
    assert store.next_id("QUA") == "QUA-03"


def test_a_dropped_contact_takes_its_name_with_it(store: PlanStore) -> None:
    """Edition 2 drops QUA-02; nobody else may ever be called so, in this week or a later one."""
    store.write(plan(contacts=(contact("QUA-01", 19_120.0), contact("QUA-02", 60_000.0))), MADE)
    store.write(plan(2, contacts=(contact("QUA-01", 19_120.0),)), MADE)
    store.write(plan(1, "2026-W51", contacts=()), MADE)
    assert store.next_id("QUA") == "QUA-03"
    back_utc = MONDAY + timedelta(seconds=60_000.0)
    assert store.contact_ids([("Teasel-1", "QUA", back_utc)]) == ("QUA-02",)


def test_a_name_of_the_lookahead_is_the_name_of_next_week(store: PlanStore) -> None:
    ahead = contact("QUA-07", 7 * 86_400.0 + 19_120.0)
    seen = plan(contacts=())
    store.write(
        type(seen)(**{name: getattr(seen, name) for name in seen.__slots__} | {"lookahead": (ahead,)}), MADE
    )
    tca_utc = week_start("2026-W51") + timedelta(seconds=19_120.0)
    assert store.contact_ids([("Teasel-1", "QUA", tca_utc)]) == ("QUA-07",)


@pytest.mark.parametrize(("apart_s", "same"), [(0.0, True), (1199.0, True), (-1199.0, True), (1200.0, False)])
def test_the_same_contact_is_within_twenty_minutes(store: PlanStore, apart_s: float, same: bool) -> None:  # noqa: FBT001
    store.write(plan(contacts=(contact("QUA-01", 19_120.0),)), MADE)
    tca_utc = MONDAY + timedelta(seconds=19_120.0 + apart_s)
    assert store.contact_ids([("Teasel-1", "QUA", tca_utc)]) == (("QUA-01",) if same else ("QUA-02",))


def test_two_pieces_of_one_pass_do_not_share_a_name(store: PlanStore) -> None:
    """A notch in a mask cuts a pass in two; the nearer piece keeps the name."""
    store.write(plan(contacts=(contact("QUA-01", 19_120.0),)), MADE)
    pieces = [("Teasel-1", "QUA", MONDAY + timedelta(seconds=19_120.0 + off_s)) for off_s in (-200.0, 100.0)]
    assert store.contact_ids(pieces) == ("QUA-02", "QUA-01")


def test_numbers_grow_past_ninety_nine(store: PlanStore) -> None:
    store.write(
        plan(contacts=(contact("QUA-99"), contact("QUA-9", 100_000.0), contact("SKE-120", 5_000.0))), MADE
    )
    assert store.next_id("QUA") == "QUA-100"
    assert store.next_id("SKE") == "SKE-121"
    assert [one.id for one in store.contact_numbers()] == ["QUA-9", "QUA-99", "SKE-120"]
    assert store.contact_numbers()[1].tca_utc == datetime(2026, 12, 7, 5, 18, 40, tzinfo=UTC)


@pytest.mark.parametrize(
    "text", ["", "{", '{"form": 1}', '{"form": 1, "contacts": [{"id": 3}], "lookahead": []}']
)
def test_no_name_is_given_while_a_plan_cannot_be_read(store: PlanStore, text: str) -> None:
    store.write(plan(), MADE)
    (store.home / "2026-W50-2.json").write_text(text, encoding="ascii")
    with pytest.raises(InputError, match=r"^plans/2026-W50-2\.json: "):
        store.next_id("QUA")

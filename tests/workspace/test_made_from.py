"""What a plan was made from, by digest."""

import hashlib
from pathlib import Path

import pytest

from passplan.domain.errors import InputError
from passplan.workspace.made_from import made_from

ELEMENTS = "elements/teasel-1_2026-12-05.tle"


def test_every_input_is_named_with_the_digest_of_its_bytes(workspace: Path) -> None:
    rows = made_from(workspace, [workspace / ELEMENTS])
    names = [name for name, _ in rows]
    assert names == sorted(names)
    assert len(names) == 13
    for name, digest in rows:
        assert digest == hashlib.sha256((workspace / name).read_bytes()).hexdigest()


def test_one_changed_byte_changes_one_row(workspace: Path) -> None:
    before = made_from(workspace)
    with (workspace / "stations/qua.toml").open("a", encoding="utf-8") as file:
        file.write("\n")
    after = made_from(workspace)
    assert [old[0] for old, new in zip(before, after, strict=True) if old != new] == ["stations/qua.toml"]


def test_what_is_no_input_does_not_count(workspace: Path) -> None:
    before = made_from(workspace)
    (workspace / "README.md").write_text("hello", encoding="utf-8")
    (workspace / "plans").mkdir()
    (workspace / "plans/2026-W50-1.json").write_text("{}", encoding="utf-8")
    assert made_from(workspace) == before


def test_elements_from_elsewhere_go_by_their_name_alone(workspace: Path, tmp_path: Path) -> None:
    (tmp_path / "else.tle").write_bytes((workspace / ELEMENTS).read_bytes())
    names = [name for name, _ in made_from(workspace, [tmp_path / "else.tle"])]
    assert "else.tle" in names


def test_elements_that_are_gone(workspace: Path) -> None:
    with pytest.raises(InputError, match=r"^elements/gone\.tle: cannot be read: no such file or directory"):
        made_from(workspace, [workspace / "elements/gone.tle"])

"""Files and folders that cannot be read: a clear line each, never a traceback."""

import os
from pathlib import Path

import pytest

from passplan.domain.errors import InputError
from passplan.workspace.documents import MOST_BYTE
from passplan.workspace.read import read_workspace
from tests.workspace.conftest import Told

QUA = "stations/qua.toml"


def refused(folder: Path) -> str:
    with pytest.raises(InputError) as caught:
        read_workspace(folder)
    return str(caught.value)


def test_no_folder(tmp_path: Path) -> None:
    folder = tmp_path / "nowhere"
    assert refused(folder) == f"{folder}: no such folder; make one with: passplan new {folder}"


def test_a_file_for_a_folder(tmp_path: Path) -> None:
    (tmp_path / "week").write_text("", encoding="utf-8")
    assert refused(tmp_path / "week").startswith(f"{tmp_path / 'week'}: not a folder; make one with")


def test_an_empty_folder(tmp_path: Path) -> None:
    line = "no mission.toml here, so this is no workspace; make one with: passplan new DIR"
    assert refused(tmp_path) == f"{tmp_path}: {line}"


def test_missing_and_empty_folders(workspace: Path, told: Told) -> None:
    for path in (workspace / "stations").iterdir():
        path.unlink()
    for path in (workspace / "satellites").iterdir():
        path.unlink()
    (workspace / "satellites").rmdir()
    lines = told()
    assert lines[:2] == [
        "satellites/: no such folder; it holds one file a satellite",
        "stations/: empty; add at least one station, such as stations/name.toml",
    ]
    assert len(lines) == 2


def test_a_huge_file(workspace: Path, told: Told) -> None:
    (workspace / QUA).write_bytes(b"#" * (MOST_BYTE + 1))
    assert told() == ["stations/qua.toml: 5.0 MB is too large; at most 5 MB"]


def test_not_utf8(workspace: Path, told: Told) -> None:
    (workspace / QUA).write_bytes('name = "x"\nwho = "Ö"\n'.encode("latin-1"))
    assert told() == ["stations/qua.toml: line 2: byte 0xd6 is not UTF-8; save the file as UTF-8"]


def test_a_byte_order_mark_and_dos_line_ends_are_fine(workspace: Path) -> None:
    content = (workspace / QUA).read_bytes().replace(b"\n", b"\r\n")
    (workspace / QUA).write_bytes(b"\xef\xbb\xbf" + content)
    assert read_workspace(workspace).station("QUA").name == "Quarry Hill"


def test_a_folder_for_a_file(workspace: Path, told: Told) -> None:
    (workspace / QUA).unlink()
    (workspace / QUA).mkdir()
    assert told() == ["stations/qua.toml: a folder stands where a file is expected"]


def test_a_link_to_itself(workspace: Path, told: Told) -> None:
    (workspace / QUA).unlink()
    (workspace / QUA).symlink_to("qua.toml")
    assert told() == ["stations/qua.toml: cannot be read: too many levels of symbolic links"]


def test_a_link_to_nowhere(workspace: Path, told: Told) -> None:
    (workspace / "mission.toml").unlink()
    (workspace / "mission.toml").symlink_to("lost.toml")
    assert told() == ["mission.toml: cannot be read: no such file or directory"]


def test_a_pipe_is_not_waited_for(workspace: Path, told: Told) -> None:
    (workspace / QUA).unlink()
    os.mkfifo(workspace / QUA)
    assert told() == ["stations/qua.toml: not a plain file"]


def test_a_device_without_end_is_not_read(workspace: Path, told: Told) -> None:
    (workspace / QUA).unlink()
    (workspace / QUA).symlink_to("/dev/zero")
    assert told() == ["stations/qua.toml: not a plain file"]


@pytest.mark.skipif(os.geteuid() == 0, reason="root reads everything")
def test_a_file_one_may_not_read(workspace: Path, told: Told) -> None:
    (workspace / QUA).chmod(0)
    assert told() == ["stations/qua.toml: cannot be read: permission denied"]


@pytest.mark.parametrize("deep", ["[" * 5000, "{a=" * 5000], ids=["lists", "tables"])
def test_nested_without_end(workspace: Path, told: Told, deep: str) -> None:
    (workspace / QUA).write_text("a = " + deep, encoding="utf-8")
    (line,) = told()
    assert line.startswith("stations/qua.toml: ")


def test_a_list_as_deep_as_toml_allows(workspace: Path, told: Told) -> None:
    text = (workspace / QUA).read_text(encoding="utf-8")
    (workspace / QUA).write_text("deep = " + "[" * 200 + "]" * 200 + "\n" + text, encoding="utf-8")
    assert told() == ["stations/qua.toml: deep (line 1): unknown key"]


def test_a_number_of_ten_thousand_digits(workspace: Path, told: Told) -> None:
    (workspace / QUA).write_text("altitude_m = " + "9" * 10_000, encoding="utf-8")
    (line,) = told()
    assert line.startswith("stations/qua.toml: not TOML: exceeds the limit")
    assert len(line) < 200


def test_a_text_of_a_megabyte_is_told_short(workspace: Path, told: Told) -> None:
    text = (workspace / QUA).read_text(encoding="utf-8")
    (workspace / QUA).write_text(text.replace("Quarry Hill", "Q" * 1_000_000, 2), encoding="utf-8")
    lines = told()
    assert any("at most 200 characters" in line for line in lines)
    assert all(len(line) < 200 for line in lines)


def test_binary(workspace: Path, told: Told) -> None:
    (workspace / QUA).write_bytes(bytes(range(128)))
    (line,) = told()
    assert line.startswith("stations/qua.toml: line 1, column 1: ")
    assert line.isprintable()


def test_hidden_files_and_other_files_are_left_alone(workspace: Path) -> None:
    for name in (".qua.toml.swp", ".#qua.toml", ".hidden.toml", "qua.toml~", "notes.txt"):
        (workspace / "stations" / name).write_text("not = = toml", encoding="utf-8")
    assert len(read_workspace(workspace).stations) == 8


def test_capital_endings_are_read(workspace: Path) -> None:
    (workspace / QUA).rename(workspace / "stations/QUA.TOML")
    assert read_workspace(workspace).station("QUA").name == "Quarry Hill"


def test_commands_and_operators_may_be_empty(workspace: Path) -> None:
    (workspace / "commands.toml").write_text("", encoding="utf-8")
    mission = read_workspace(workspace)
    assert (mission.commands, mission.sessions) == ((), ())

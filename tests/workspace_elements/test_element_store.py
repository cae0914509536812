"""Adding sets to a folder, and reading the folder back."""

import errno
import os
from dataclasses import replace
from pathlib import Path

import pytest
from sgp4 import tests as sgp4_tests

from passplan.domain.errors import InputError, PassplanError
from passplan.workspace.element_files import read_elements, read_file, read_folder
from passplan.workspace.element_store import add, file_name
from tests.workspace_elements.forms import (
    FIGURE_G7,
    GOES_TLE,
    LOW_1,
    LOW_2,
    bare,
    csv_rows,
    json_list,
    kvn,
    xml,
)


def names(folder: Path) -> list[str]:
    return sorted(path.name for path in folder.iterdir())


def test_each_set_has_a_file_of_its_own_with_a_readable_name(tmp_path: Path) -> None:
    folder = tmp_path / "elements"
    done = add(folder, f"{GOES_TLE}{LOW_1}\n{LOW_2}\n".encode(), "two.txt")
    assert [(path.name, outcome) for _, path, outcome in done] == [
        ("23581_2007-03-05T103441.tle", "added"),
        ("25544_2014-01-20T222304.tle", "added"),
    ]
    assert names(folder) == [path.name for _, path, _ in done]
    assert [bare(one) for one in read_folder(folder)] == [bare(one) for one, _, _ in done]
    assert read_folder(folder)[0].source == "elements/23581_2007-03-05T103441.tle, line 2"


@pytest.mark.parametrize("form", [kvn, xml, json_list, csv_rows])
def test_every_form_of_omm_is_kept_with_all_its_digits(tmp_path: Path, form: object) -> None:
    data = form({**FIGURE_G7, "MEAN_MOTION": "1.002732718281828"}).encode()  # type: ignore[operator]
    ((one, path, outcome),) = add(tmp_path, data, "x")
    assert (path.name, outcome) == ("23581_2020-03-04T103441.omm", "added")
    assert bare(read_file(path)[0]) == bare(one)
    assert one.mean_motion_rev_day == 1.002732718281828


def test_the_same_set_again_changes_nothing(tmp_path: Path) -> None:
    ((_, path, _),) = add(tmp_path, GOES_TLE.encode(), "x")
    path.write_text("# kept by hand\n" + path.read_text())
    before = path.read_bytes()
    assert [(where, outcome) for _, where, outcome in add(tmp_path, GOES_TLE.encode(), "x")] == [
        (path, "already there")
    ]
    assert names(tmp_path) == [path.name]
    assert path.read_bytes() == before


def test_a_set_someone_put_there_under_another_name_counts(tmp_path: Path) -> None:
    (tmp_path / "from a friend.txt").write_text(GOES_TLE)
    ((_, path, outcome),) = add(tmp_path, GOES_TLE.encode(), "x")
    assert (path.name, outcome) == ("from a friend.txt", "already there")


def test_a_set_twice_in_one_file_is_stored_once(tmp_path: Path) -> None:
    assert [outcome for *_, outcome in add(tmp_path, (GOES_TLE * 2).encode(), "x")] == [
        "added",
        "already there",
    ]


def test_another_set_of_the_same_second_gets_a_number(tmp_path: Path) -> None:
    sets = [kvn({**FIGURE_G7, "INCLINATION": value}) for value in ("3.1", "3.2", "3.3")]
    done = add(tmp_path, "".join(sets).encode(), "x")
    assert [path.name for _, path, _ in done] == [
        "23581_2020-03-04T103441.omm",
        "23581_2020-03-04T103441_2.omm",
        "23581_2020-03-04T103441_3.omm",
    ]
    assert [one.inclination_deg for one in read_folder(tmp_path)] == [3.1, 3.2, 3.3]


def test_a_file_that_cannot_be_read_is_left_alone(tmp_path: Path) -> None:
    taken = tmp_path / "23581_2007-03-05T103441.tle"
    taken.write_text("notes of last year\n")
    ((_, path, _),) = add(tmp_path, GOES_TLE.encode(), "x")
    assert path.name == "23581_2007-03-05T103441_2.tle"
    assert taken.read_text() == "notes of last year\n"


@pytest.mark.parametrize(
    ("name", "expected"),
    [
        ("TEASEL-1", "teasel-1"),
        ("../../etc/passwd", "etc-passwd"),
        ("..", "object"),
        ("C:\\aux", "c-aux"),
        ("Mésange à tête noire", "mesange-a-tete-noire"),
        ("雀", "object"),
        ("", "object"),
        ("x" * 150, "x" * 40),
        ("a/b,c'd\"e", "a-b-c-d-e"),
    ],
)
def test_a_name_leads_nowhere_else(name: str, expected: str) -> None:
    one = replace(read_elements(GOES_TLE, "x")[0], number=None, name=name)
    assert file_name(one) == f"{expected}_2007-03-05T103441.tle"


def test_nothing_is_stored_of_a_file_with_a_slip(tmp_path: Path) -> None:
    with pytest.raises(InputError):
        add(tmp_path / "elements", f"{GOES_TLE}{LOW_1}\n".encode(), "x")
    assert not (tmp_path / "elements").exists()


def test_a_system_without_links_still_never_replaces(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    def no_links(*_: object) -> None:
        raise OSError(errno.EPERM, "Operation not permitted")

    monkeypatch.setattr(os, "link", no_links)
    taken = tmp_path / "23581_2007-03-05T103441.tle"
    taken.write_text("notes\n")
    assert [path.name for _, path, _ in add(tmp_path, GOES_TLE.encode(), "x")] == [
        "23581_2007-03-05T103441_2.tle"
    ]
    assert names(tmp_path) == ["23581_2007-03-05T103441.tle", "23581_2007-03-05T103441_2.tle"]


def test_a_full_disk_leaves_nothing_half_written(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    def full(_: int) -> None:
        raise OSError(errno.ENOSPC, "No space left on device")

    monkeypatch.setattr(os, "fsync", full)
    with pytest.raises(PassplanError, match="cannot store element sets here: no space left on device"):
        add(tmp_path, GOES_TLE.encode(), "x")
    assert names(tmp_path) == []


def test_a_folder_that_cannot_be(tmp_path: Path) -> None:
    (tmp_path / "elements").write_text("a file\n")
    with pytest.raises(PassplanError):
        add(tmp_path / "elements", GOES_TLE.encode(), "x")
    with pytest.raises(PassplanError, match="cannot store element sets here: no such file or directory"):
        add(tmp_path / "nowhere" / "elements", GOES_TLE.encode(), "x")


def test_a_folder_is_read_in_the_order_of_names_and_odd_files_are_passed_over(tmp_path: Path) -> None:
    (tmp_path / "b.csv").write_text(csv_rows(FIGURE_G7))
    (tmp_path / "a.whatever").write_text(GOES_TLE)
    (tmp_path / "c.xml").write_text(sgp4_tests.MARIO_XML)
    for name in (".gitkeep", "README.md", "a.tle~"):
        (tmp_path / name).write_text("no elements")
    (tmp_path / "old").mkdir()
    assert [one.kind for one in read_folder(tmp_path)] == ["TLE", "OMM CSV", "OMM XML"]


def test_the_slips_of_all_files_of_a_folder(tmp_path: Path) -> None:
    folder = tmp_path / "elements"
    folder.mkdir()
    (folder / "a.tle").write_text(f"{LOW_1}\n")
    (folder / "b.tle").write_text("")
    (folder / "c.tle").write_text(GOES_TLE)
    with pytest.raises(InputError) as caught:
        read_folder(folder)
    assert [(slip.file, slip.key) for slip in caught.value.mistakes] == [
        ("elements/a.tle", "line 1"),
        ("elements/b.tle", ""),
    ]


def test_no_folder_and_no_file(tmp_path: Path) -> None:
    with pytest.raises(InputError, match="cannot be read as a folder: no such file or directory"):
        read_folder(tmp_path / "elements")
    with pytest.raises(InputError, match=r"lost\.tle: cannot be read: no such file or directory"):
        read_file(tmp_path / "lost.tle", "lost.tle")
    with pytest.raises(InputError, match="not a plain file"):
        read_file(tmp_path)
    with pytest.raises(InputError, match="null byte"):
        read_file(Path("a\0b"))
    assert read_folder(tmp_path) == []


def test_the_name_of_a_file_cannot_act_on_a_terminal(tmp_path: Path) -> None:
    (tmp_path / "a\x1b[2J\udcff.tle").write_text(GOES_TLE)
    assert read_folder(tmp_path)[0].source == f"{tmp_path.name}/a?[2J?.tle, line 2"


def test_a_huge_file_is_refused_unread(tmp_path: Path) -> None:
    with (tmp_path / "big.tle").open("wb") as stream:
        stream.truncate(3_000_000_000)
    with pytest.raises(InputError, match="3000 MB is too large; at most 64 MB"):
        read_file(tmp_path / "big.tle")


def test_a_pipe_does_not_hold_up_a_folder(tmp_path: Path) -> None:
    os.mkfifo(tmp_path / "pipe.tle")
    with pytest.raises(InputError, match="not a plain file"):
        read_folder(tmp_path)

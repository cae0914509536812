"""A new workspace from the sample that travels with passplan."""

import os
from pathlib import Path

from passplan.domain.errors import InputError, Mistake
from passplan.workspace.documents import is_toml

PACKAGE = Path(__file__).parent.parent


def make_workspace(folder: Path) -> tuple[Path, ...]:
    """Copy the sample into a folder and return the files made, in order.

    Only the first of the sample's element sets is copied: the others are for the user
    to add, as in a real week. Nothing is ever overwritten.

    Raises:
        InputError: a file of that name is there already, or the folder cannot be written.
    """
    wanted = sample_files()
    taken = [target for target in wanted if os.path.lexists(folder / target)]
    if taken:
        told = "there already; nothing was changed. Name a new folder: passplan new DIR"
        raise InputError([Mistake(str(folder / target), "", "", told) for target in taken])
    made: list[Path] = []
    try:
        for target, source in wanted.items():
            content = source.read_bytes()
            path = folder / target
            path.parent.mkdir(parents=True, exist_ok=True)
            with path.open("xb") as file:
                made.append(path)
                file.write(content)
    except OSError as error:
        for path in made:  # half a workspace helps nobody
            path.unlink(missing_ok=True)
        told = f"cannot be written: {(error.strerror or str(error)).lower()}"
        raise InputError([Mistake(str(folder), "", "", told)]) from None
    return tuple(made)


def sample_files() -> dict[str, Path]:
    """Return the sample's files: path in the workspace to where it lies now, in order."""
    here = PACKAGE / "sample"
    files = {path.relative_to(here).as_posix(): path for path in here.glob("*.toml")}
    files |= {path.relative_to(here).as_posix(): path for path in here.glob("satellites/*.toml")}
    files |= {f"stations/{path.name}": path for path in sample_folder("stations").iterdir() if is_toml(path)}
    first = min(sample_folder("tle_samples").glob("*.tle"))
    files[f"elements/{first.name}"] = first
    return dict(sorted(files.items()))


def sample_folder(name: str) -> Path:
    """Return where `stations` or `tle_samples` lies: in the package, or beside it in a checkout."""
    inside = PACKAGE / "sample" / name
    return inside if inside.is_dir() else PACKAGE.parent / name

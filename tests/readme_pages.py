"""The parts of README.md that follow from the code, and a way to write them anew.

python -m tests.readme_pages            the tables of keys
python -m tests.readme_pages --sample   the sample week too, which is planned for it
"""

import os
import subprocess
import sys
import tempfile
from collections.abc import Iterator
from dataclasses import MISSING, Field, fields, is_dataclass
from pathlib import Path
from typing import Any, get_args

from passplan.workspace.assumed import WHY
from passplan.workspace.read import ELSEWHERE, ROWS, WHOLE
from passplan.workspace.schema import schemas
from passplan.workspace.wording import bare_hint, expected, figure, hints_of
from tests.pages import ROOT

FILES = {
    "mission": "mission.toml",
    "satellite": "satellites/*.toml",
    "station": "stations/*.toml",
    "operators": "operators.toml",
    "commands": "commands.toml",
}
RULE = "-" * 80


def keys_page() -> str:
    """Return the tables of every key of every file."""
    meanings = _meanings()
    parts = []
    for kind, file in FILES.items():
        parts.append(f"#### `{file}`\n")
        if kind in WHOLE:
            parts += _tables(WHOLE[kind], "", meanings)
        else:
            for name, noun in ROWS[kind].items():  # type: ignore[index]
                parts += _tables(noun, f"[[{name}]]", meanings)
    return "\n".join(parts)


def _meanings() -> dict[str, dict[str, str]]:
    """Return noun to key to what editors say of it."""
    found: dict[str, dict[str, str]] = {}
    for schema in schemas().values():
        for name, part in [*schema.get("$defs", {}).items(), (schema.get("title", ""), schema)]:
            told = {key: one.get("description", "") for key, one in part.get("properties", {}).items()}
            found.setdefault(name, {}).update({key: words for key, words in told.items() if words})
    return found


def _tables(noun: type, heading: str, meanings: dict[str, dict[str, str]]) -> Iterator[str]:
    """Yield the table of a noun, and those of the nouns in it."""
    inner = []
    if heading:
        yield f"`{heading}`\n"
    yield "| key | takes | left out | means |\n|---|---|---|---|"
    for field in fields(noun):
        if field.name in ELSEWHERE and noun.__name__ == "Mission":
            continue
        hint = hints_of(noun)[field.name]
        part, many = _inside(hint)
        if part is not None:
            inner.append((part, _name(heading, field.name, many=many)))
        takes = f"see `{inner[-1][1]}`" if part else expected(_told_hint(hint), field.name)
        means = meanings.get(noun.__name__, {}).get(field.name, "")
        yield f"| `{field.name}` | {takes} | {_left_out(noun, field, means)} | {means} |"
    yield ""
    for part, name in inner:
        yield from _tables(part, name, meanings)


def _inside(hint: Any) -> tuple[type | None, bool]:
    """Return the noun a hint stands for, and whether there may be several of it."""
    bare = bare_hint(hint)[0]
    for part in (bare, *get_args(bare)):
        if is_dataclass(part) and isinstance(part, type):
            return part, bare is not part and get_args(bare)[-1] is Ellipsis
    return None, False


def _name(heading: str, key: str, *, many: bool) -> str:
    """Return the heading of a table inside another: [radio] and framing give [radio.framing]."""
    path = ".".join(filter(None, (heading.strip("[]"), key)))
    return f"[[{path}]]" if many or heading.startswith("[[") else f"[{path}]"


def _told_hint(hint: Any) -> Any:
    """Return a hint without the None of a key that may be left out."""
    parts = [part for part in get_args(hint) if part is not type(None)]
    return parts[0] if len(parts) == 1 and type(None) in get_args(hint) else hint


def _left_out(noun: type, field: "Field[Any]", means: str) -> str:
    """Return what a key left out stands for, and why, unless its meaning tells already."""
    if field.default is MISSING and field.default_factory is MISSING:
        return "**needed**"
    value = field.default
    why = WHY.get(noun, {}).get(field.name, "")
    why = "" if why in means else why
    plain = value is not MISSING and value not in (None, (), "") and not is_dataclass(value)
    return ": ".join(filter(None, (figure(field.name, value) if plain else "", why)))


def sample_page() -> str:
    """Return the week as `passplan plan` shows it for the sample, without what follows the rule."""
    with tempfile.TemporaryDirectory() as home:
        environment = os.environ | {"COLUMNS": "80", "PYTHONPATH": str(ROOT)}
        typed = [sys.executable, "-m", "passplan"]
        subprocess.run([*typed, "new", "."], cwd=home, env=environment, check=True, capture_output=True)
        done = subprocess.run(
            [*typed, "plan"], cwd=home, env=environment, check=True, stdout=subprocess.PIPE, text=True
        )
    return "```\n" + done.stdout.partition(RULE)[0].strip() + "\n```\n"


def put(page: str, name: str, text: str) -> str:
    """Return a page with the text between the marks of this name replaced."""
    begin, end = f"<!-- {name}: python -m tests.readme_pages -->\n", f"<!-- end of {name} -->"
    head, found, rest = page.partition(begin)
    _, closed, tail = rest.partition(end)
    assert found, f"README.md has no mark {begin!r}"
    assert closed, f"README.md has no mark {end!r}"
    return head + begin + text + end + tail


def block(page: str, name: str) -> str:
    """Return the text between the marks of this name."""
    begin, end = f"<!-- {name}: python -m tests.readme_pages -->\n", f"<!-- end of {name} -->"
    return page.partition(begin)[2].partition(end)[0]


def main(arguments: list[str]) -> None:
    """Write the parts into README.md."""
    file = Path(ROOT / "README.md")
    page = put(file.read_text(encoding="utf-8"), "keys", keys_page())
    if "--sample" in arguments:
        page = put(page, "sample week", sample_page())
    file.write_text(page, encoding="utf-8")


if __name__ == "__main__":
    main(sys.argv[1:])

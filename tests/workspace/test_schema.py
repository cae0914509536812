"""The schemas for editors, held against a JSON Schema validator and against our own reader."""

import json
import tomllib
from pathlib import Path
from typing import Any

import jsonschema
import pytest

from passplan.domain.errors import InputError
from passplan.workspace.sample import sample_files
from passplan.workspace.schema import schemas, write_schemas
from tests.workspace.conftest import Spoil
from tests.workspace.test_mistakes import SLIPS

SCHEMAS = schemas()
HOMES = {"satellites": "satellite", "stations": "station"}


def kind_of(file: str) -> str:
    return HOMES.get(file.partition("/")[0], file.removesuffix(".toml"))


def as_json(text: str) -> Any:
    return json.loads(json.dumps(tomllib.loads(text), default=lambda moment: moment.isoformat()))


@pytest.mark.parametrize("kind", SCHEMAS)
def test_each_is_a_schema_of_its_dialect(kind: str) -> None:
    jsonschema.Draft202012Validator.check_schema(SCHEMAS[kind])
    assert SCHEMAS[kind]["$schema"] == "https://json-schema.org/draft/2020-12/schema"


@pytest.mark.parametrize("file", [file for file in sample_files() if file.endswith(".toml")])
def test_the_sample_is_valid(file: str) -> None:
    text = sample_files()[file].read_text(encoding="utf-8")
    jsonschema.validate(as_json(text), SCHEMAS[kind_of(file)], cls=jsonschema.Draft202012Validator)


# Slips that a schema can see; the others are between fields, between files, or no TOML.
SEEN = [
    *("unit in a number", "out of range", "a truth for a number", "unknown key", "unknown key in a table"),
    *("missing key", "missing key in a table", "union", "set words", "attitude", "one text for a list"),
    *("half a pair", "unknown table", "not in this file"),
]


@pytest.mark.parametrize("slip", SEEN)
def test_an_editor_sees_the_slip_too(workspace: Path, spoil: Spoil, slip: str) -> None:
    file, old, new, _ = SLIPS[slip]
    spoil(file, old, new)
    data = as_json((workspace / file).read_text(encoding="utf-8"))
    with pytest.raises(jsonschema.ValidationError):
        jsonschema.validate(data, SCHEMAS[kind_of(file)], cls=jsonschema.Draft202012Validator)


def test_keys_carry_our_words_and_toml_has_no_null() -> None:
    station = SCHEMAS["station"]["properties"]
    assert station["set_up_s"]["description"] == "between the end of one contact and the start of the next."
    assert station["mask"]["description"].startswith("(azimuth deg, least elevation deg) in rising azimuth")
    assert "null" not in json.dumps(SCHEMAS)
    assert "stations" not in SCHEMAS["mission"]["properties"]
    assert SCHEMAS["mission"]["required"] == ["name"]


def test_they_are_written_and_written_again(tmp_path: Path) -> None:
    files = write_schemas(tmp_path / "schemas")
    first = [path.read_bytes() for path in files]
    assert [path.name for path in files] == [f"{kind}.schema.json" for kind in SCHEMAS]
    assert [path.read_bytes() for path in write_schemas(tmp_path / "schemas")] == first
    assert json.loads(first[2]) == SCHEMAS["station"]


def test_a_folder_that_cannot_be_written(tmp_path: Path) -> None:
    (tmp_path / "schemas").write_text("", encoding="utf-8")
    with pytest.raises(InputError, match="cannot be written: file exists"):
        write_schemas(tmp_path / "schemas")

"""Whatever the bytes, the outcome is a list of sets or an InputError in plain words."""

import gzip

import pytest
from sgp4 import tests as sgp4_tests

from passplan.domain.errors import InputError
from passplan.workspace.element_files import read_elements, scan_elements
from passplan.workspace.page import MOST_MISTAKES
from tests.draws import Draws
from tests.workspace_elements.forms import FIGURE_G7, GOES_TLE, LOW_1, LOW_2, csv_rows, json_list, kvn, xml

TEXTS = {
    "tle": f"{GOES_TLE}{LOW_1}\n{LOW_2}\n",
    "kvn": kvn(FIGURE_G7),
    "xml": xml(FIGURE_G7, FIGURE_G7),
    "json": json_list(FIGURE_G7, FIGURE_G7),
    "csv": csv_rows(FIGURE_G7, FIGURE_G7),
    "feed": sgp4_tests.MARIO_XML,
}


def told(data: bytes | str) -> str:
    """Return what is said about bad input."""
    with pytest.raises(InputError) as caught:
        read_elements(data, "x")
    return str(caught.value)


@pytest.mark.parametrize(
    ("data", "sentence"),
    [
        (b"", "x: no element set found: it is empty"),
        (b"\r\n  \n\xef\xbb\xbf", "x: '\\ufeff': no element set found"),
        (b"\xef\xbb\xbf", "x: no element set found: it is empty"),
        (b"\x00" * 100, "x: character 0x00 in line 1: no text file"),
        (bytes(range(256)), "no text file"),
        (gzip.compress(GOES_TLE.encode()), "this is a packed file (gzip, zip, ...); unpack it first"),
        (
            b"No GP data found",
            "x: 'No GP data found': no element set found; it may be a TLE, or an OMM in KVN, XML",
        ),
        (b"<html><body>404</body></html>", "no element set found in it; fetch it again"),
        (b"<!DOCTYPE html>\n<html></html>", "a web page and no element set: the download failed"),
        (b"[]", "no element set found in it"),
        (b"{}", "EPOCH"),
        (b"[1, 2]", "x: '[1, 2]': no element set found"),
        (b"[[]]", "x: item 1: must be an object of OMM keywords"),
        (b'{"EPOCH": {"a": 1}, "BSTAR": true}', "item 1.EPOCH: must be a text or a number"),
        (b"OBJECT_NAME,EPOCH\n", "no column ECCENTRICITY, INCLINATION"),
        (csv_rows(FIGURE_G7).encode().partition(b"\r\n")[0], "no element set found in it"),
        (b"CCSDS_OMM_VERS = 3.0\n", "EPOCH: is missing, and SGP4 needs it"),
        (
            b"CCSDS_OMM_VERS = 3.0\nfree words\n",
            "'free words': must be KEYWORD = VALUE, or begin with COMMENT",
        ),
        (b"<ndm><omm>", "not well-formed XML (no element found); the file was cut or changed"),
    ],
    ids=lambda value: repr(value)[:30],
)
def test_what_is_no_element_set(data: bytes | str, sentence: str) -> None:
    assert sentence in told(data)


def test_a_cut_json_shows_where() -> None:
    assert told(json_list(FIGURE_G7)[:-1]).endswith("}\n" + " " * (4 + 3 + 50) + "^")


def test_no_json_constants() -> None:
    for constant in ("NaN", "Infinity", "-Infinity"):
        assert f"x: {constant} is not a number; fetch the set again" in told(f'{{"BSTAR": {constant}}}')


def test_entities_are_refused_before_they_grow() -> None:
    """A gigabyte in six lines, and a file of this machine (the usual two tricks with a document type)."""
    lines = ['<?xml version="1.0"?><!DOCTYPE omm [<!ENTITY a0 "ha">']
    lines += [f'<!ENTITY a{n} "{f"&a{n - 1};" * 10}">' for n in range(1, 10)]
    assert "a DOCTYPE has no place in an OMM" in told("\n".join(lines) + "]><omm>&a9;</omm>")
    assert "a DOCTYPE" in told('<!DOCTYPE omm SYSTEM "file:///etc/passwd"><omm/>')
    assert "not well-formed XML (undefined entity)" in told("<omm><EPOCH>&x;</EPOCH></omm>")


@pytest.mark.parametrize(
    "text",
    [
        "[" * 200_000,
        '{"a":' * 200_000,
        "<omm>" * 200_000,
        "<omm><EPOCH>" + "9" * 2_000_000 + "</EPOCH></omm>",
        '[{"MEAN_MOTION": ' + "9" * 2_000_000 + "}]",
        "CCSDS_OMM_VERS = 3.0\nMEAN_MOTION = " + " " * 1_000_000 + "[" * 1_000_000 + "\n",
        "EPOCH,BSTAR\n" + '"' * 2_000_001,
        "1 " + "9" * 3_000_000 + "\n2 " + " " * 3_000_000 + "9",
        "\n" * 5_000_000 + "x",
        "x\n" * 1_000_000,
        f"{LOW_1}\n" * 100_000,
        "<omm><EPOCH/></omm>" * 100_000,
        "<ndm>" + "<omm><EPOCH/></omm>" * 100_000,
        "CCSDS_OMM_VERS = 3\n" * 200_000,
    ],
    ids=lambda text: f"{text[:20]!r} of {len(text)}",
)
def test_deep_long_and_many(text: str) -> None:
    said = told(text)
    assert len(said.splitlines()) <= 4 * MOST_MISTAKES + 1
    assert len(said) < 500 * (MOST_MISTAKES + 1)


def test_reading_stops_when_nothing_fits() -> None:
    reading = scan_elements(f"{LOW_1}\n" * 1000, "x")
    assert len(reading.mistakes) == MOST_MISTAKES + 1
    assert str(reading.mistakes[-1]) == "x: stopped after 200 slips; this may not be a file of element sets"


@pytest.mark.parametrize("form", TEXTS)
def test_mutations_end_in_sets_or_in_words(form: str) -> None:
    """Bytes changed, cut out, doubled and swapped at random, always the same way."""
    draws = Draws(len(form))
    original = TEXTS[form].encode()
    refused = 0
    for _ in range(400):
        data = bytearray(original)
        for _ in range(1 + draws.below(4)):
            _mutate(data, draws)
        reading = scan_elements(bytes(data), "x")
        assert reading.sets or reading.mistakes
        refused += bool(reading.mistakes)
        for mistake in reading.mistakes:
            assert all(char.isprintable() or char == "\n" for char in str(mistake))
    assert refused > 100


def _mutate(data: bytearray, draws: Draws) -> None:
    """Change a few bytes somewhere."""
    place, length = draws.below(max(1, len(data))), 1 + draws.below(12)
    kind = draws.below(5)
    if kind == 0:
        data[place : place + 1] = bytes([draws.below(256)])
    elif kind == 1:
        del data[place : place + length]
    elif kind == 2:
        data[place:place] = data[place : place + length]
    elif kind == 3:
        data[place : place + 1] = b"0123456789.-+eE[]=<>\"',{}& \n\r\t"[draws.below(31) :][:1]
    else:
        del data[place:]


def test_half_a_character_pair_is_shown_as_a_question_mark() -> None:
    assert read_elements("\ud800" + GOES_TLE, "x")[0].name == "?GOES 9"

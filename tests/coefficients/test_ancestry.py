"""The field `ancestry`: a file without it is what it was, and one with it says what can be."""

import copy
from typing import Any

import msgspec
import pytest
from msgspec import UNSET

from clinicalc.coefficients.fingerprint import canonical_bytes
from clinicalc.coefficients.reader import read_bytes
from clinicalc.coefficients.schema import Ancestry, ModelContent
from clinicalc.coefficients.writer import write_bytes
from clinicalc.resources import read_shipped
from tests.coefficients.tiny_model import DROP, changed, file_of, refusals, tiny_logit_model, tree_of

FINGERPRINT = "0123456789abcdef" * 4
ANCESTRY: dict[str, Any] = {
    "fingerprint": FINGERPRINT,
    "id": "tiny-logit",
    "version": "0.9.10",
    "title": "Tiny logistic model",
    "cohort": {"words": "Everybody of Tarnwick", "people": 300, "events": 40, "from": "2012", "to": "2022-01-01"},
    "method": "intercept_slope",
    "figures": ["Slope 0.9."],
}


def said(*changes: tuple[str, Any]) -> dict[str, str]:
    """What the reader says of a file with ancestry, changed."""
    return refusals(changed(tree_of(tiny_logit_model()), ("/model/ancestry", copy.deepcopy(ANCESTRY)), *changes))


def test_a_file_with_ancestry_is_read_written_and_fingerprinted() -> None:
    assert said() == {}
    content = msgspec.structs.replace(tiny_logit_model(), ancestry=msgspec.convert(ANCESTRY, Ancestry))
    file = file_of(content)
    again = read_bytes(write_bytes(file), "new.json")
    assert again.content == file
    assert canonical_bytes(again.content) != canonical_bytes(file_of(tiny_logit_model()))
    # it stands last, so that two versions line up
    assert list(msgspec.to_builtins(content))[-1] == "ancestry"


def test_a_file_without_it_keeps_its_bytes() -> None:
    assert tiny_logit_model().ancestry is UNSET
    data = read_shipped("example_models/tarnwick-cvd-10y.json")
    read = read_bytes(data, "tarnwick.json")
    assert b"ancestry" not in read.canonical
    assert write_bytes(read.content) == data
    assert "ancestry" not in ModelContent.__struct_fields__[:-1]


@pytest.mark.parametrize(
    ("pointer", "value", "path", "words"),
    [
        ("/model/ancestry/version", "1.0.0", "/model/ancestry/version", "a later version has a higher number"),
        ("/model/ancestry/version", "1.0.1", "/model/ancestry/version", "is itself version 1.0.0"),
        ("/model/ancestry/cohort/events", 301, "/model/ancestry/cohort/events", "301 events cannot come from 300"),
        ("/model/ancestry/cohort/people", 0, "/model/ancestry/cohort/people", "nobody can be updated to"),
        ("/model/ancestry/fingerprint", FINGERPRINT[1:], "/model/ancestry/fingerprint", ""),
        ("/model/ancestry/fingerprint", FINGERPRINT.upper(), "/model/ancestry/fingerprint", ""),
        ("/model/ancestry/method", "closed_test", "/model/ancestry/method", ""),
        ("/model/ancestry/cohort/words", "", "/model/ancestry/cohort/words", ""),
        ("/model/ancestry/title", DROP, "/model/ancestry", "title"),
        ("/model/ancestry/parents", [], "/model/ancestry", "parents"),
    ],
)
def test_what_cannot_be_is_refused(pointer: str, value: Any, path: str, words: str) -> None:
    found = said((pointer, value))
    place = next(place for place in found if place.startswith(path))
    assert words in place + found[place]


def test_another_id_begins_its_own_versions() -> None:
    assert said(("/model/ancestry/id", "another"), ("/model/ancestry/version", "7.0.0")) == {}


def test_what_may_be_left_out() -> None:
    for name in ("events", "from", "to"):
        assert said((f"/model/ancestry/cohort/{name}", DROP)) == {}

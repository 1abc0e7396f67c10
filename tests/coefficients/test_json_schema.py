"""The JSON Schema that ships is the one the structs emit, and an independent validator agrees with the reader."""

import json
from pathlib import Path
from typing import Any

import jsonschema_rs
import pytest

from clinicalc.coefficients.json_schema import SHIPPED_AT, schema_bytes, schema_document, write_schema
from clinicalc.resources import read_shipped
from tests.coefficients.tiny_model import DROP, changed, refusals, tiny_cloglog_model, tiny_logit_model, tree_of

LOGIT = tree_of(tiny_logit_model())


def test_the_shipped_schema_is_the_emitted_one() -> None:
    assert read_shipped(SHIPPED_AT) == schema_bytes(), "run python -m clinicalc.coefficients.json_schema"


def test_the_schema_is_written_where_it_ships(tmp_path: Path) -> None:
    (tmp_path / "resources" / "schema").mkdir(parents=True)
    assert write_schema(tmp_path).read_bytes() == schema_bytes()


def test_the_schema_is_a_schema_and_says_what_it_is() -> None:
    document = schema_document()
    assert document["$schema"] == "https://json-schema.org/draft/2020-12/schema"
    assert document["$id"] == "urn:clinicalc:coefficients:1"
    jsonschema_rs.meta.validate(document)


@pytest.mark.parametrize("tree", [LOGIT, tree_of(tiny_cloglog_model())])
def test_a_validator_of_another_make_accepts_what_the_reader_accepts(tree: dict[str, Any]) -> None:
    assert jsonschema_rs.validator_for(json.loads(schema_bytes())).is_valid(tree)
    assert refusals(tree) == {}


@pytest.mark.parametrize(
    ("pointer", "value"),
    [
        ("/model/title", DROP),
        ("/model/title", ""),
        ("/model/extra", 1),
        ("/model/predictors/0/kind", "nummer"),
        ("/model/predictors/0/derivation", [1, 2, 3]),
        ("/model/predictors/0/derivation", [1]),
        ("/model/equations/0/horizons/0/years", 0),
        ("/model/equations/0/terms/0/coefficient", True),
        ("/model/equations/0/terms/0/coefficient", "1"),
        ("/model/version", "1"),
        ("/model/predictors", []),
        ("/format", "other"),
    ],
)
def test_a_validator_of_another_make_refuses_what_the_reader_refuses(pointer: str, value: Any) -> None:
    tree = changed(LOGIT, (pointer, value))
    assert not jsonschema_rs.validator_for(schema_document()).is_valid(tree)
    assert refusals(tree)

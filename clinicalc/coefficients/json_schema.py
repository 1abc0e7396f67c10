"""The JSON Schema of a coefficient file, as it ships: the contract for whoever writes such files.

`python -m clinicalc.coefficients.json_schema` writes it anew in a checkout after `schema` has changed.
"""

import json
from pathlib import Path

import msgspec

from clinicalc.coefficients.schema import CoefficientFile

SHIPPED_AT = "resources/schema/coefficients-1.json"


def schema_document() -> dict[str, object]:
    """The JSON Schema (2020-12) that the structs emit, with its name and title."""
    return {
        "$schema": "https://json-schema.org/draft/2020-12/schema",
        "$id": "urn:clinicalc:coefficients:1",
        "title": "clinicalc coefficient file, format 1",
        "description": (
            "The shape of a coefficient file. What must hold between its fields (names that exist, one equation for "
            "every patient, a positive definite covariance, worked examples that come out) is checked when it is read."
        ),
        **msgspec.json.schema(CoefficientFile),
    }


def schema_bytes() -> bytes:
    """The document as it stands in the shipped file."""
    return (json.dumps(schema_document(), indent=2, ensure_ascii=False) + "\n").encode()


def write_schema(checkout: Path) -> Path:
    """Writes the shipped file anew below the checkout's top folder; its path."""
    target = checkout / SHIPPED_AT
    target.write_bytes(schema_bytes())
    return target


if __name__ == "__main__":
    write_schema(Path(__file__).resolve().parents[2])

"""Every coefficient file that ships reads, and writes back as the same content."""

import pytest

from clinicalc.coefficients.reader import read_bytes
from clinicalc.coefficients.writer import write_bytes
from clinicalc.resources import list_example_models, read_shipped


def test_files_are_shipped() -> None:
    assert list_example_models()


@pytest.mark.parametrize("name", list_example_models())
def test_a_shipped_file_reads_and_keeps_its_content(name: str) -> None:
    read = read_bytes(read_shipped(f"example_models/{name}"), name)
    assert name == f"{read.content.model.id}.json"
    again = read_bytes(write_bytes(read.content), name)
    assert again == read

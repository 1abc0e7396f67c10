"""A library of 500 models and 5,000 records: finding and reading one model's records, and everything.

Run with `--benchmark-only`. Nothing is asserted about time. The files lie in the memory of the system after the first
round; what a share adds is its own.
"""

import pytest
from pytest_benchmark.fixture import BenchmarkFixture

from clinicalc.library.folder import LibraryFolder
from clinicalc.library.places import RecordName, model_file
from tests.library.shelf import comment, found, model

MODELS = 500
RECORDS_EACH = 10
AIM = 0.01
"""Seconds for one model's records."""


@pytest.fixture(scope="module")
def library(tmp_path_factory: pytest.TempPathFactory) -> LibraryFolder:
    """Written without waiting for the disk each time, which takes most of a put."""
    library = found(tmp_path_factory.mktemp("benchmark") / "library")
    for number in range(MODELS):
        fingerprint, content = model(f"model {number}" + "x" * 13_000)
        (library.path / "models" / model_file(fingerprint)).write_bytes(content)
        for remark in range(RECORDS_EACH):
            record = comment(fingerprint, f"Remark {remark}.")
            (library.path / "records" / RecordName(fingerprint, record.digest).file).write_bytes(record.content)
    return library


def _of(number: int) -> str:
    return model(f"model {number}" + "x" * 13_000)[0]


def test_one_models_names(benchmark: BenchmarkFixture, library: LibraryFolder) -> None:
    listing = benchmark(lambda: library.list_records(_of(3)))
    assert (len(listing.names), listing.faults) == (RECORDS_EACH, ())
    benchmark.extra_info["aim in seconds"] = AIM


def test_one_models_records(benchmark: BenchmarkFixture, library: LibraryFolder) -> None:
    records, faults = benchmark(lambda: library.read_records(_of(3)))
    assert (len(records), faults) == (RECORDS_EACH, ())
    benchmark.extra_info["aim in seconds"] = AIM


def test_one_model(benchmark: BenchmarkFixture, library: LibraryFolder) -> None:
    content = benchmark(lambda: library.read_model(_of(3)))
    assert isinstance(content, bytes)


def test_all_names(benchmark: BenchmarkFixture, library: LibraryFolder) -> None:
    listing = benchmark(library.list_records)
    assert len(listing.names) == 1 + MODELS * RECORDS_EACH


def test_all_records(benchmark: BenchmarkFixture, library: LibraryFolder) -> None:
    records, faults = benchmark(library.read_records)
    assert (len(records), faults) == (1 + MODELS * RECORDS_EACH, ())

"""Files that are no print of this program are refused in words, whatever is wrong with them."""

import logging
import random
from pathlib import Path

import pytest

from clinicalc.errors import ClinicalcError
from clinicalc.operations.old_print import LARGEST, read_old_print
from tests.operations.forging import with_record, without_record
from tests.report.printing import PRINTED, printed, with_band

PDF = printed(with_band())

NO_PRINTS = {
    "empty": b"",
    "text": b"%PDF-1.7 and nothing more",
    "half": PDF[: len(PDF) // 2],
    "nothing attached": without_record(PDF),
    "no JSON": with_record(PDF, b"hello"),
    "no UTF-8": with_record(PDF, b"\xff\xfe"),
    "no record": with_record(PDF, b"{}"),
    "a list": with_record(PDF, b"[" * 5000),
    "texts for numbers": with_record(PDF, b'{"model": {}, "years": "ten"}'),
}


@pytest.mark.parametrize("name", NO_PRINTS)
def test_what_is_no_print_is_refused_in_words(name: str, tmp_path: Path) -> None:
    path = tmp_path / "some.pdf"
    path.write_bytes(NO_PRINTS[name])
    with pytest.raises(ClinicalcError) as refused:
        read_old_print(path)
    assert refused.value.exit_status == 5
    assert "some.pdf" in str(refused.value)


def test_a_missing_file_a_folder_and_a_file_too_large_are_refused(tmp_path: Path) -> None:
    large = tmp_path / "large.pdf"
    with large.open("wb") as file:
        file.truncate(LARGEST + 1)
    for path, why in ((tmp_path / "none.pdf", "no such file"), (tmp_path, "no such file"), (large, "32 MB")):
        with pytest.raises(ClinicalcError, match=why):
            read_old_print(path)


def test_a_print_is_read_with_its_time_and_its_words(tmp_path: Path) -> None:
    path = tmp_path / "print.pdf"
    path.write_bytes(PDF)
    old = read_old_print(path)
    assert old.made == PRINTED
    assert old.record.model.id == with_band().model.content.id
    assert "18.2" in old.text


def test_damaged_bytes_raise_nothing_else_and_log_nothing(tmp_path: Path, caplog: pytest.LogCaptureFixture) -> None:
    chance = random.Random(20261201)
    path = tmp_path / "damaged.pdf"
    refused = 0
    for _ in range(60):
        content = bytearray(PDF)
        for _ in range(30):
            content[chance.randrange(len(content))] = chance.randrange(256)
        path.write_bytes(content)
        try:
            read_old_print(path)
        except ClinicalcError:
            refused += 1
    assert refused > 0
    assert [entry for entry in caplog.records if entry.levelno >= logging.WARNING] == []

"""The PDF as a file: metadata, attachment, fonts, reproducible bytes."""

import json
import os
import shutil
import subprocess
import sys
from datetime import UTC, datetime, timedelta, timezone
from io import BytesIO
from pathlib import Path

import pytest
from pypdf import PdfReader, PdfWriter

from clinicalc.assessment.record import write_record
from clinicalc.errors import ClinicalcError, UsageError
from clinicalc.report.attachment import read_attached_record
from clinicalc.report.pdf import make_report
from tests.report.printing import AT, PRACTICE, printed, text_of, with_band, without_band

LABEL = "Ottilie Fenn, born 1965"

PRINT_IN_A_PROCESS = """
import hashlib, sys
from clinicalc.report.pdf import make_report
from tests.report.printing import without_band
pdf = make_report(without_band("north", "Ελένη Őry x\\u030c"), practice="Tarnwick Northgate")
print(hashlib.sha256(pdf).hexdigest(), b"20270115080000" in pdf)
"""


def run_python(code: str, **environment: str) -> str:
    root = Path(__file__).parents[2]
    done = subprocess.run(
        [sys.executable, "-c", code], env=os.environ | environment, cwd=root, capture_output=True, text=True, check=True
    )
    return done.stdout


def test_the_label_is_in_the_text_and_nowhere_else() -> None:
    pdf = printed(with_band(LABEL))
    assert LABEL in text_of(pdf)
    reader = PdfReader(BytesIO(pdf))
    assert reader.metadata is not None
    assert not any("Fenn" in str(value) for value in reader.metadata.values())
    assert "Fenn" not in read_attached_record(pdf)
    assert reader.xmp_metadata is None


def test_title_language_and_viewer_preference_are_set() -> None:
    reader = PdfReader(BytesIO(printed(with_band(LABEL))))
    assert reader.metadata is not None
    assert reader.metadata.title == "Tiny logistic model"
    assert reader.metadata.author == PRACTICE
    assert str(reader.root_object["/Lang"]) == "en-GB"
    assert reader.viewer_preferences is not None
    assert reader.viewer_preferences.display_doctitle
    assert reader.pdf_header == "%PDF-1.7"


def test_the_dates_of_the_file_are_the_time_of_printing() -> None:
    moment = datetime(2026, 12, 1, 14, 20, tzinfo=timezone(timedelta(hours=1)))
    reader = PdfReader(BytesIO(make_report(with_band(), printed_at=moment)))
    assert reader.metadata is not None
    assert reader.metadata.creation_date == moment


@pytest.mark.parametrize("stopped", [False, True])
def test_the_attached_record_equals_the_written_one(stopped: bool) -> None:
    assessment = without_band("north", LABEL, **({"age": "abc"} if stopped else {}))
    attached = read_attached_record(printed(assessment))
    assert attached == write_record(assessment)
    assert (json.loads(attached)["probability"] is None) == stopped


def test_a_file_without_record_is_answered_in_words() -> None:
    target = BytesIO()
    writer = PdfWriter()
    writer.add_blank_page(100, 100)
    writer.write(target)
    for content in (target.getvalue(), b"", b"no PDF at all"):
        with pytest.raises(ClinicalcError, match="no record of an assessment"):
            read_attached_record(content)


def test_the_same_print_has_the_same_bytes_in_any_process() -> None:
    # 1 800 000 000 s after 1970 is 2027-01-15 08:00:00 UTC
    outputs = {
        run_python(PRINT_IN_A_PROCESS, SOURCE_DATE_EPOCH="1800000000", PYTHONHASHSEED=seed) for seed in ("1", "4242")
    }
    assert len(outputs) == 1
    assert outputs.pop().endswith(" True\n")


def test_one_print_leaves_no_trace_in_the_next() -> None:
    before = printed(with_band("Ottilie Fenn"))
    printed(with_band("Ελένη Жанна"))
    assert printed(with_band("Ottilie Fenn")) == before


def test_a_spoilt_source_date_is_answered_in_words(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setenv("SOURCE_DATE_EPOCH", "yesterday")
    with pytest.raises(UsageError, match="SOURCE_DATE_EPOCH"):
        make_report(with_band())
    with pytest.raises(UsageError, match="SOURCE_DATE_EPOCH"):
        make_report(with_band(), printed_at=AT.astimezone(UTC))


def test_the_room_leaves_the_pdf_libraries_alone_until_it_prints() -> None:
    code = "import sys, clinicalc.report; print(sorted({'reportlab', 'pypdf'} & set(sys.modules)))"
    assert run_python(code) == "[]\n"


@pytest.mark.skipif(shutil.which("qpdf") is None, reason="qpdf is not installed (Debian package qpdf)")
@pytest.mark.parametrize("name", ["", "Ελένη x\u030c Ж\u0301у"])
def test_qpdf_finds_nothing_wrong(tmp_path: Path, name: str) -> None:
    path = tmp_path / "print.pdf"
    path.write_bytes(printed(with_band(name)))
    done = subprocess.run(["qpdf", "--check", str(path)], capture_output=True, text=True)
    assert done.returncode == 0, done.stdout + done.stderr
    assert "WARNING" not in done.stderr


@pytest.mark.skipif(shutil.which("pdffonts") is None, reason="pdffonts is not installed (Debian package poppler-utils)")
def test_every_font_is_an_embedded_subset_that_can_be_read_back(tmp_path: Path) -> None:
    path = tmp_path / "print.pdf"
    path.write_bytes(printed(with_band("Ελένη Жанна")))
    done = subprocess.run(["pdffonts", str(path)], capture_output=True, text=True, check=True)
    fonts = done.stdout.splitlines()[2:]
    assert len(fonts) >= 2
    for font in fonts:
        assert "SourceSans3-" in font
        assert font.split()[-5:-2] == ["yes", "yes", "yes"]


@pytest.mark.skipif(
    shutil.which("pdftotext") is None, reason="pdftotext is not installed (Debian package poppler-utils)"
)
def test_a_second_reader_reads_the_same_names(tmp_path: Path) -> None:
    name = "Ελένη Щукина Őry x\u030cy Ж\u0301у"
    path = tmp_path / "print.pdf"
    path.write_bytes(printed(with_band(name)))
    done = subprocess.run(["pdftotext", "-enc", "UTF-8", str(path), "-"], capture_output=True, check=True)
    assert name in done.stdout.decode()

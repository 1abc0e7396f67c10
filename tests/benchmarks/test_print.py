"""The print for clinician and patient against the same text drawn with the bare PDF library, in one run.

Run with `--benchmark-only`. Nothing is asserted about time: the ratio is written down, a slow machine breaks nothing.
"""

import sys
from collections.abc import Callable, Sequence
from io import BytesIO
from statistics import median
from time import perf_counter
from typing import Any

import pytest
from pytest_benchmark.fixture import BenchmarkFixture
from reportlab.pdfgen.canvas import Canvas

from clinicalc.report.document import make_document
from clinicalc.report.pages import Page
from clinicalc.report.parts import PrintParts
from clinicalc.report.pdf import make_report
from clinicalc.report.shapes import Text
from clinicalc.report.typefaces import Weight
from tests.assessment.cases import DEMO, run
from tests.report.printing import PRACTICE, PRINTED, text_of

ROUNDS = 15
AIM = 1.5
"""Times the bare library: what findings, layout, figures and the attached record may cost."""


def seconds(work: Callable[[], object]) -> float:
    """How long one call takes."""
    start = perf_counter()
    work()
    return perf_counter() - start


def draw_bare(pages: Sequence[Page]) -> bytes:
    """Every text of the pages at its place, with nothing but the PDF library: no layout, no lines, no dots."""
    target = BytesIO()
    canvas: Any = Canvas(target, invariant=1, pageCompression=1, initialFontName=Weight.REGULAR.value)
    for page in pages:
        for text in page.shapes:
            if isinstance(text, Text):
                canvas.setFont(text.weight.value, text.size)
                canvas.drawString(text.x, page.height - text.y, text.text)
        canvas.showPage()
    canvas.save()
    return target.getvalue()


@pytest.mark.parametrize("patient_page", [True, False])
def test_print(benchmark: BenchmarkFixture, capsys: pytest.CaptureFixture[str], patient_page: bool) -> None:
    assessment = run("tarnwick-cvd-10y", DEMO)

    def whole() -> bytes:
        return make_report(
            assessment, practice=PRACTICE, printed_at=PRINTED, parts=PrintParts(patient_page=patient_page)
        )

    pages = make_document(
        assessment, practice=PRACTICE, printed_at=PRINTED, parts=PrintParts(patient_page=patient_page)
    ).pages

    def bare() -> bytes:
        return draw_bare(pages)

    # the same words, wherever the narrow space of a sign is read
    assert sorted("".join(text_of(whole()).split())) == sorted("".join(text_of(bare()).split()))
    # turn about, so that a busy spell of the machine hits both
    pairs = [(seconds(bare), seconds(whole)) for _ in range(ROUNDS)]
    plain, full = median(pair[0] for pair in pairs), median(pair[1] for pair in pairs)
    benchmark.extra_info |= {
        "pages": len(pages),
        "bare_seconds": plain,
        "ratio": full / plain,
        "ratio_of_fastest": min(pair[1] for pair in pairs) / min(pair[0] for pair in pairs),
        "aim": AIM,
    }
    with capsys.disabled():
        sys.stdout.write(
            f"\n{len(pages)} pages: {1000 * full:.1f} ms, {full / plain:.2f} times the bare text (aim {AIM})\n"
        )
    benchmark(whole)

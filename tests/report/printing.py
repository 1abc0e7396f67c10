"""Assessments to print, and the ways in which the tests read a print back."""

import re
import unicodedata
from datetime import UTC, datetime
from io import BytesIO

from pypdf import PdfReader

from clinicalc.assessment.assess import assess
from clinicalc.assessment.entry import entry_from_texts
from clinicalc.assessment.model import Model, prepare_model
from clinicalc.assessment.result import Assessment
from clinicalc.coefficients.schema import ModelContent
from clinicalc.coefficients.spans import Span
from clinicalc.report.pdf import make_report
from tests.coefficients.tiny_model import read_of, tiny_cloglog_model, tiny_logit_model

AT = datetime(2026, 12, 1, 14, 18, tzinfo=UTC)
PRINTED = datetime(2026, 12, 1, 14, 20, tzinfo=UTC)
PRACTICE = "Tarnwick Northgate"

SMOKER_50 = {"age": "50", "smoker": "yes", "prior_event": "no"}
"""The worked example of the tiny logistic model: 18.2 %, band 13.8 to 23.7 %."""
MAN_55 = {"age": "55", "sex": "male", "bp_treated": "no", "total_cholesterol": "200 mg/dL on 2026-10-02"}


def model_of(content: ModelContent, name: str = "tiny.json") -> Model:
    """The model as the assessment takes it."""
    return prepare_model(read_of(content, name))


def with_band(label: str = "", content: ModelContent | None = None, **changed: str) -> Assessment:
    """An assessment that has a band."""
    model = model_of(content or tiny_logit_model())
    return assess(model, entry_from_texts(SMOKER_50 | changed, label), at=AT)


def without_band(recalibration: str | None = None, label: str = "", **changed: str) -> Assessment:
    """An assessment of a model that prints no covariance and censors other deaths."""
    entry = entry_from_texts(MAN_55 | changed, label)
    return assess(model_of(tiny_cloglog_model()), entry, span=Span(10.0), recalibration=recalibration, at=AT)


def printed(assessment: Assessment, practice: str = PRACTICE) -> bytes:
    """The PDF at a fixed time."""
    return make_report(assessment, practice=practice, printed_at=PRINTED)


def pages_of(pdf: bytes) -> list[str]:
    """The text of each page as it is read back, white space made single spaces, accents put together."""
    texts = (page.extract_text() for page in PdfReader(BytesIO(pdf)).pages)
    return [unicodedata.normalize("NFC", re.sub(r"[ \n]+", " ", text)) for text in texts]


def text_of(pdf: bytes) -> str:
    """The text of the whole print."""
    return " ".join(pages_of(pdf))

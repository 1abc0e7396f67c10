"""The step Package: the coefficient file as it would be written, its documentation, where it was written to."""

from collections.abc import Iterator

from clinicalc.assessment.numerals import join_words
from clinicalc.coefficients.fingerprint import group_fingerprint
from clinicalc.coefficients.spans import span_of
from clinicalc.development.estimating import FittedStudy
from clinicalc.development.fit_documentation import NOT_STATED
from clinicalc.development.package import Package
from clinicalc.development.study_documentation import document_study
from clinicalc.gui.study.data_words import count
from clinicalc.gui.study.fact_rows import Fact, FactColumn
from clinicalc.gui.study.figure_words import share
from clinicalc.gui.study.fit_sheet import SAVE_REPORT
from clinicalc.gui.study.refusal_words import state_refusal
from clinicalc.gui.study.step_sheet import StepSheet
from clinicalc.gui.study.steps import Ask
from clinicalc.gui.study.study_state import StudyState

_DOCUMENTATION = (FactColumn("Item"), FactColumn("Answer"))
_EXAMPLES = (FactColumn("Worked example"), FactColumn("Horizon"), FactColumn("Probability", is_figures=True))


def make_package_sheet(state: StudyState) -> StepSheet:
    """The sheet as the study stands."""
    if state.people_only is not None:
        return StepSheet("Package", "The new version of a model that is updated is written in the step Update.")
    if not state.is_fitted:
        words = "This fit is of earlier data. Fit the model again first." if state.is_stale else "Fit the model first."
        return StepSheet("Package", words)
    sheet = StepSheet("Package")
    if state.not_packaged is not None:
        stated = state_refusal(state.not_packaged)
        sheet.add_heading(f"No coefficient file is made from this: {count(len(stated), 'problem')}")
        sheet.add_stated(stated)
    package = state.package
    if package is None:
        if state.not_packaged is None:
            sheet.add_words("The worked examples are being worked.", soft=True)
        return sheet
    if state.written is not None:
        sheet.add_words(f"Written to {state.written}", semibold=True)
        sheet.add_words(
            "“Try it on the Patient page” opens it as a file that is tried out: it is not vetted, and no number of it"
            " is for a patient before a practice approved it.",
        )
    else:
        sheet.add_words("Nothing is written yet. This is what the coefficient file would say:", soft=True)
    sheet.add_lines(tuple(_head_lines(package)))
    if state.fit is not None:
        _add_documentation(sheet, package, state.fit.fitted)
    sheet.add_heading("Worked examples")
    sheet.add_table("Worked examples", _EXAMPLES, tuple(_example_facts(package)))
    if package.remarks:
        sheet.add_heading("Remarks")
        for remark in package.remarks:
            sheet.add_words(remark)
    sheet.add_asks(((SAVE_REPORT, Ask.REPORT),))
    return sheet


def _head_lines(package: Package) -> Iterator[tuple[str, str]]:
    model = package.model.content
    yield "Title", f"{model.title}, version {model.version}"
    yield "Fingerprint", group_fingerprint(package.model.fingerprint)
    yield "Size", f"{len(package.data):,} bytes"


def _add_documentation(sheet: StepSheet, package: Package, fitted: FittedStudy) -> None:
    """What the file answers of the report standard, and what nobody answered."""
    documentation = document_study(fitted)
    answered = [one for one in package.model.content.documentation if one.item != NOT_STATED]
    sheet.add_heading(f"Documentation: {len(answered)} answered, {len(documentation.unanswered)} not")
    sheet.add_table("Documentation", _DOCUMENTATION, [Fact((one.item, one.text)) for one in answered])
    if documentation.unanswered:
        sheet.add_words(f"Not answered, and the file says so: {join_words(list(documentation.unanswered))}.")
        sheet.add_words("Items are answered in the study file: here, or in an editor and read again.", soft=True)
        sheet.add_asks((("&Change the study…", Ask.CHANGE),))


def _example_facts(package: Package) -> Iterator[Fact]:
    for example in package.model.content.worked_examples:
        values = ", ".join(f"{id} {value}" for id, value in example.values.items())
        span = span_of(example)
        yield Fact((values, "" if span is None else span.words, share(example.probability)))

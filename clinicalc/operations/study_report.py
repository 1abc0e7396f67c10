"""The report of a fit as the contents of a print: the people, what was fitted, how far to believe it, what is open."""

from collections.abc import Iterator, Sequence

from clinicalc.assessment.numerals import join_words
from clinicalc.development.estimating import FittedStudy
from clinicalc.development.package import Package
from clinicalc.development.study_calibration import FitCalibration
from clinicalc.development.study_documentation import document_study
from clinicalc.development.study_figures import FitFigures
from clinicalc.operations.study_report_findings import tell_file, tell_findings, tell_remarks
from clinicalc.operations.study_report_methods import tell_methods
from clinicalc.operations.study_report_model import tell_model
from clinicalc.operations.study_report_people import tell_people
from clinicalc.operations.vetting_furniture import furnish
from clinicalc.report.calibration_figure import ShownCalibration
from clinicalc.report.contents import (
    CalibrationPart,
    Fact,
    FactList,
    Prose,
    Section,
    SpreadPart,
)
from clinicalc.report.phrases import count_words
from clinicalc.report.spread_figure import ShownSpread
from clinicalc.report.vetting_sheet import VettingSheet

NO_APPROVAL = (
    "This report repeats what a fit to a file of people came to. The program advises nothing and claims no approval by"
    " any authority; no report makes a model right."
)
NOT_FOR_PATIENTS = "Not vetted: the model gives no number for a patient before a practice has approved its file"
_HOW_TO_READ = (
    "“In these people” or “apparent” says that a figure was found in the very people the fit was made from. It is"
    " better there than anywhere else. Only other people can show how good the model is (external validation).",
    "A coefficient says how people who differ in a value differ in risk. It does not say what happens to somebody whose"
    " value is changed.",
    "Limits and bands hold for chance in the choice of people only: not for values measured wrongly, people left out,"
    " terms that should be in the model, or a practice where people are different.",
)
_NOT_MADE = "no coefficient file was made"
_CENSORED = (
    "Other events are taken as censored, as the fit takes them: the risk observed is that of a world without them."
)


def compose_study_report(
    fitted: FittedStudy, package: Package | None, calibrations: Sequence[FitCalibration]
) -> VettingSheet:
    """Everything that is known of the study’s fits; `package` is the file made from them, None where none was."""
    content = fitted.model.content
    named = f"{content.title} {content.version}"
    fingerprint = "" if package is None else package.model.fingerprint
    return VettingSheet(
        kind="Report of a fit",
        title=named,
        about=f"Report of a fit: {named}",
        lines=_head(fitted, package),
        says=_counted(fitted),
        sections=tuple(_sections(fitted, package, calibrations)),
        furniture=furnish(
            named,
            "",
            model=named,
            fingerprint=fingerprint,
            identity="" if fingerprint else _NOT_MADE,
            strip=NOT_FOR_PATIENTS,
            caution=NO_APPROVAL,
        ),
    )


def _head(fitted: FittedStudy, package: Package | None) -> tuple[str, ...]:
    study = fitted.study
    made = _NOT_MADE if package is None else "the coefficient file made from it has the fingerprint over the foot"
    return (
        fitted.model.content.outcome,
        f"Study file {study.name}, people from {study.cohort_file.name}; {made}.",
    )


def _counted(fitted: FittedStudy) -> str:
    if len(fitted.figures) > 1:
        return f"{count_words(len(fitted.figures), 'fit')} to {fitted.cohort.rows:,} people in the file"
    (figures,) = fitted.figures
    return f"{_kind(figures)} to {figures.people:,} people with {figures.events:,} events"


def _kind(figures: FitFigures) -> str:
    names = {"cox": "Cox fit", "fine-gray": "Fine–Gray fit", "logistic": "Logistic fit"}
    return names.get(figures.kind, "Fit with complementary log–log link")


def _sections(
    fitted: FittedStudy, package: Package | None, calibrations: Sequence[FitCalibration]
) -> Iterator[Section]:
    yield _about(fitted)
    several = len(fitted.figures) > 1
    for plan, figures in zip(fitted.study.fits, fitted.figures, strict=True):
        of = f": {figures.id}" if several else ""
        yield from tell_people(fitted, plan, figures, of)
        yield from tell_model(fitted, plan, figures, of)
        yield from tell_methods(fitted, figures, of)
        yield tell_findings(fitted, figures, of)
        for one in calibrations:
            if one.fit == figures.id:
                yield from _calibration(one, of, several=len(figures.equations) > 1)
    yield from tell_file(fitted.cohort.problems, fitted.cohort.rows)
    yield from tell_remarks(fitted, package)
    yield from _documentation(fitted)
    yield Section("How to read this report", (Prose(_HOW_TO_READ),))


def _about(fitted: FittedStudy) -> Section:
    use = fitted.model.content.use
    facts = [
        Fact("Made for", (use.population, use.setting), strong=True),
        Fact("Not for", (join_words(list(use.not_for)),)) if use.not_for else None,
        Fact("Cautions", tuple(use.cautions)) if use.cautions else None,
        Fact("Source", (fitted.model.content.source.citation,)),
    ]
    return Section("What it is", (FactList(tuple(fact for fact in facts if fact is not None)),))


def _calibration(one: FitCalibration, of: str, *, several: bool) -> Iterator[Section]:
    span = "" if one.span is None else one.span.words
    where = f"{of}{f', {span}' if span else ''}"
    if several and one.equations:
        where = f"{where} ({join_words(list(one.equations))})"
    shown = ShownCalibration(one.calibration, span, _CENSORED if one.censored else "")
    yield Section(f"Predicted and observed{where}", (CalibrationPart(shown),), whole=True)
    spread = one.calibration.spread
    lying = ShownSpread(spread)
    if one.calibration.horizon is not None:  # who was lost before it, or had another event first, stands below
        lying = ShownSpread(spread, f"with the event seen by {span}", "no event seen by then")
    yield Section(f"How the predictions lie{where}", (SpreadPart(lying),), whole=True)


def _documentation(fitted: FittedStudy) -> Iterator[Section]:
    found = document_study(fitted)
    own = [one for one in found.items if one.item != "not stated"]
    facts = tuple(Fact(one.item.capitalize(), (one.text,)) for one in own)
    yield Section("Documentation that goes into the file", (FactList(facts),))
    if found.unanswered:
        open_still = f"Nobody answered these, and the file says so: {join_words(list(found.unanswered))}."
        yield Section("Documentation that is not answered", (Prose((open_still,)),), whole=True)

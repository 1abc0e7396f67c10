"""The step Update: what the tests say, what was chosen, old figures and new, the file of the new version."""

from clinicalc.gui.study.section_parts import add_sections
from clinicalc.gui.study.step_sheet import StepSheet
from clinicalc.gui.study.steps import Ask
from clinicalc.gui.study.study_state import StudyState
from clinicalc.gui.study.validation_state import MadeUpdate, OpenedValidation
from clinicalc.operations.updating_words import METHOD_WORDS
from clinicalc.operations.validation_report_update import tell_update

_AGAIN = "&Update it otherwise…"
_BEGIN = (
    "A model that does not hold in these people may be mended: a new baseline, a slope, or all coefficients anew. Open"
    " a validation file, or choose a coefficient file in the step Validation, first."
)
_INSTALL = (
    "It is a new version, not vetted: no number of it is for a patient before the practice approved it. “Install it on"
    " the Models page” looks at it there; nothing is installed before the form there is filled in."
)


def make_update_sheet(state: StudyState) -> StepSheet:
    """The sheet as the study stands."""
    validating = state.validating
    opened, made = validating.opened, validating.update
    if opened is None and made is None:
        return StepSheet("Update", _BEGIN)
    sheet = StepSheet("Update", _head(opened, made))
    if made is None:
        if opened is not None:
            _add_before(sheet, opened)
        return sheet
    if validating.is_update_stale:
        sheet.add_words(
            f"This update is of {made.ground.model.content.title} {made.ground.model.content.version} and of the people"
            f" of {made.ground.path.name} as they were then, not of what is open now. Update again.",
            semibold=True,
        )
    _add_made(sheet, state, made)
    is_next = made.package is None or validating.is_update_stale  # the foot asks for it then
    if opened is not None and opened.may_validate and not is_next:
        sheet.add_asks(((_AGAIN, Ask.UPDATE),))
    return sheet


def _head(opened: OpenedValidation | None, made: MadeUpdate | None) -> str:
    ground = made.ground if made is not None else opened
    assert ground is not None
    content = ground.model.content
    how = "and" if made is None else "tested in" if made.update.keeps else "updated to"
    return f"{content.title} {content.version}, {how} the people of {ground.settled.cohort_file.name}"


def _add_before(sheet: StepSheet, opened: OpenedValidation) -> None:
    wished = opened.settled.update
    if wished is not None:
        sheet.add_lines(
            tuple(
                (name, says)
                for name, says in (
                    ("The file asks for", METHOD_WORDS[wished.wish.method]),
                    ("New version", wished.version),
                    ("Population", wished.population),
                )
                if says
            )
        )
    if not opened.may_validate:
        sheet.add_words("Nothing is updated before the stops in the data are seen to.", semibold=True)
        return
    sheet.add_words(
        "Not updated yet. “Update the model” asks how, and what the new version is called; nothing is written by it.",
        soft=True,
    )


def _add_made(sheet: StepSheet, state: StudyState, made: MadeUpdate) -> None:
    package, written = made.package, state.validating.written
    if made.update.keeps:
        sheet.add_words("The tests keep the model as it is: there is no new version.", semibold=True)
    elif written is not None:
        sheet.add_words(f"Written to {written}", semibold=True)
        sheet.add_words(_INSTALL)
    else:
        sheet.add_words("Nothing is written yet. This is what the new version would be:", soft=True)
    file = "" if written is None else written.name
    add_sections(sheet, tell_update(made.ground.model, made.update, package, file, (made.before, made.after)))
    if package is not None:
        extra = [remark for remark in package.remarks if remark not in made.update.remarks]
        if extra:
            sheet.add_heading("Remarks on the file")
        for remark in extra:
            sheet.add_words(remark)
        sheet.add_lines((("Size", f"{len(package.data):,} bytes"),))
    sheet.add_asks((("Save a r&eport…", Ask.UPDATE_REPORT),))

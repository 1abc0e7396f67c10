"""The step Validation: whether a model holds in these people, first in sentences, then in figures."""

from collections.abc import Iterator

from PySide6.QtWidgets import QVBoxLayout, QWidget

from clinicalc.assessment.decision import PointOrigin, points_for
from clinicalc.coefficients.fingerprint import group_fingerprint
from clinicalc.gui.held_layouts import Block
from clinicalc.gui.study.data_words import count, counts_line, state_problems
from clinicalc.gui.study.horizon_part import HorizonPart
from clinicalc.gui.study.problem_list import count_stated
from clinicalc.gui.study.refusal_words import state_refusal
from clinicalc.gui.study.step_sheet import StepSheet
from clinicalc.gui.study.steps import Ask
from clinicalc.gui.study.study_state import StudyState
from clinicalc.gui.study.validation_rows import (
    GROUPS,
    GROUPS_NOTE,
    WAY,
    group_facts,
    groups_heading,
    way_facts,
    way_note,
)
from clinicalc.gui.study.validation_state import MadeValidation, OpenedValidation
from clinicalc.gui.view_tabs import ViewTabs
from clinicalc.validation.validated import HorizonValidation

_BEGIN = (
    "Whether a model holds in people it was not made from. Open a validation file, which says in TOML which coefficient"
    " file and which people; or open a study, and choose here a coefficient file that is held against its people."
)
HOLD = "&Choose a coefficient file…"
_ANOTHER = "&Choose another coefficient file…"
_SAVE = (("Save a r&eport…", Ask.VALIDATION_REPORT), ("Save &tables…", Ask.TABLES), ("Save &drawings…", Ask.DRAWINGS))


def make_validation_sheet(state: StudyState) -> StepSheet:
    """The sheet as the study stands."""
    validating = state.validating
    opened, made = validating.opened, validating.made
    sheet = StepSheet("Validation", _head(state))
    if validating.not_opened is not None:
        sheet.add_heading("The coefficient file was not taken")
        sheet.add_stated(state_refusal(validating.not_opened))
    if validating.not_made is not None:
        stated = state_refusal(validating.not_made)
        sheet.add_heading(f"The model was not validated: {count(len(stated), 'problem')}")
        sheet.add_stated(stated)
    if made is not None:
        _add_standing(sheet, state, made)
        _add_made(sheet, made, validating.horizon)
    elif opened is not None:
        _add_opened(sheet, state, opened)
    if state.path is not None:
        sheet.add_asks(((_ANOTHER if opened is not None else HOLD, Ask.HOLD_MODEL),))
    return sheet


def _head(state: StudyState) -> str:
    made, opened = state.validating.made, state.validating.opened
    if made is not None and not state.validating.is_stale:
        found = made.validation
        people = found.cohort.rstrip(".") or f"the people of {made.ground.settled.cohort_file.name}"
        return f"{found.title} {found.version} in {found.count.used:,} people: {people}"
    if opened is not None:
        content = opened.model.content
        return f"{content.title} {content.version} in the people of {opened.settled.cohort_file.name}"
    if state.opened is None:
        return _BEGIN
    return (
        "Whether a model that was made elsewhere holds in the people of this study: choose its coefficient file. A fit"
        " of this study is not validated in the people it was made from."
    )


def _add_opened(sheet: StepSheet, state: StudyState, opened: OpenedValidation) -> None:
    """What is about to be looked at, before it is."""
    sheet.add_lines(tuple(_ground_lines(opened)))
    if opened.people is None:
        assert opened.fault is not None  # one of the two is there
        sheet.add_heading(f"{opened.settled.cohort_file.name} was not read")
        sheet.add_stated(state_refusal(opened.fault))
        return
    if state.people_only is None:  # else they stand in the step Data
        _add_problems(sheet, opened)
    study = state.opened
    if study is not None and study.study.content.id == opened.model.content.id:
        sheet.add_words(
            "The model bears the id of this study. In the people it was made from it looks better than it is, and that"
            " is no validation.",
            semibold=True,
        )
    if opened.may_validate:
        sheet.add_words("Not validated yet. “Validate” begins it; it can be cancelled while it runs.", soft=True)
    else:
        where = "" if state.people_only is None else ": see the step Data"
        sheet.add_words(f"Nothing is validated before the stops in the data are seen to{where}.", semibold=True)


def _ground_lines(opened: OpenedValidation) -> Iterator[tuple[str, str]]:
    settled, content = opened.settled, opened.model.content
    yield "Model", f"{content.title}, version {content.version}"
    yield "Fingerprint", group_fingerprint(opened.model.fingerprint)
    if settled.recalibration:
        yield "Recalibration", settled.recalibration
    if opened.people is not None:
        yield "People", counts_line(opened.people.cohort)
    if settled.cohort:
        yield "Who they are", settled.cohort
    spans = opened.model.spans if settled.spans is None else settled.spans
    if spans:
        yield "Horizons", ", ".join(span.words for span in spans)
    if settled.groups:
        yield "Groups", ", ".join(group.name for group in settled.groups)


def _add_problems(sheet: StepSheet, opened: OpenedValidation) -> None:
    assert opened.people is not None
    stated = state_problems(opened.people.cohort.problems)
    if stated:
        sheet.add_heading(f"Problems: {count_stated(stated)}")
        sheet.add_stated(stated)


def _add_standing(sheet: StepSheet, state: StudyState, made: MadeValidation) -> None:
    """Whose figures they are, where those are not of what is open; what is open stands before them."""
    validating, name = state.validating, made.ground.path.name
    if not validating.is_stale:
        if validating.not_made is not None:
            sheet.add_words("What follows are the figures of before, of the same model and people.", semibold=True)
        return
    opened = validating.opened
    if opened is not None:
        sheet.add_heading("What is open now")
        _add_opened(sheet, state, opened)
    sheet.add_heading("What was found before")
    sheet.add_words(
        f"These figures are of {made.validation.title} {made.validation.version} and of the people of {name} as they"
        " were then, not of what is open now.",
        semibold=True,
    )


def _add_made(sheet: StepSheet, made: MadeValidation, horizon: int) -> None:
    found = made.validation
    for sentence in found.verdict:
        sheet.add_words(sentence, semibold=True)
    said = " ".join(found.verdict)
    for fault in found.faults:
        if fault.sentence not in said:
            sheet.add_words(fault.sentence)
    if found.horizons:
        sheet.add_widget(_Horizons(sheet, made, horizon % len(found.horizons)))
    if found.groups:
        sheet.add_heading(groups_heading(made))
        sheet.add_table("Groups", GROUPS, tuple(group_facts(made)))
        sheet.add_words(GROUPS_NOTE, soft=True)
    sheet.add_heading("Where everybody went")
    sheet.add_table("Where everybody went", WAY, tuple(way_facts(made)))
    note = way_note(made)
    if note:
        sheet.add_words(note, soft=True)
    if found.remarks:
        sheet.add_heading("Remarks")
        for remark in found.remarks:
            sheet.add_words(remark)
    sheet.add_asks(_SAVE)


class _Horizons(Block):
    """One horizon at a time; the others are a tab away."""

    def __init__(self, sheet: StepSheet, made: MadeValidation, shown: int) -> None:
        super().__init__()
        self._sheet, self._made = sheet, made
        self._column = QVBoxLayout(self)
        self._column.setContentsMargins(0, 0, 0, 0)
        self._column.setSpacing(6)
        self._part: QWidget | None = None
        horizons = made.validation.horizons
        if len(horizons) > 1:
            tabs = ViewTabs()
            tabs.setAccessibleName("Horizons")
            for one in horizons:
                words = "no horizon" if one.span is None else one.span.words
                tabs.add_view(words, words)
            tabs.setCurrentIndex(shown)
            tabs.currentChanged.connect(self._choose)
            self._column.addWidget(tabs)
        self._show(shown)

    def _choose(self, place: int) -> None:
        self._show(place)
        self._sheet.asked.emit(Ask.HORIZON, place)

    def _show(self, place: int) -> None:
        if self._part is not None:
            self._column.removeWidget(self._part)
            self._part.setParent(None)
            self._part.deleteLater()
        shown = self._made.validation.horizons[place]
        part = HorizonPart(shown, practice_points(self._made.ground, shown))
        for table in part.tables:
            self._sheet.watch_table(table)
        self._part = part
        self._column.addWidget(part)


def practice_points(ground: OpenedValidation, shown: HorizonValidation) -> tuple[float, ...]:
    """The decision points that the practice itself acts at, at that horizon."""
    spans = ground.model.spans if shown.span is None else (shown.span,)
    found = [point for span in spans for point in points_for(ground.model, span, ground.practice_points)]
    return tuple(point.probability for point in found if point.origin is PointOrigin.PRACTICE)

"""What was found, for the report of a fit: by its screening, in the file of people, and what is to be remarked.

Notes of one kind about many columns stand in one line: each column with its count, so that cautions are not lost among
them. Nothing is left out but a remark that a finding says already.
"""

from collections.abc import Iterator, Sequence

from clinicalc.assessment.findings import Grade
from clinicalc.assessment.numerals import NARROW_SPACE, join_words
from clinicalc.coefficients.pointers import quoted
from clinicalc.cohort.problems import DataProblem, ProblemCode
from clinicalc.development.estimating import FittedStudy
from clinicalc.development.package import Package
from clinicalc.development.study_documentation import document_study
from clinicalc.development.study_figures import FitFigures
from clinicalc.development.study_package import say_unanswered
from clinicalc.development.study_remarks import name_only_fit_nowhere, remark_competing
from clinicalc.estimation.screened import Figure, Screen, Screened
from clinicalc.estimation.screening_words import word_screened
from clinicalc.report.contents import Mark, Prose, Remark, RemarkList, Section

_WEIGHTS = {Grade.STOP: 0, Grade.CAUTION: 1, Grade.NOTE: 2}
_OF_VALUES = (
    Screen.MISSING,
    Screen.MISSING_TOGETHER,
    Screen.MISSING_WITH_OUTCOME,
    Screen.ALL_MISSING,
    Screen.FILLED_IN,
)
"""Findings about values that are asked for, called here by their labels; others are about terms, called by their id."""
_COMPETING = (Screen.COMPETING_CENSORED, Screen.COMPETING_COUNTED)
_TOLD_TOGETHER = (Screen.MISSING, Screen.MISSING_TOGETHER, Screen.FILLED_IN)
_Graded = tuple[Grade, str]


def tell_findings(fitted: FittedStudy, figures: FitFigures, of: str) -> Section:
    """What the screening of a fit found; `of` names the fit in the heading, "" for the only one."""
    labels = {one.id: one.label for one in fitted.model.content.predictors}

    def name(id: str) -> str:
        return labels.get(id) or quoted(id)

    told: list[_Graded] = []
    for code in dict.fromkeys(one.code for one in figures.screened):
        same = [one for one in figures.screened if one.code is code]
        notes = [one for one in same if one.gravity is Grade.NOTE] if code in _TOLD_TOGETHER else []
        if len(notes) < 2:
            notes = []
        else:
            told.append((Grade.NOTE, _together(code, notes, labels)))
        called = name if code in _OF_VALUES else quoted
        told += [(one.gravity, word_screened(one, called)) for one in same if one not in notes]
    heading = f"What was found{of}"
    if not told:
        return Section(heading, (Prose(("Nothing was found in the data that speaks against the fit.",)),))
    return Section(heading, (_numbered(told),))


def _together(code: Screen, notes: Sequence[Screened], labels: dict[str, str]) -> str:
    """One sentence of several notes, each with its columns, count and share."""
    people = f"{round(notes[0].figure(Figure.OF_PEOPLE)):,}"
    parts = [
        f"{join_words([labels.get(id) or quoted(id) for id in one.columns])} {round(one.figure(Figure.PEOPLE)):,}"
        f" ({100.0 * one.figure(Figure.SHARE):.1f}{NARROW_SPACE}%)"
        for one in notes
    ]
    if code is Screen.FILLED_IN:
        how = f"and were filled in {round(notes[0].figure(Figure.SETS))} times from the other columns and the outcome"
        return f"Values were missing, of {people} people, {how}: {join_words(parts)}."
    if code is Screen.MISSING_TOGETHER:
        return f"Missing together, and no other, of {people} people: {'; '.join(parts)}."
    return f"Values are missing, of {people} people: {join_words(parts)}."


def tell_file(problems: Sequence[DataProblem], lines: int) -> Iterator[Section]:
    """What was found in the file of people, which has so many `lines`; no section where nothing was."""
    missing = [one for one in problems if one.code is ProblemCode.MISSING and one.gravity is Grade.NOTE]
    if len(missing) < 2:
        missing = []
    told = [(one.gravity, _with_lines(one)) for one in problems if one not in missing]
    if missing:
        parts = [f"{quoted(one.column)} in {one.count:,}{_beginning(one)}" for one in missing]
        told.append((Grade.NOTE, f"Cells without a value, of {lines:,} lines: {join_words(parts)}."))
    if told:
        yield Section("What was found in the file of people", (_numbered(told),))


def _beginning(problem: DataProblem) -> str:
    """The first lines a problem is about, in brackets."""
    if not problem.rows:
        return ""
    more = ", …" if problem.count > len(problem.rows) else ""
    return f" (line{'s' * (problem.count > 1)} {', '.join(f'{row:,}' for row in problem.rows)}{more})"


def _with_lines(problem: DataProblem) -> str:
    """The sentence, and the first lines it is about where it does not name them itself."""
    if not problem.rows or "in line" in problem.sentence:
        return problem.sentence
    more = ", …" if problem.count > len(problem.rows) else ""
    lines = ", ".join(f"{row:,}" for row in problem.rows)
    return f"{problem.sentence} Line{'s' * (len(problem.rows) > 1)} {lines}{more or '.'}"


def tell_remarks(fitted: FittedStudy, package: Package | None) -> Iterator[Section]:
    """Remarks on the fits and the file made, each once, less what stands in the report already.

    The only fit is not called by its id.
    """
    said = dict.fromkeys([*fitted.remarks, *(() if package is None else package.remarks)])
    said.pop(say_unanswered(document_study(fitted).unanswered), None)  # has a section of its own
    for figures in fitted.figures:
        if any(one.code in _COMPETING for one in figures.screened):  # a finding says what that comes to, with shares
            for remark in remark_competing(figures):
                said.pop(remark, None)
    if said:
        yield Section("Remarks on the fit", (Prose(tuple(name_only_fit_nowhere(tuple(said), fitted.figures))),))


def _numbered(told: Sequence[_Graded]) -> RemarkList:
    """Stops, cautions, notes, numbered in this order."""
    ordered = sorted(told, key=lambda one: _WEIGHTS[one[0]])
    return RemarkList(
        tuple(
            Remark(Mark(str(number), _WEIGHTS[grade]), str(grade).capitalize(), text)
            for number, (grade, text) in enumerate(ordered, 1)
        )
    )

"""The forms in which what a study came to is written: the study file, the coefficient file, the report of the fit."""

from __future__ import annotations

from functools import partial
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from clinicalc.gui.errands import Errands
    from clinicalc.gui.file_choosing import FileChoices
    from clinicalc.gui.form_deed import FormDeed
    from clinicalc.gui.study.study_state import StudyState


def write_file(state: StudyState, errands: Errands, choices: FileChoices) -> FormDeed | None:
    """Writes the coefficient file of the fit; None where there is none."""
    from clinicalc.gui.study.study_errands import sign_study
    from clinicalc.gui.study.write_deed import WriteDeed

    package, fit, opened = state.package, state.fit, state.opened
    if package is None or fit is None or opened is None:
        return None
    return WriteDeed(package, partial(sign_study, fit.fitted), opened.path.parent, errands, choices)


def save_study(state: StudyState, errands: Errands, choices: FileChoices) -> FormDeed | None:
    """Saves the study file that is being written; None where none is."""
    from clinicalc.gui.study.save_deed import SaveDeed

    return None if state.draft is None else SaveDeed(state.draft, errands, choices.where)


def report_fit(state: StudyState, errands: Errands, choices: FileChoices) -> FormDeed | None:
    """Saves a report of the fit; None where there is none."""
    from clinicalc.gui.study.report_deed import ReportDeed

    fit, path = state.fit, state.path
    if fit is None or path is None:
        return None
    return ReportDeed(fit, state.package, path.parent, errands, choices.where)

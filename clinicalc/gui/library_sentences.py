"""What is said in place of a number: why the library does not stand behind a model, or why none is chosen.

The rooms of the library are loaded with the first sentence, not at every start of a window.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

from clinicalc.errors import ClinicalcError

if TYPE_CHECKING:
    from clinicalc.assessment.vetting import Vetting
    from clinicalc.library.opening import OpenedLibrary
    from clinicalc.operations.approved import ApprovedModel

_GONE = "This model is no longer in the practice’s library."
_OTHER_CHOICES = (
    "The practice has approved this model anew, with another recalibration or other decision points. Choose it again,"
    " or begin a new patient; it then answers as it is approved now."
)


def judge_in_use(approved: ApprovedModel, opened: OpenedLibrary) -> Vetting | str:
    """By whom the model on screen is approved now, or the sentence why its number has to go; `opened` is about it."""
    from clinicalc.library.bedside import vetting_of
    from clinicalc.library.standing import Standing
    from clinicalc.operations.library_words import say_standing

    fingerprint = approved.model.fingerprint
    state = opened.state(fingerprint)
    if state is None:
        return _GONE
    if state.standing is not Standing.IN_USE or state.approval is None:
        of_all = [fault.sentence for fault in opened.faults if fault.stops]
        return in_window(state.reason if state.reason in of_all else say_standing(state))
    vetting = vetting_of(opened, fingerprint)
    before, now = approved.vetting, (vetting.recalibration, vetting.compared, state.approval.decision_points)
    if (before.recalibration, before.compared, approved.decision_points) != now:
        return _OTHER_CHOICES
    return vetting


def invite(opened: OpenedLibrary | None, trouble: str) -> tuple[str, str]:
    """Why nothing is chosen, and what to do; `trouble` says why the library could not be opened."""
    if opened is None:
        return "The library cannot be used", f"{trouble[:1].upper()}{trouble[1:]}"
    stop = next((fault.sentence for fault in opened.faults if fault.stops), "")
    count = len(opened.in_use())
    if count:
        return "No model is chosen", f"Choose one of the {count} models in use, in the line at the top."
    why = stop or "The practice’s library holds none that is approved for use now. An approver of the practice can."
    return "No model is in use", in_window(why)


def say_error(error: ClinicalcError) -> str:
    """An error as a sentence of the window."""
    from clinicalc.gui.window_words import sentence_of

    return sentence_of(error)


def in_window(sentence: str) -> str:
    """The sentence with what the window has in place of commands."""
    from clinicalc.gui.window_words import replace_commands

    return replace_commands(sentence)

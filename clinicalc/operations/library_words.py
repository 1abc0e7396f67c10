"""Where the models of a library stand, in words that command line and window share."""

from enum import StrEnum

from clinicalc.library.standing import ModelState, Standing
from clinicalc.report.phrases import day_words


class Shelf(StrEnum):
    """The three groups of a list of models."""

    IN_USE = "In use"
    WAITING = "Waiting for approval"
    OUT_OF_USE = "Out of use"


def shelf_of(state: ModelState) -> Shelf:
    """The group in which a model is listed; one past its review date gives no number, so it is out of use."""
    if state.standing is Standing.IN_USE:
        return Shelf.IN_USE
    return Shelf.WAITING if state.standing is Standing.WAITING else Shelf.OUT_OF_USE


def say_standing(state: ModelState) -> str:
    """Where a model stands, as a sentence with who said so, or why it gives no number."""
    approval = state.approval
    because = f": {state.reason}" if state.reason else ""
    match state.standing:
        case Standing.IN_USE if approval is not None:
            also = ", who also made or brought the file," if approval.by_author else ""
            return f"Approved by {approval.name} ({approval.role}){also} until {day_words(approval.review_until)}."
        case Standing.REVIEW_OVERDUE if approval is not None:
            return (
                f"Review overdue: approved by {approval.name} ({approval.role}) until"
                f" {day_words(approval.review_until)}. It gives no number."
            )
        case Standing.WAITING:
            return _ended(f"Waiting for approval{because}")
        case Standing.WITHDRAWN:
            return _ended(state.reason or "Withdrawn")
        case Standing.HELD:
            return _ended(state.reason or "Held on this machine")
    return _ended(f"Refused{because}")


def _ended(sentence: str) -> str:
    return sentence if sentence.endswith((".", "?", "!")) else f"{sentence}."

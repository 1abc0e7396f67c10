"""Whether somebody else wrote about a model between the look at its card and the signature."""

from clinicalc.errors import LibraryError
from clinicalc.library.history import say_statement
from clinicalc.library.standing import ModelState
from clinicalc.operations.model_card import ModelCard


def require_unchanged(state: ModelState, seen: ModelCard | None) -> None:
    """Nothing where the records about the model are those of the card, or no card was shown.

    An approval given in good faith would otherwise undo a withdrawal that its writer has not seen. What is written
    after this reading is not followed by the new record, so that a withdrawal then wins. Raises LibraryError that
    names the newest record.
    """
    if seen is None:
        return
    known = {sealed.digest for sealed in seen.state.records} if seen.state is not None else set()
    fresh = [sealed for sealed in state.records if sealed.digest not in known]
    if not fresh:
        return
    record = fresh[-1].record
    what, why = say_statement(record.statement)
    because = f" ({why.rstrip('. ')})" if why else ""
    raise LibraryError(
        f"meanwhile {record.name} wrote about this model: {what}{because}.",
        where=f"{seen.title} {seen.version}",
        do="Nothing was signed. Go back, look at the model as it stands now, and decide again.",
    )

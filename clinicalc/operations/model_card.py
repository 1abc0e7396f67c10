"""Everything that is shown of one model of the library, or of a file that may be installed, on one card."""

from collections.abc import Iterable
from dataclasses import dataclass
from enum import StrEnum

from clinicalc.assessment.model import Model
from clinicalc.coefficients.schema import ModelContent
from clinicalc.errors import CoefficientFileRefused, LibraryError
from clinicalc.library.installing import Candidate, read_installed, weigh
from clinicalc.library.opening import OpenedLibrary
from clinicalc.library.standing import Approval, ModelState, Standing
from clinicalc.library.trust_store import TrustStore
from clinicalc.operations.library_history import tell_history
from clinicalc.operations.library_view import UNNAMED, LibraryView, ModelRow
from clinicalc.operations.library_words import Shelf
from clinicalc.operations.model_checks import Check, list_checks
from clinicalc.operations.open_figures import OpenFigure, list_open_figures

__all__ = ["Check", "Deed", "ModelCard", "OpenFigure", "card_of_candidate", "card_of_state"]


class Deed(StrEnum):
    """What may be done with a model."""

    INSTALL = "install"
    APPROVE = "approve"
    EXTEND = "extend"
    WITHDRAW = "withdraw"
    COMMENT = "comment"
    HOLD = "hold"
    RELEASE = "release"


_MAY = {
    Standing.WAITING: frozenset({Deed.APPROVE, Deed.WITHDRAW, Deed.COMMENT}),
    Standing.IN_USE: frozenset({Deed.APPROVE, Deed.EXTEND, Deed.WITHDRAW, Deed.COMMENT, Deed.HOLD}),
    Standing.REVIEW_OVERDUE: frozenset({Deed.APPROVE, Deed.EXTEND, Deed.WITHDRAW, Deed.COMMENT}),
    Standing.WITHDRAWN: frozenset({Deed.APPROVE, Deed.COMMENT}),
    Standing.HELD: frozenset({Deed.APPROVE, Deed.EXTEND, Deed.WITHDRAW, Deed.COMMENT, Deed.RELEASE}),
    Standing.REFUSED: frozenset({Deed.WITHDRAW, Deed.COMMENT}),
}
_NEED_THE_FILE = frozenset({Deed.APPROVE, Deed.EXTEND})
_ON_THIS_MACHINE = frozenset({Deed.HOLD, Deed.RELEASE})


@dataclass(frozen=True, slots=True)
class ModelCard:
    """One model. `row` and `state` are None for a file that is not in the library.

    `candidate` is the file, read and proved; None where it cannot be used, which `file_fault` explains, and the texts
    that only the file has are then empty. `recalibrations` are id and label. `is_trusted`: a publisher trusted on this
    machine signed it, so that nobody has to type its fingerprint. `others` are the versions of the same id, the one in
    use first. `may` is what its standing allows; a key in force is needed besides, but for HOLD and RELEASE.
    """

    fingerprint: str
    title: str
    version: str
    id: str
    outcome: str
    horizons: str
    row: ModelRow | None
    state: ModelState | None
    candidate: Candidate | None
    checks: tuple[Check, ...]
    documentation: tuple[tuple[str, str], ...]
    unconfirmed: tuple[OpenFigure, ...]
    cautions: tuple[str, ...]
    recalibrations: tuple[tuple[str, str], ...]
    recalibration_required: bool
    is_trusted: bool
    approval: Approval | None
    history: tuple[str, ...]
    faults: tuple[str, ...]
    file_fault: str
    others: tuple[ModelRow, ...]
    may: frozenset[Deed]


def card_of_state(view: LibraryView, state: ModelState, trust: TrustStore) -> ModelCard:
    """The card of a model of the library; its file is read now, and its examples are recomputed."""
    candidate, fault = read_state(view.opened, state, trust)
    may = _allowed(view, state, has_file=candidate is not None)
    return _card(view, state, candidate, fault, may)


def card_of_candidate(view: LibraryView, candidate: Candidate, state: ModelState | None, *, is_new: bool) -> ModelCard:
    """The card of a file that was looked at; `state` where the library has the same file, `is_new` where it may come.

    A file that is there already may come again where a trusted publisher has signed it since.
    """
    own = frozenset[Deed]() if state is None else _allowed(view, state, has_file=True)
    install = frozenset({Deed.INSTALL}) if is_new and _is_writable(view) else frozenset[Deed]()
    return _card(view, state, candidate, "", own | install)


def read_state(opened: OpenedLibrary, state: ModelState, trust: TrustStore) -> tuple[Candidate | None, str]:
    """The file of a model of the library with its proof, or why it cannot be used."""
    try:
        return weigh(read_installed(opened.source, state), trust), ""
    except (LibraryError, CoefficientFileRefused) as fault:
        return None, str(fault)


def other_rows(view: LibraryView, id: str, fingerprint: str) -> tuple[ModelRow, ...]:
    """The other versions of a model, the one in use first, then the newest."""
    same = {state.fingerprint for state in view.opened.models if id and state.id == id} - {fingerprint}
    rows = [row for row in reversed(view.rows) if row.fingerprint in same]
    return tuple(sorted(rows, key=lambda row: row.shelf is not Shelf.IN_USE))


def _card(
    view: LibraryView, state: ModelState | None, candidate: Candidate | None, fault: str, may: frozenset[Deed]
) -> ModelCard:
    content = None if candidate is None else candidate.model.content
    named = state if content is None else content
    fingerprint = state.fingerprint if state is not None else candidate.model.fingerprint if candidate else ""
    approval = None if state is None else state.approval
    compared = () if approval is None else approval.compared
    id = named.id if named else ""
    return ModelCard(
        fingerprint=fingerprint,
        title=(named.title if named else "") or UNNAMED,
        version=named.version if named else "",
        id=id,
        outcome=content.outcome if content else "",
        horizons=say_horizons(candidate.model) if candidate else "",
        row=view.row(fingerprint) if state is not None else None,
        state=state,
        candidate=candidate,
        checks=list_checks(candidate) if candidate else (),
        documentation=tuple((entry.item, entry.text) for entry in content.documentation) if content else (),
        unconfirmed=list_open_figures(content, compared) if content else (),
        cautions=content.use.cautions if content else (),
        recalibrations=_offered(content) if content else (),
        recalibration_required=content is not None and content.recalibration_required,
        is_trusted=candidate is not None and bool(candidate.trusted),
        approval=approval,
        history=() if state is None else tell_history(state),
        faults=_sentences(fault.sentence for fault in state.faults) if state is not None else (),
        file_fault=fault,
        others=other_rows(view, id, fingerprint),
        may=may,
    )


def say_horizons(model: Model) -> str:
    """The time spans that the model answers for, in file order."""
    return ", ".join(span.words for span in model.spans)


def _offered(content: ModelContent) -> tuple[tuple[str, str], ...]:
    """Each recalibration once: at several horizons the same one has the same id."""
    return tuple({offer.id: offer.label for offer in reversed(content.recalibrations)}.items())[::-1]


def _sentences(said: Iterable[str]) -> tuple[str, ...]:
    return tuple(dict.fromkeys(said))


def _allowed(view: LibraryView, state: ModelState, *, has_file: bool) -> frozenset[Deed]:
    may = _MAY[state.standing]
    if not _is_writable(view):
        may &= _ON_THIS_MACHINE
    if not has_file or any(fault.stops for fault in state.faults):
        may -= _NEED_THE_FILE
    return may


def _is_writable(view: LibraryView) -> bool:
    """Whether records can be written now: the library is there, and nothing stops it as a whole."""
    opened = view.opened
    return opened.reachable and not any(fault.stops for fault in (*opened.faults, *opened.authority.faults))

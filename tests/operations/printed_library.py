"""The prints of a library for tests: a library that was read, a document as text, the time that stands in the foot."""

from datetime import UTC, datetime

from clinicalc.library.machine import Machine
from clinicalc.library.opening import OpenedLibrary, verify_all
from clinicalc.library.standing import ModelState
from clinicalc.library.trust_store import TrustStore
from clinicalc.operations.model_card import read_state
from clinicalc.operations.vetting_prints import PrintChoices, lay_out_approval
from clinicalc.report.document import Document
from clinicalc.report.pdf import write_document
from clinicalc.settings import Paper
from tests.library.machines import NOW, Shelf, only_state
from tests.report.printing import text_of

TARNWICK = "tarnwick-cvd-10y"
TITLE = "Tarnwick cardiovascular disease, invented example"
PRINTED = datetime(2026, 12, 1, 14, 20, tzinfo=UTC)
CHOICES = PrintChoices(Paper.A4, PRINTED)


def opened_after(shelf: Shelf, machine: Machine) -> OpenedLibrary:
    """The library with what the practice has said since."""
    shelf.put()
    return verify_all(machine, NOW)


def read(document: Document) -> str:
    """The text of a print."""
    return text_of(write_document(document, "A subject"))


def approval(opened: OpenedLibrary, state: ModelState | None = None) -> str:
    """The approval record of the one model, as text."""
    state = state or only_state(opened)
    return read(lay_out_approval(opened, state, *read_state(opened, state, TrustStore()), CHOICES))

"""A whole library looked through: records, chain, files, and the worked examples of every model."""

from dataclasses import dataclass

from clinicalc.assessment.proof import prove_model
from clinicalc.errors import CoefficientFileRefused, LibraryError
from clinicalc.library.folder import LibraryFolder
from clinicalc.library.installing import read_installed
from clinicalc.library.opening import OpenedLibrary
from clinicalc.library.standing import Fault, FaultKind, ModelState


@dataclass(frozen=True, slots=True)
class Checked:
    """What was found, and how many records and models were looked at."""

    faults: tuple[Fault, ...]
    records: int
    models: int


def check_library(opened: OpenedLibrary) -> Checked:
    """Every fault once: of the library, of each model's records, of each file."""
    found = [*opened.faults, *opened.authority.faults]
    if opened.reachable:
        found += LibraryFolder(opened.place).list_strays()
    for state in opened.models:
        found += state.faults
        found += _check_file(opened, state)
    records = len(opened.authority.records) + sum(len(state.records) for state in opened.models)
    return Checked(tuple(dict.fromkeys(found)), records, len(opened.models))


def _check_file(opened: OpenedLibrary, state: ModelState) -> tuple[Fault, ...]:
    """Nothing where the file is whole and its examples come out; a fault that stops where not."""
    if any(fault.stops for fault in state.faults):
        return ()
    try:
        prove_model(read_installed(opened.source, state))
    except (LibraryError, CoefficientFileRefused) as refused:
        return (Fault(FaultKind.CHANGED_FILE, state.fingerprint, str(refused)),)
    return ()

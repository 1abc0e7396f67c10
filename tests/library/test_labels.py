"""A model is called in its records what its own file calls it, or it gives no number and is not approved."""

from datetime import timedelta
from pathlib import Path

import pytest

from clinicalc.errors import LibraryError
from clinicalc.library.bedside import load_approved
from clinicalc.library.installing import read_canonical
from clinicalc.library.labels import find_other_name
from clinicalc.library.opening import open_for_bedside, open_library, verify_all
from clinicalc.library.standing import FaultKind, Standing
from tests.library.machines import MODEL_NAMES, NOW, look, machine_for, make_shelf, model_bytes, only_state, standing

HOUR = timedelta(hours=1)


@pytest.mark.parametrize("place", [0, 1, 2], ids=["id", "version", "title"])
def test_a_model_that_its_records_call_otherwise_than_its_file_is_refused(tmp_path: Path, place: int) -> None:
    shelf = make_shelf(tmp_path / "library")
    names = list(MODEL_NAMES)
    names[place] = ("another-score", "2.0.0", "Another score")[place]
    shelf.practice.about_model.clear()
    shelf.practice.named = (names[0], names[1], names[2])
    for file in (shelf.place / "records").glob(f"{shelf.fingerprint}-*.json"):
        file.unlink()
    brought = shelf.practice.install()
    shelf.practice.approve()
    shelf.put()
    machine = machine_for(shelf, tmp_path / "machine")
    for hours, open_it in enumerate((open_library, open_for_bedside, verify_all)):
        opened = open_it(machine, NOW + hours * HOUR)
        (fault,) = only_state(opened).faults
        assert (standing(opened), fault.kind, fault.record) == (
            Standing.REFUSED,
            FaultKind.MISNAMED_RECORD,
            brought.digest,
        )
        assert (
            f"({brought.digest[:12]}…) calls this model “{names[2]}”, {names[0]} {names[1]}; the file" in fault.sentence
        )
        assert f"the file itself is “{MODEL_NAMES[2]}”, {MODEL_NAMES[0]} {MODEL_NAMES[1]}." in fault.sentence
    state = only_state(opened)
    with pytest.raises(LibraryError, match="its file has another name than its records"):
        read_canonical(model_bytes()[1], state)
    with pytest.raises(LibraryError, match="The record of its installation"):
        load_approved(opened, shelf.fingerprint)


def test_a_model_under_its_own_name(tmp_path: Path) -> None:
    shelf = make_shelf(tmp_path / "library")
    opened = look(machine_for(shelf, tmp_path / "machine"))
    state = only_state(opened)
    assert find_other_name(state, model_bytes()[1]) is None
    assert load_approved(opened, shelf.fingerprint).content.version == MODEL_NAMES[1]
    # what does not name itself is no coefficient file, and refused as such
    assert find_other_name(state, b"{}") is None

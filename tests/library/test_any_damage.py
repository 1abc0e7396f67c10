"""Whatever happens to the files of a library that was seen: never a number that was not there before."""

import shutil
from pathlib import Path
from tempfile import TemporaryDirectory

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from clinicalc.errors import LibraryError
from clinicalc.library.machine import Machine
from clinicalc.library.opening import open_for_bedside, open_library, verify_all
from clinicalc.library.standing import ModelState
from tests.library.machines import NOW, Shelf, machine_for, make_shelf

OPENINGS = (open_library, open_for_bedside, verify_all)


@pytest.fixture(scope="module", params=["in use", "withdrawn"])
def seen(request: pytest.FixtureRequest, tmp_path_factory: pytest.TempPathFactory) -> tuple[Path, Shelf]:
    """A folder with a library and a machine that has seen all of it."""
    folder = tmp_path_factory.mktemp("seen")
    shelf = make_shelf(folder / "library")
    shelf.practice.remark()
    if request.param == "withdrawn":
        shelf.practice.revoke("Cleo Fell")
        shelf.practice.withdraw()
    shelf.put()
    opened = open_library(machine_for(shelf, folder / "machine"), NOW)
    assert bool(opened.in_use()) is (request.param == "in use")
    return folder, shelf


def damage(place: Path, data: st.DataObject) -> None:
    """One misfortune to one file of the library."""
    files = sorted(path for path in place.rglob("*") if path.is_file())
    if not files:
        return
    path = data.draw(st.sampled_from(files))
    content = path.read_bytes()
    what = data.draw(st.sampled_from(["gone", "bit", "cut", "longer", "other content", "other name", "folder"]))
    if what == "bit" and content:
        at = data.draw(st.integers(0, len(content) - 1))
        path.write_bytes(content[:at] + bytes([content[at] ^ 1 << data.draw(st.integers(0, 7))]) + content[at + 1 :])
    elif what == "cut":
        path.write_bytes(content[: data.draw(st.integers(0, len(content)))])
    elif what == "longer":
        path.write_bytes(content + data.draw(st.binary(min_size=1, max_size=5)))
    elif what == "other content":
        path.write_bytes(data.draw(st.sampled_from(files)).read_bytes())
    elif what == "other name":
        path.replace(data.draw(st.sampled_from(files)))
    else:
        path.unlink()
        if what == "folder":
            path.mkdir()


def in_use_after(machine: Machine, opening: int) -> tuple[ModelState, ...]:
    """What gives a number after all; nothing where the library is not opened at all."""
    try:
        opened = OPENINGS[opening](machine, NOW)
    except LibraryError:
        return ()
    return opened.in_use() if opened.reachable else ()


@settings(max_examples=60)
@given(st.data(), st.integers(0, 2))
def test_no_damage_makes_a_number(seen: tuple[Path, Shelf], data: st.DataObject, opening: int) -> None:
    whole, shelf = seen
    with TemporaryDirectory() as name:
        folder = Path(name)
        shutil.copytree(whole, folder, dirs_exist_ok=True)
        machine = Machine(folder / "machine", folder / "library", shelf.practice.key.id)
        before = {state.fingerprint: state.approval for state in open_library(machine, NOW).in_use()}
        for _ in range(data.draw(st.integers(1, 3))):
            damage(folder / "library", data)
            for state in in_use_after(machine, opening):
                assert before[state.fingerprint] == state.approval
                # and what gives it is whole: nothing about the model or the library is missing or changed
                assert not [fault for fault in state.faults if fault.stops]
                assert (
                    folder / "library/models" / f"{state.fingerprint}.json"
                ).read_bytes() == shelf.model_file.read_bytes()
                for sealed in (*shelf.practice.about_library, *shelf.practice.about_model):
                    path = folder / "library/records" / f"{sealed.record.about}-{sealed.digest}.json"
                    assert path.read_bytes() == sealed.content

"""Which model is meant by an id or the digits of a fingerprint."""

import pytest

from clinicalc.errors import LibraryError
from clinicalc.library.finding import find_state
from clinicalc.library.standing import ModelState, Standing


def state(fingerprint: str, version: str, standing: Standing) -> ModelState:
    """A model of the library without its records."""
    return ModelState(fingerprint * 64, "a-model", version, "A model", standing, "", None, (), (), ())


OLD, NEW, OTHER = (
    state("a", "1.9.0", Standing.IN_USE),
    state("b", "1.10.0", Standing.WAITING),
    ModelState("c" * 64, "another", "1.0.0", "Another", Standing.WAITING, "", None, (), (), ()),
)
ALL = (NEW, OLD, OTHER)


def test_an_id_names_its_only_version() -> None:
    assert find_state(ALL, "another") is OTHER


def test_of_several_versions_the_one_in_the_wanted_standing_is_meant() -> None:
    assert find_state(ALL, "a-model", (Standing.IN_USE,)) is OLD
    assert find_state(ALL, "a-model", (Standing.WAITING,)) is NEW
    with pytest.raises(LibraryError, match=r"1\.9\.0 \(aaaa aaaa aaaa, in use\); 1\.10\.0 \(bbbb"):
        find_state(ALL, "a-model")
    with pytest.raises(LibraryError, match="names 2 models"):
        find_state(ALL, "a-model", (Standing.IN_USE, Standing.WAITING))


def test_a_fingerprint_wants_12_digits_and_forgives_spaces() -> None:
    assert find_state(ALL, "BBBB bbbb bbbb") is NEW
    assert find_state(ALL, "b" * 64) is NEW
    with pytest.raises(LibraryError, match="is no model of this library"):
        find_state(ALL, "b" * 11)
    with pytest.raises(LibraryError, match="is no model of this library"):
        find_state(ALL, "d" * 12)


def test_a_slip_in_an_id_is_named() -> None:
    with pytest.raises(LibraryError, match="Did you mean another"):
        find_state(ALL, "anoter")

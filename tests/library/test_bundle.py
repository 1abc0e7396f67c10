"""A bundle is the library to the last byte, or it is refused."""

import json
from pathlib import Path

import pytest

from clinicalc.errors import LibraryError
from clinicalc.library.bundle import MOST_BYTES, Bundle, bundle_of, read_bundle, read_bundle_file, write_bundle
from clinicalc.library.folder import LibraryFolder
from tests.library.machines import Shelf, make_shelf, model_bytes
from tests.library.records_kit import practice


@pytest.fixture
def shelf(tmp_path: Path) -> Shelf:
    """A sound library with one model in use."""
    return make_shelf(tmp_path / "library")


@pytest.fixture
def bundle(shelf: Shelf) -> Bundle:
    """All of it."""
    return bundle_of(LibraryFolder(shelf.place))


def test_a_bundle_holds_every_record_and_model_to_the_byte(bundle: Bundle, shelf: Shelf) -> None:
    content = write_bundle(bundle)
    assert read_bundle(content, "b.json") == bundle
    assert bundle.models == (model_bytes(),)
    assert {sealed.content for sealed in bundle.records} == {
        path.read_bytes() for path in (shelf.place / "records").iterdir()
    }
    assert list(json.loads(content)) == ["format", "library", "models", "records"]


def test_the_same_library_is_always_the_same_bundle(bundle: Bundle, shelf: Shelf) -> None:
    assert write_bundle(bundle) == write_bundle(bundle_of(LibraryFolder(shelf.place)))


@pytest.mark.parametrize(
    ("old", "new", "said"),
    [
        (b'"clinicalc.bundle/1"', b'"clinicalc.bundle/2"', "newer version"),
        (b'{"format"', b'{ "format"', "changed on the way"),
        (b'"library":"', b'"more":1,"library":"', "shape"),
        (b'"library":"', b'"library":"","library":"', "changed on the way"),
        (b"Dr Ada Tarn", b"Dr Eda Tarn", "nothing was imported"),
        (b'"version":"1.0.0"', b'"version":"1.0.1"', "exactly"),
        (b'],"records"', b'],"recordz"', "shape"),
        (b"]}", b"]", "cut short"),
    ],
)
def test_a_bundle_with_anything_changed_is_refused(bundle: Bundle, old: bytes, new: bytes, said: str) -> None:
    content = write_bundle(bundle)
    assert old in content
    changed = content.replace(old, new, 1) if old != b"]}" else content[:-1]
    with pytest.raises(LibraryError, match=said):
        read_bundle(changed, "b.json")


def test_every_record_alone_is_missed(bundle: Bundle) -> None:
    for place, gone in enumerate(bundle.records):
        rest = (*bundle.records[:place], *bundle.records[place + 1 :])
        lacking = write_bundle(Bundle(bundle.library, bundle.models, rest))
        followed = any(gone.digest in (*sealed.record.follows.library, *sealed.record.follows.model) for sealed in rest)
        if followed:
            with pytest.raises(LibraryError, match=f"lacks the record that founded|{gone.digest}"):
                read_bundle(lacking, "b.json")
        else:  # the newest: only a machine that has seen it can know
            assert read_bundle(lacking, "b.json").records == rest


def test_models_and_records_belong_together(bundle: Bundle) -> None:
    with pytest.raises(LibraryError, match="exactly those that its records are about"):
        read_bundle(write_bundle(Bundle(bundle.library, (), bundle.records)), "b.json")
    with pytest.raises(LibraryError, match="exactly those that its records are about"):
        read_bundle(write_bundle(Bundle(bundle.library, bundle.models * 2, bundle.records)), "b.json")
    loose = practice().about_library[1]
    with pytest.raises(LibraryError):
        read_bundle(write_bundle(Bundle(bundle.library, bundle.models, (*bundle.records, loose))), "b.json")


def test_records_out_of_order_are_refused(bundle: Bundle) -> None:
    with pytest.raises(LibraryError, match="changed on the way"):
        read_bundle(write_bundle(Bundle(bundle.library, bundle.models, bundle.records[::-1])), "b.json")


def test_a_bundle_that_is_too_large_is_not_read() -> None:
    with pytest.raises(LibraryError, match="64 MB"):
        read_bundle(b" " * (MOST_BYTES + 1), "b.json")


@pytest.mark.parametrize("content", [b"", b"{}", b"[]", b"null", b"\xff\xfe", b"[" * 100_000])
def test_what_is_no_bundle_is_refused_in_words(content: bytes) -> None:
    with pytest.raises(LibraryError, match="this bundle is refused, and nothing was imported"):
        read_bundle(content, "b.json")


def test_a_file_that_is_not_there_or_no_file(tmp_path: Path) -> None:
    with pytest.raises(LibraryError, match="was not read"):
        read_bundle_file(tmp_path / "none.json")
    with pytest.raises(LibraryError, match="was not read"):
        read_bundle_file(tmp_path)
    with pytest.raises(LibraryError, match="was not read"):
        read_bundle_file(tmp_path / "none" / "none.json")


def test_a_library_with_a_damaged_or_missing_file_is_not_exported(shelf: Shelf) -> None:
    content = shelf.model_file.read_bytes()
    shelf.model_file.chmod(0o644)
    shelf.model_file.write_bytes(content.replace(b"0.", b"1.", 1))
    with pytest.raises(LibraryError, match="not exported"):
        bundle_of(LibraryFolder(shelf.place))
    shelf.model_file.unlink()
    with pytest.raises(LibraryError, match="not exported"):
        bundle_of(LibraryFolder(shelf.place))
    shelf.put()
    shelf.file_of(shelf.practice.about_library[1]).unlink()
    with pytest.raises(LibraryError, match="missing"):
        bundle_of(LibraryFolder(shelf.place))

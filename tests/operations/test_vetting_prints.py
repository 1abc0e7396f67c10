"""The print of a difference, and how prints of a library are put in place."""

import os
from collections.abc import Iterator
from contextlib import contextmanager
from dataclasses import replace
from datetime import UTC, datetime
from pathlib import Path

import pytest

from clinicalc.assessment.proof import load_model, load_model_bytes
from clinicalc.errors import FileNotWritten
from clinicalc.library.aspects import Aspect
from clinicalc.library.difference import Change, Difference, find_difference
from clinicalc.library.effect import Effect, find_effect
from clinicalc.library.history import tell_history
from clinicalc.library.machine import Machine
from clinicalc.library.opening import OpenedLibrary
from clinicalc.operations.library_reading import gather
from clinicalc.operations.vetting_prints import (
    NamedVersion,
    PrintChoices,
    lay_out_difference,
    lay_out_history,
    suggest_vetting_name,
    write_difference_pdf,
    write_history_pdf,
)
from clinicalc.report.pdf import write_document
from clinicalc.settings import Paper, Settings, write_settings
from tests.cli.calling import example
from tests.library.machines import Shelf
from tests.library.versions import Tree, proved
from tests.operations.printed_library import CHOICES, PRINTED, TARNWICK, TITLE, opened_after, read
from tests.report.printing import text_of

pytestmark = pytest.mark.usefixtures("clock")
NO_EFFECT = Effect((), (), (), "logit")


class TestDifference:
    OLD = NamedVersion(TITLE, TARNWICK, "1.0.0", "a" * 64, "Approved by somebody until 30 June 2027.")
    NEW = NamedVersion(TITLE, TARNWICK, "1.1.0", "b" * 64)

    def test_every_row_the_effect_and_the_examples(self) -> None:
        def change(model: Tree) -> None:
            model["version"] = "1.1.0"
            model["equations"][0]["horizons"][0]["intercept"] += 0.1
            del model["decision_points"][0]

        old = load_model(Path(example(TARNWICK)))
        new = load_model_bytes(proved(TARNWICK, change), "newer.json")
        found, effect = find_difference(old.content, new.content), find_effect(old, new)
        said = read(lay_out_difference(self.OLD, self.NEW, found, effect, "Tarnwick Northgate", CHOICES))
        assert f"{len(found.changes)} statements differ between the two." in said
        assert "Approved by somebody until 30 June 2027." in said
        assert f"Fingerprint {' '.join(['bbbb'] * 8)} {' '.join(['bbbb'] * 8)}" in said
        assert "equation all: 10 years: intercept /model/equations/0/horizons/0/intercept" in said
        assert "-3.2473031537233066 -3.1473031537233065" in said
        assert found.say_same() in said
        squeezed = said.replace(" ", "")
        for row in found.changes:
            for cell in (row.what, row.old or "—", row.new or "—", row.new_path or f"{row.old_path} (old only)"):
                assert cell.replace(" ", "") in squeezed, row
        assert "Effect on 1296 standard patients (10 years) Both versions give a number for 1152" in said
        assert "woman of 61, smoker 12.3 → 13.4\u202f%" in said
        assert "open 1.0.0, filled 1.1.0" in said
        assert "% within 10 years" in said
        # 12.29… is the shipped file's own example; by hand, its odds times exp(0.1) make 13.41…
        assert "12.2909563 (old) 13.4102596 (new) 12.3 13.4" in said

    def test_three_hundred_rows(self) -> None:
        rows = tuple(
            Change(Aspect.COEFFICIENTS, f"coefficient c{n}", f"{n}.25", f"{n}.75", f"/model/{n}", f"/model/{n}")
            for n in range(300)
        )
        document = lay_out_difference(self.OLD, self.NEW, Difference(rows, ()), NO_EFFECT, "", CHOICES)
        said = read(document)
        assert len(document.pages) > 10
        assert "300 statements differ between the two." in said
        for n in range(300):
            assert f"coefficient c{n} /model/{n} {n}.25 {n}.75" in said

    def test_the_same_file_twice(self) -> None:
        document = lay_out_difference(self.OLD, self.OLD, Difference((), ()), NO_EFFECT, "", CHOICES)
        said = read(document)
        assert "The two are the same file." in said
        assert "What changed" not in said

    def test_many_examples_are_drawn_in_several_figures(self) -> None:
        old = load_model(Path(example(TARNWICK)))
        effect = find_effect(old, old)
        (first, *_) = effect.examples
        many = tuple(replace(first, values=f"patient {n}", typed=(("age", str(n)),)) for n in range(20, 60))
        shown = replace(effect, examples=many)
        said = read(lay_out_difference(self.OLD, self.NEW, Difference((), ()), shown, "", CHOICES))
        assert said.count("open 1.0.0, filled 1.1.0") == 3
        for n in range(20, 60):
            assert f"patient {n} " in said


class TestFiles:
    def _write(self, path: Path, opened: OpenedLibrary, *, replace: bool = False) -> None:
        write_history_pdf(path, opened, tell_history(*gather(opened)), "", CHOICES, replace=replace)

    def test_the_pages_of_the_preview_are_those_of_the_file(
        self, shelf: Shelf, machine: Machine, tmp_path: Path
    ) -> None:
        opened = opened_after(shelf, machine)
        document = lay_out_history(opened, tell_history(*gather(opened)), "", CHOICES)
        self._write(tmp_path / "a.pdf", opened)
        assert (tmp_path / "a.pdf").read_bytes() == write_document(document, "History of a model library")

    def test_a_file_that_is_there_stays_unless_it_is_to_be_replaced(
        self, shelf: Shelf, machine: Machine, tmp_path: Path
    ) -> None:
        opened, path = opened_after(shelf, machine), tmp_path / "folder" / "a.pdf"
        path.parent.mkdir()
        path.write_bytes(b"%PDF-1.4 an older print")
        with pytest.raises(FileNotWritten, match="there is a file with this name already; it was left as it is"):
            self._write(path, opened)
        assert path.read_bytes() == b"%PDF-1.4 an older print"
        self._write(path, opened, replace=True)
        assert path.read_bytes().startswith(b"%PDF-1.7")
        assert os.listdir(path.parent) == ["a.pdf"]

    def test_what_is_no_pdf_is_never_replaced(self, shelf: Shelf, machine: Machine, tmp_path: Path) -> None:
        path = tmp_path / "records.pdf"
        path.write_bytes(b"{}")
        with pytest.raises(FileNotWritten, match="and it is not a PDF"):
            self._write(path, opened_after(shelf, machine), replace=True)
        assert path.read_bytes() == b"{}"

    def test_nothing_is_left_where_it_cannot_be_written(self, shelf: Shelf, machine: Machine, tmp_path: Path) -> None:
        opened = opened_after(shelf, machine)
        with pytest.raises(FileNotWritten, match="the print could not be saved"):
            self._write(tmp_path / "absent" / "a.pdf", opened)
        with pytest.raises(FileNotWritten, match=r"ends in \.pdf"):
            self._write(tmp_path / "a.txt", opened)
        assert not (tmp_path / "absent").exists()
        assert not (tmp_path / "a.txt").exists()

    def test_a_disk_without_room_leaves_the_older_print(self, shelf: Shelf, machine: Machine, tmp_path: Path) -> None:
        opened, path = opened_after(shelf, machine), tmp_path / "folder" / "a.pdf"
        path.parent.mkdir()
        path.write_bytes(b"%PDF-1.4 an older print")
        with _files_of_at_most(1000), pytest.raises(FileNotWritten, match="could not be saved"):
            self._write(path, opened, replace=True)
        assert path.read_bytes() == b"%PDF-1.4 an older print"
        assert os.listdir(path.parent) == ["a.pdf"]

    def test_both_papers(self, shelf: Shelf, machine: Machine) -> None:
        opened = opened_after(shelf, machine)
        told = tell_history(*gather(opened))
        a4, letter = (lay_out_history(opened, told, "", PrintChoices(paper, PRINTED)) for paper in Paper)
        assert {(page.width, page.height) for page in a4.pages} == {(595.28, 841.89)}
        assert {(page.width, page.height) for page in letter.pages} == {(612.0, 792.0)}

    def test_without_a_choice_the_paper_is_that_of_the_settings(
        self, shelf: Shelf, machine: Machine, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
    ) -> None:
        monkeypatch.setenv("CLINICALC_SETTINGS", os.fspath(tmp_path / "settings"))
        write_settings(Settings(paper=Paper.LETTER))
        opened = opened_after(shelf, machine)
        document = lay_out_history(opened, tell_history(*gather(opened)), "", PrintChoices(printed_at=PRINTED))
        assert {page.height for page in document.pages} == {792.0}

    def test_the_letterhead_of_the_settings_stands_over_the_first_page_and_takes_no_further_one(
        self, shelf: Shelf, machine: Machine, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
    ) -> None:
        monkeypatch.setenv("CLINICALC_SETTINGS", os.fspath(tmp_path / "settings"))
        opened = opened_after(shelf, machine)
        told = tell_history(*gather(opened))
        bare = lay_out_history(opened, told, "", CHOICES)
        lines = ("Tarnwick Northgate Practice", "3 Quay Lane, Tarnwick", "Telephone 01632 960100")
        write_settings(Settings(letterhead=lines))
        headed = lay_out_history(opened, told, "", CHOICES)
        assert len(headed.pages) == len(bare.pages)
        assert read(headed).startswith(" ".join(lines))
        assert not read(bare).startswith(lines[0])
        assert headed.letterhead == lines

    def test_the_difference_is_a_file_as_well(self, tmp_path: Path) -> None:
        pair = TestDifference.OLD, TestDifference.NEW
        write_difference_pdf(tmp_path / "d.pdf", *pair, Difference((), ()), NO_EFFECT, "", CHOICES)
        assert "Every statement is the same." in text_of((tmp_path / "d.pdf").read_bytes())

    def test_a_name_is_suggested_that_every_system_takes(self) -> None:
        day = datetime(2026, 12, 1, tzinfo=UTC)
        assert suggest_vetting_name("approval", "tarn-score 1.0.0", day) == "approval tarn-score 1.0.0 2026-12-01.pdf"
        assert suggest_vetting_name("history", "A/B: C\n", day) == "history A-B- C- 2026-12-01.pdf"


@contextmanager
def _files_of_at_most(size: int) -> Iterator[None]:
    """No file of this process may grow larger, as on a disk without room."""
    resource = pytest.importorskip("resource")
    import signal

    before = resource.getrlimit(resource.RLIMIT_FSIZE)
    handler = signal.signal(signal.SIGXFSZ, signal.SIG_IGN)
    resource.setrlimit(resource.RLIMIT_FSIZE, (size, before[1]))
    try:
        yield
    finally:
        resource.setrlimit(resource.RLIMIT_FSIZE, before)
        signal.signal(signal.SIGXFSZ, handler)

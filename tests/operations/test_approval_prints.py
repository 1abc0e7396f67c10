"""The approval record of a real library, read back: what is there, and what it rests on."""

import time
from collections.abc import Callable
from datetime import timedelta
from pathlib import Path

import pytest

from clinicalc.assessment.proof import load_model
from clinicalc.coefficients.fingerprint import group_fingerprint
from clinicalc.errors import PrintRefused
from clinicalc.library.machine import Machine
from clinicalc.library.opening import OpenedLibrary, open_library, verify_all
from clinicalc.library.records import Approved, Commented, Compared
from clinicalc.library.trust_store import TrustStore
from clinicalc.operations.model_card import read_state
from clinicalc.operations.vetting_furniture import NO_AUTHORITY, NOT_THE_PAPER
from clinicalc.operations.vetting_prints import (
    lay_out_approval,
    write_approval_pdf,
)
from clinicalc.report.pdf import write_document
from tests.cli.calling import example
from tests.library.machines import NOW, Shelf, machine_for, only_state
from tests.library.records_kit import ADA, BEN, CLEO, POINT
from tests.operations.printed_library import CHOICES, TARNWICK, TITLE, approval, opened_after, read
from tests.report.printing import pages_of

pytestmark = pytest.mark.usefixtures("clock")


class TestApproval:
    def test_everything_about_an_approval_stands_on_it(self, shelf: Shelf, machine: Machine) -> None:
        said = approval(opened_after(shelf, machine))
        digits = group_fingerprint(shelf.fingerprint)
        for words in (
            f"{TITLE} 1.0.0 As of the reading of the library of Tarnwick Practice on 1 December 2026, 12:00 UTC+00:00.",
            "Approved by Dr Ada Tarn (general practitioner) until 30 June 2027.",
            "Approved by Dr Ada Tarn, general practitioner",
            "Written 1 December 2026, 10:00 UTC+00:00, by the writer’s own clock",
            "To be reviewed by 30 June 2027, the last day on which it gives a number",
            "Reason read against its paper",
            "Recalibration none: as published",
            "Decision points none of the practice’s own",
            f"Id and version {TARNWICK} 1.0.0",
            f"Fingerprint {digits[:39]} {digits[40:]}",
            "Outcome First heart attack or stroke: fatal or not, in invented people",
            "Horizons 10 years",
            "Installed by Cleo Fell, signer 1 December 2026, 10:00 UTC+00:00",
            "From handed over on paper",
            "Worked examples 8 of 8 recomputed within tolerance (8 computed)",
            "Source local: Invented: a cohort of the Tarnwick practices",
            "Signatures on the file, and what they are worth on this machine Nobody signed the file.",
            "Cautions It is invented; its numbers are true of nobody and must not guide any decision.",
            "Approver’s signature Name Date Second signature Name Date",
            NOT_THE_PAPER,
            NO_AUTHORITY,
        ):
            assert words in said, words
        assert "Not in use" not in said
        assert "Approved by its author" not in said

    def test_the_choices_of_the_approval_stand_on_it(self, shelf: Shelf, machine: Machine) -> None:
        shelf.practice.allow_authors()
        shelf.practice.say_of_model(
            Approved("agreed again", "2028-02-29", None, (POINT,), (), True, "fingerprint_and_signature"), BEN
        )
        said = approval(opened_after(shelf, machine))
        assert "10.0\u202f%: offer treatment (the practice’s meeting of 3 November)" in said
        assert "Approved by its author: this person also made or brought the file" in said
        assert (
            "File known by its whole fingerprint, which was typed, and by the signature of a publisher trusted there"
            in said
        )
        assert "To be reviewed by 29 February 2028" in said

    def test_it_rests_on_the_records_that_it_follows_and_no_others(self, shelf: Shelf, machine: Machine) -> None:
        later = shelf.practice.remark()
        said = approval(opened_after(shelf, machine)).partition("Records that the approval rests on")[2]
        installed, approved, _ = shelf.practice.about_model
        for sealed in (*shelf.practice.about_library, installed, approved):
            assert group_fingerprint(sealed.digest) in said
        assert group_fingerprint(later.digest) not in said
        assert f"Practice key, as pinned {group_fingerprint(shelf.practice.key.id)}" in said

    def test_what_is_not_in_use_says_so_on_every_page(self, shelf: Shelf, machine: Machine) -> None:
        shelf.practice.withdraw()
        opened = opened_after(shelf, machine)
        state = only_state(opened)
        document = lay_out_approval(opened, state, *read_state(opened, state, TrustStore()), CHOICES)
        for page in pages_of(write_document(document, "A subject")):
            assert "Not in use: this model gives no number" in page
        said = read(document)
        assert f"Withdrawn by {BEN} on 1 December 2026: the paper was corrected." in said
        assert "Approval No approval is in force." in said
        assert f"{ADA} (signer): approved until 30 June 2027: read against its paper" in said
        for sealed in (*shelf.practice.about_library, *shelf.practice.about_model):
            assert group_fingerprint(sealed.digest) in said

    def test_a_file_that_cannot_be_used_is_no_reason_to_print_nothing(self, shelf: Shelf, machine: Machine) -> None:
        shelf.model_file.write_bytes(shelf.model_file.read_bytes().replace(b"1.095667", b"1.095668"))
        said = approval(verify_all(machine, NOW))
        assert "Not in use: this model gives no number" in said
        assert "The file cannot be used, and nothing of it was checked." in said
        assert "Found wrong with its records" in said
        assert "Checks that passed" not in said

    def test_it_says_when_it_is_from_this_machines_own_copy(self, shelf: Shelf, machine: Machine) -> None:
        opened_after(shelf, machine)
        shelf.place.rename(shelf.place.with_name("away"))
        said = approval(open_library(machine, NOW + timedelta(hours=1)))
        assert "13:00 UTC+00:00 from this machine’s own verified copy, because the library was out of reach." in said
        assert "A withdrawal since then is not known here." in said

    def test_who_compared_which_figure_with_what(self, tmp_path: Path) -> None:
        shelf, opened = _with_open_figures(tmp_path)
        said = approval(opened)
        model = load_model(Path(example("general-cvd-2008-lipids")))
        entries = model.content.unconfirmed
        assert f"{len(entries)} entries, 1 not compared by anybody yet" in said
        assert said.count(f" {CLEO} ") >= len(entries) - 1
        assert "nobody yet" in said
        squeezed = said.replace(" ", "")
        for entry in entries:
            assert entry.at in squeezed
            assert entry.why.split(".")[0].replace(" ", "") in squeezed
            assert entry.check_against.replace(" ", "") in squeezed
        assert shelf.fingerprint == model.fingerprint

    def test_a_text_that_cannot_be_printed_is_refused_and_nothing_is_left(
        self, shelf: Shelf, machine: Machine, tmp_path: Path
    ) -> None:
        shelf.practice.say_of_model(Commented("a remark with 中 in it"), BEN)
        opened = opened_after(shelf, machine)
        state = only_state(opened)
        with pytest.raises(PrintRefused, match=r"U\+4E2D"):
            write_approval_pdf(tmp_path / "a.pdf", opened, state, None, "", CHOICES)
        assert not (tmp_path / "a.pdf").exists()

    @pytest.mark.skipif(not hasattr(time, "tzset"), reason="the zone of a process is set by tzset on POSIX")
    def test_days_and_times_are_those_of_this_machines_clock(
        self, shelf: Shelf, machine: Machine, clock: Callable[[str], None]
    ) -> None:
        clock("Pacific/Kiritimati")  # 14 hours ahead
        said = approval(opened_after(shelf, machine))
        assert "on 2 December 2026, 02:00 UTC+14:00." in said
        assert "Written 2 December 2026, 00:00 UTC+14:00, by the writer’s own clock" in said
        assert "until 30 June 2027." in said


def _with_open_figures(folder: Path) -> tuple[Shelf, OpenedLibrary]:
    """A library whose model has unconfirmed figures, of which all but the first were compared."""
    from clinicalc.coefficients.reader import read_file
    from clinicalc.library.folder import LibraryFolder
    from tests.library.records_kit import practice

    file = read_file(Path(example("general-cvd-2008-lipids")))
    content = file.content.model
    made = practice()
    made.model = file.fingerprint
    made.named = (content.id, content.version, content.title)
    made.install()
    compared = tuple(Compared(entry.at, CLEO) for entry in content.unconfirmed[1:])
    made.say_of_model(Approved("agreed", "2027-06-30", None, (), compared, False), ADA)
    library = LibraryFolder(folder / "library")
    library.create(made.about_library[0])
    for sealed in (*made.about_library, *made.about_model):
        library.put_record(sealed)
    library.put_model(file.fingerprint, file.canonical)
    shelf = Shelf(folder / "library", made)
    return shelf, verify_all(machine_for(shelf, folder / "machine"), NOW)

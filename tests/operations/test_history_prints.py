"""The prints of a history and of a day that is past, read back."""

from dataclasses import replace
from datetime import date

import pytest

from clinicalc.coefficients.fingerprint import group_fingerprint
from clinicalc.library.as_of import look_back
from clinicalc.library.history import tell_history
from clinicalc.library.machine import Machine
from clinicalc.library.records import Commented
from clinicalc.library.standing import Fault, FaultKind
from clinicalc.operations.library_reading import gather
from clinicalc.operations.vetting_furniture import say_written
from clinicalc.operations.vetting_prints import (
    lay_out_as_of,
    lay_out_history,
    name_models,
)
from tests.library.machines import Shelf, only_state
from tests.library.records_kit import ADA, BEN
from tests.operations.printed_library import CHOICES, TARNWICK, TITLE, opened_after, read

pytestmark = pytest.mark.usefixtures("clock")


class TestHistory:
    def test_two_hundred_records_stand_in_chain_order(self, shelf: Shelf, machine: Machine) -> None:
        shelf.practice.withdraw()
        for number in range(200 - 5):
            shelf.practice.say_of_model(Commented(f"remark number {number} of many"), BEN)
        opened = opened_after(shelf, machine)
        told = tell_history(*gather(opened))
        assert len(told.rows) == 200
        said = read(lay_out_history(opened, told, "", CHOICES))
        assert "200 records, nothing found wrong." in said
        places = [said.index(f"remark number {number} of many") for number in range(195)]
        assert places == sorted(places)
        assert (
            f" 4. 1 December 2026 10:00 UTC+00:00 {ADA}, signer {TARNWICK} 1.0.0: approved until 30 June 2027" in said
        )
        assert "Why: read against its paper" in said
        newest = shelf.practice.about_model[-1]
        assert f"200. commented {BEN} {group_fingerprint(newest.digest)}" in said.partition("What fixes this")[2]
        for sealed in shelf.practice.about_model:
            assert group_fingerprint(sealed.digest, 3) in said
            assert f"key {group_fingerprint(sealed.record.by, 3)}" in said

    def test_faults_stand_with_their_record_and_the_others_before_all(self, shelf: Shelf, machine: Machine) -> None:
        opened = opened_after(shelf, machine)
        bad = shelf.practice.about_model[1].digest
        here = Fault(FaultKind.BAD_SIGNATURE, shelf.fingerprint, "its key is not known.", bad)
        loose = Fault(FaultKind.MISSING_RECORD, shelf.fingerprint, "a record is missing.", "f" * 64)
        told = tell_history(gather(opened)[0], (here, loose), {shelf.fingerprint})
        said = read(lay_out_history(opened, told, name_models(opened, {shelf.fingerprint}), CHOICES))
        assert f"History of {TITLE} 1.0.0" in said
        assert "2 records, 2 things found wrong or to be known." in said
        assert said.index("Fault: a record is missing.") < said.index("Records in chain order")
        assert said.index("Fault: its key is not known.") > said.index("approved until")

    def test_a_moment_that_no_calendar_has_stands_as_it_is(self) -> None:
        assert say_written("2026-02-31T10:00:00Z") == ("2026-02-31T10:00:00Z", "")
        assert say_written("2026-12-01T10:00:00Z") == ("1 December 2026", "10:00 UTC+00:00")

    def test_several_versions_are_named_by_title_and_id(self, shelf: Shelf, machine: Machine) -> None:
        opened = opened_after(shelf, machine)
        state = only_state(opened)
        both = replace(opened, models=(state, replace(state, fingerprint="a" * 64, version="1.1.0")))
        assert name_models(both, {state.fingerprint, "a" * 64}) == f"{TITLE}, every version of {TARNWICK}"
        unnamed = replace(opened, models=(replace(state, title="", version="", fingerprint="a" * 64),))
        assert name_models(unnamed, {"a" * 64}) == "model aaaaaaaaaaaa"


class TestAsOf:
    def test_what_answered_at_the_end_of_a_day(self, shelf: Shelf, machine: Machine) -> None:
        shelf.practice.withdraw(written="2026-12-01T11:00:00Z")
        opened = opened_after(shelf, machine)
        records, faults = gather(opened)
        then, now = (
            look_back(records, opened.library, machine.practice_key, day, faults)
            for day in (date(2026, 11, 30), date(2026, 12, 1))
        )
        assert "There was no library yet." in read(lay_out_as_of(opened, then, CHOICES))
        said = read(lay_out_as_of(opened, now, CHOICES))
        assert "At the end of 1 December 2026" in said
        assert "0 of 1 model gave a number." in said
        assert f" no Withdrawn by {BEN} on 1 December 2026: the paper was corrected." in said
        assert f"On that day, 10:00: {ADA}: approved until 30 June 2027" in said
        assert f"On that day, 11:00: {BEN}: withdrawn" in said

    def test_a_model_in_use_names_its_approver(self, shelf: Shelf, machine: Machine) -> None:
        opened = opened_after(shelf, machine)
        found = look_back(gather(opened)[0], opened.library, machine.practice_key, date(2026, 12, 1), ())
        said = read(lay_out_as_of(opened, found, CHOICES))
        assert "1 of 1 model gave a number." in said
        assert f" yes It was approved by {ADA} (general practitioner) until 30 June 2027." in said
        assert "the chain proves only what came after what" in said

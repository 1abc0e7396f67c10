"""The history: every record once, in chain order, with what is wrong; and its CSV, which no spreadsheet computes."""

import csv
import io
import random
from dataclasses import replace

import pytest

from clinicalc.library.history import History, in_chain_order, listed_names, say_statement, tell_history
from clinicalc.library.history_table import defuse, record_history, say_history, write_history_csv
from clinicalc.library.records import ABOUT_THE_LIBRARY, Withdrawn
from clinicalc.library.standing import Fault, FaultKind
from tests.library.keys_at_hand import key_of
from tests.library.records_kit import ADA, BEN, CLEO, POINT, Practice, practice, record


@pytest.fixture
def made() -> Practice:
    """A practice whose model was installed, approved, remarked upon and withdrawn."""
    made = practice()
    made.install(written="2026-12-01T10:05:00Z")
    made.approve(points=(POINT,), written="2026-12-02T08:00:00Z")
    made.remark(written="2026-12-03T08:00:00Z")
    made.withdraw(written="2026-12-02T09:00:00Z")  # by a clock that is a day slow
    return made


def _all(made: Practice, faults: tuple[Fault, ...] = ()) -> History:
    return tell_history([*made.about_model, *made.about_library], faults)


def test_records_stand_in_chain_order_whatever_their_dates_and_files_say(made: Practice) -> None:
    expected = [sealed.digest for sealed in (*made.about_library, *made.about_model)]
    records = [*made.about_library, *made.about_model]
    for seed in range(20):
        random.Random(seed).shuffle(records)
        assert [sealed.digest for sealed in in_chain_order(records)] == expected


def test_of_records_beside_each_other_the_earlier_comes_first() -> None:
    made = practice()
    installed = made.install()
    late = made.remark(after=(installed,), written="2026-12-05T10:00:00Z")
    early = made.remark(after=(installed,), written="2026-12-04T10:00:00Z")
    order = [sealed.digest for sealed in in_chain_order((late, early, installed, *made.about_library))]
    assert order[-2:] == [early.digest, late.digest]


def test_a_record_whose_predecessor_is_gone_is_still_told(made: Practice) -> None:
    told = tell_history([made.about_model[-1]], ())
    assert [row.kind for row in told.rows] == ["withdrawn"]


def test_each_row_says_who_what_when_and_why(made: Practice) -> None:
    rows = _all(made).rows
    assert [row.kind for row in rows] == ["founding", "approvers", "installed", "approved", "commented", "withdrawn"]
    founding, approvers, installed, approved, commented, withdrawn = rows
    assert founding.what.startswith("founded the library of Tarnwick Practice; an author may not approve")
    assert approvers.what.startswith(f"approvers from here on: {ADA} (general practitioner), {BEN}")
    assert installed.what == "installed tarn-score 1.0.0, A score for tests, from handed over on paper"
    assert approved.what == "approved until 30 June 2027; decision point 0.1 (offer treatment)"
    assert (approved.why, approved.name, approved.key) == ("read against its paper", ADA, key_of(ADA).id)
    assert commented.what == "remarked: seen"
    assert (withdrawn.what, withdrawn.why, withdrawn.name) == ("withdrawn", "the paper was corrected", BEN)
    assert {row.model for row in rows[2:]} == {"tarn-score 1.0.0"}
    assert withdrawn.follows == (made.about_library[-1].digest, commented.digest)


def test_a_model_alone_and_the_library_alone(made: Practice) -> None:
    everything = [*made.about_model, *made.about_library]
    assert [row.kind for row in tell_history(everything, (), {made.model}).rows][:2] == ["installed", "approved"]
    assert [row.kind for row in tell_history(everything, (), {ABOUT_THE_LIBRARY}).rows] == ["founding", "approvers"]


def test_faults_stand_with_their_record_and_the_others_at_the_end(made: Practice) -> None:
    bad = made.about_model[1]
    here = Fault(FaultKind.REVOKED_SIGNER, made.model, "its key is revoked.", bad.digest)
    loose = Fault(FaultKind.MISSING_RECORD, made.model, "a record is missing.", "f" * 64)
    told = _all(made, (here, loose, here))
    assert [row.faults for row in told.rows if row.faults] == [("its key is revoked.",)]
    assert told.faults == (loose,)
    text = "\n".join(say_history(told))
    assert "    FAULT: its key is revoked." in text
    assert "\nFAULT: a record is missing." in text


def test_a_record_in_the_name_of_somebody_else_than_its_key_is_told(made: Practice) -> None:
    follows = made.about_model[-1].record.follows
    lied = record(replace(key_of(BEN), name=CLEO), Withdrawn("not by me"), made.library, made.model, follows)
    told = tell_history([*made.about_library, *made.about_model, lied], ())
    (row,) = [row for row in told.rows if row.digest == lied.digest]
    assert row.faults == (f"It is in the name of “{CLEO}”; its key is that of {BEN}.",)
    assert listed_names(made.about_library)[key_of(BEN).id] == (BEN,)


def test_revocation_and_policy_in_words(made: Practice) -> None:
    revoked = made.revoke(BEN, made.about_model[1])
    what, why = say_statement(revoked.record.statement)
    assert what.startswith("revoked the key ")
    assert what.endswith("; 1 of its approvals stays in force")
    assert why == "lost on the way home"
    assert say_statement(made.allow_authors().record.statement) == (
        "policy from here on: an author may approve, machines work on for 24 hours without the library",
        "there are two of us",
    )


@pytest.mark.parametrize("begins", ["=", "+", "-", "@", "\t", "\r", "\n"])
def test_a_cell_that_begins_like_a_formula_is_defused(begins: str) -> None:
    assert defuse(f"{begins}cmd|' /C calc'!A0") == f"'{begins}cmd|' /C calc'!A0"


@pytest.mark.parametrize("text", ["", "2026-12-01", "Ada = Ben", "'quoted", " -1"])
def test_other_cells_stay_as_they_are(text: str) -> None:
    assert defuse(text) == text


def test_the_csv_reads_back_cell_for_cell() -> None:
    """RFC 4180: CRLF after every line, a cell with a comma, quote or line break in quotes, a quote doubled."""
    made = practice()
    made.install()
    made.withdraw()
    said = '=HYPERLINK("http://x","see, here")\nand there'
    loose = Fault(FaultKind.STRAY, ABOUT_THE_LIBRARY, "-a stray file", stops=False)
    told = _all(made, (loose,))
    told = History((*told.rows[:3], replace(told.rows[3], why=said)), told.faults)
    content = write_history_csv(told)
    assert content.startswith(
        b"\xef\xbb\xbfplace,model,about,kind,what,why,name,role,written,key,record,follows,faults\r\n"
    )
    assert content.endswith(b"\r\n")
    text = content.decode("utf-8-sig")
    assert '"\'=HYPERLINK(""http://x"",""see, here"")\nand there"' in text
    rows = list(csv.DictReader(io.StringIO(text, newline="")))
    assert [row["place"] for row in rows] == ["1", "2", "3", "4", ""]
    assert rows[3]["why"] == f"'{said}"
    assert rows[3]["record"] == made.about_model[-1].digest
    assert (rows[4]["kind"], rows[4]["faults"]) == ("fault", "'-a stray file")


def test_the_json_has_texts_as_they_stand(made: Practice) -> None:
    told = record_history(_all(made))
    records = told["records"]
    assert isinstance(records, list)
    assert records[3]["why"] == "read against its paper"
    assert records[0]["model"] is None

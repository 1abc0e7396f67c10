"""An old print worked out again: it agrees with the file it was made with, and any change to it is named."""

import re
from dataclasses import replace
from datetime import UTC, datetime, timedelta, timezone
from pathlib import Path
from typing import Any

import msgspec
import pytest

from clinicalc.assessment.entry import entry_from_texts
from clinicalc.assessment.findings import FindingCode
from clinicalc.assessment.record import record_of
from clinicalc.assessment.result import Assessment
from clinicalc.errors import ClinicalcError
from clinicalc.operations.bedside import assess_patient, open_example
from clinicalc.operations.demonstration import demo_case
from clinicalc.operations.old_print import OldPrint, read_old_print
from clinicalc.operations.old_record import Record
from clinicalc.operations.recheck import Recheck, recheck, report_recheck
from clinicalc.report.paper import Paper
from clinicalc.report.parts import PrintParts
from clinicalc.report.pdf import make_report
from tests.operations.forging import (
    Change,
    with_annotation,
    with_changed_record,
    with_page,
    with_record,
    without_page,
    without_time,
)
from tests.report.printing import AT, PRACTICE, PRINTED, printed, with_band, without_band

CASE = demo_case()
DEMO = assess_patient(CASE.model, CASE.entry, at=PRINTED)
PDF = printed(DEMO)


def read_back(pdf: bytes, folder: Path) -> OldPrint:
    """The print as it is read from a file."""
    path = folder / "old.pdf"
    path.write_bytes(pdf)
    return read_old_print(path)


def checked(pdf: bytes, folder: Path, assessment: Assessment = DEMO) -> Recheck:
    """The print worked out again with the model of the assessment."""
    return recheck(read_back(pdf, folder), assessment.model)


@pytest.mark.parametrize(
    "assessment",
    [
        DEMO,
        with_band(),
        with_band(label="Ottilie Fenn"),
        without_band(),
        without_band(total_cholesterol="5,20 mmol/L"),
        without_band(total_cholesterol="5,20 mmol/L of 2 visits of 3 readings on 2026-10-02"),
    ],
    ids=["demo", "band", "label", "no band", "another unit", "mean"],
)
def test_a_print_agrees_with_the_file_it_was_made_with(assessment: Assessment, tmp_path: Path) -> None:
    found = checked(printed(assessment), tmp_path, assessment)
    assert assessment.estimate is not None
    assert found.differences == ()
    assert found.agrees


def test_a_recalibrated_print_agrees(tmp_path: Path) -> None:
    offered = without_band().model.content.recalibrations[0].id
    assessment = without_band(recalibration=offered)
    assert assessment.estimate is not None
    assert checked(printed(assessment), tmp_path, assessment).agrees


def test_a_print_at_another_level_agrees(tmp_path: Path) -> None:
    assessment = assess_patient(CASE.model, CASE.entry, level=0.8, at=PRINTED)
    found = checked(printed(assessment), tmp_path, assessment)
    assert found.agrees
    assert found.now.level == 0.8


def test_every_entry_of_the_record_is_compared() -> None:
    """A part added to the record must be added to what is read back, or a change to it would go unseen."""
    assert {field.encode_name for field in msgspec.structs.fields(Record)} >= set(record_of(DEMO))


def test_dates_are_judged_as_of_the_print(tmp_path: Path) -> None:
    """The cholesterol of this model holds for 365 days: good at the time of the print, long out of date today."""
    then = datetime(2020, 1, 10, 9, 0, tzinfo=UTC)
    texts = {id: typed.text for id, typed in CASE.entry.typed.items()}
    entry = entry_from_texts(texts | {"total_cholesterol": "5.2 mmol/L on 2019-12-01"})
    pdf = make_report(assess_patient(CASE.model, entry, at=then), printed_at=then)
    found = checked(pdf, tmp_path)
    assert found.agrees
    assert found.now.at == then
    later = checked(without_time(pdf), tmp_path)
    assert not later.agrees
    assert FindingCode.OUT_OF_DATE in {finding.code for finding in later.now.findings}
    assert "does not say when it was made" in " ".join(report_recheck(later))


def probability(by: float) -> Change:
    """Moves the probability in a record."""

    def change(record: Any) -> None:
        record["probability"] += by

    return change


@pytest.mark.parametrize(("by", "agrees"), [(1e-13, True), (-1e-13, True), (1e-11, False), (-1e-11, False)])
def test_probabilities_agree_within_a_millionth_of_a_millionth(by: float, agrees: bool, tmp_path: Path) -> None:
    assert checked(with_changed_record(PDF, probability(by)), tmp_path).agrees is agrees


def _typed_age(record: Any) -> None:
    record["values"][1]["typed"] = "62 a"


def _used_age(record: Any) -> None:
    record["values"][1]["value"] = 62.0


def _unit(record: Any) -> None:
    record["values"][1]["unit"] = "d"


def _dated(record: Any) -> None:
    record["values"][1]["dated"] = "2026-01-01"


def _no_age(record: Any) -> None:
    del record["values"][1]


def _twice(record: Any) -> None:
    record["values"].append(record["values"][1])


def _stranger(record: Any) -> None:
    record["values"].append({"id": "shoe", "typed": "44", "value": 44, "unit": None, "dated": None})


def _fingerprint(record: Any) -> None:
    record["model"]["fingerprint"] = "0" * 64


def _title(record: Any) -> None:
    record["model"]["title"] = "Another"


def _version(record: Any) -> None:
    record["model"]["version"] = "9.9.9"


def _no_findings(record: Any) -> None:
    record["findings"] = []


def _milder(record: Any) -> None:
    record["findings"][-1]["message"] = "All is well."


def _finding_twice(record: Any) -> None:
    record["findings"] *= 2


def _narrow(record: Any) -> None:
    record["band"]["upper"] = 0.13


def _no_band(record: Any) -> None:
    record["band"] = None


def _basis(record: Any) -> None:
    record["band"]["basis"] = "draws"


def _level(record: Any) -> None:
    record["level"] = 0.9


def _years(record: Any) -> None:
    record["years"] = 5


def _recalibration(record: Any) -> None:
    record["recalibration"] = "mild"


def _eta(record: Any) -> None:
    record["eta"] = -2.0


def _complement(record: Any) -> None:
    record["complement"] = 0.5


def _no_number(record: Any) -> None:
    record["probability"] = record["complement"] = record["eta"] = record["band"] = None


CHANGES: dict[str, tuple[Change, str]] = {
    "probability": (probability(0.01), "Probability: 13.3\u202f% (0.1329"),
    "typed": (_typed_age, "Probability"),
    "used": (_used_age, "Age, as used: 62 a → 61 a"),
    "unit": (_unit, "Age, as used: 61 d → 61 a"),
    "dated": (_dated, "Age, date: 2026-01-01 → nothing"),
    "left out": (_no_age, "no number"),
    "twice": (_twice, "stands there twice"),
    "stranger": (_stranger, "shoe (not a field of this model): 44 → nothing"),
    "fingerprint": (_fingerprint, "Model: another file."),
    "title": (_title, "Model’s title: Another → Tarnwick"),
    "version": (_version, "Model’s version: 9.9.9 → 1.0.0"),
    "no findings": (_no_findings, "A finding is new: note, About this model"),
    "milder": (_milder, "A finding of the print is gone: note, All is well."),
    "finding twice": (_finding_twice, "A finding of the print is gone"),
    "narrow": (_narrow, "Upper end of the band: 0.13 → 0.155"),
    "no band": (_no_band, "Band: no band → 0.0966"),
    "basis": (_basis, "Basis of the band: draws → covariance"),
    "level": (_level, "Level of the band: 0.95 → 0.9"),
    "years": (_years, "A finding is new: stop, This model has none of 5 years"),
    "recalibration": (_recalibration, "Recalibration: mild → nothing"),
    "eta": (_eta, "Linear predictor: −2 → −1.965"),
    "complement": (_complement, "Probability of no event: 0.5 → 0.877"),
    "no number": (_no_number, "Probability: no number → 12.3"),
}


@pytest.mark.parametrize("name", CHANGES)
def test_a_changed_record_is_caught_and_the_change_named(name: str, tmp_path: Path) -> None:
    change, said = CHANGES[name]
    found = checked(with_changed_record(PDF, change), tmp_path)
    assert not found.agrees
    sentences = report_recheck(found)
    assert sentences[0].startswith("Does not agree")
    assert said in "\n".join(sentences)


def test_another_patients_record_on_these_pages_is_caught(tmp_path: Path) -> None:
    """A record that agrees with itself in every figure, and not with what the pages show."""
    texts = {id: typed.text for id, typed in CASE.entry.typed.items()} | {"age": "44", "systolic_bp": "131"}
    other = assess_patient(CASE.model, entry_from_texts(texts), at=PRINTED)
    record = msgspec.json.encode(record_of(other))
    found = checked(with_record(PDF, record), tmp_path)
    assert found.same_model
    whats = {difference.what for difference in found.differences}
    assert whats == {
        "The probability on the pages",
        "The band on the pages",
        "The re-measurement spread on the pages",
        "Age on the pages",
        "Systolic blood pressure on the pages",
        "Page 1",
        "Page 2",
    }


def other_patient() -> bytes:
    """The print of another patient of the same practice, model and minute: 7 of 100 instead of 12 of 100 people."""
    texts = {id: typed.text for id, typed in CASE.entry.typed.items()} | {"smoker": "no"}
    return printed(assess_patient(CASE.model, entry_from_texts(texts, CASE.entry.label), at=PRINTED))


def faults(pdf: bytes, folder: Path) -> dict[str, str]:
    """What differs on the pages, by name."""
    return {difference.what: difference.sentence for difference in checked(pdf, folder).differences}


def test_another_patients_page_for_the_patient_is_caught(tmp_path: Path) -> None:
    found = faults(with_page(without_page(PDF, 1), other_patient(), 1, at=1), tmp_path)
    assert set(found) == {"Page 2"}
    assert found["Page 2"].startswith("Page 2: ")
    assert re.search(r"\b7 will have .* → 12 will have ", found["Page 2"])


def test_another_prints_first_page_put_in_front_is_caught(tmp_path: Path) -> None:
    found = faults(with_page(PDF, other_patient(), 0, at=0), tmp_path)
    assert found["Number of pages"] == "Number of pages: 3 → 2"
    assert {"Page 1", "Page 2"} <= set(found)


@pytest.mark.parametrize("place", [0, 1])
def test_a_page_taken_out_is_caught(place: int, tmp_path: Path) -> None:
    """Without the patient's page the other one still says "of 2"."""
    assert not checked(without_page(PDF, place), tmp_path).agrees


def test_pages_in_another_order_are_caught(tmp_path: Path) -> None:
    """A print that does not end with the patient's page is compared with one that has none."""
    assert set(faults(with_page(without_page(PDF, 1), PDF, 1, at=0), tmp_path)) == {"Page 1", "Number of pages"}


def test_a_page_twice_is_caught(tmp_path: Path) -> None:
    assert faults(with_page(PDF, PDF, 1, at=2), tmp_path) == {"Number of pages": "Number of pages: 3 → 2"}


def test_something_put_on_a_page_is_caught(tmp_path: Path) -> None:
    assert set(faults(with_annotation(PDF, 1), tmp_path)) == {"Page 2"}


LONG = "Ottilie Wilhelmina Fenn of the Lower Tarnwick Mill, seen with her interpreter, second visit"
UNBROKEN = "Tarnwick" * 14


@pytest.mark.parametrize("paper", Paper)
@pytest.mark.parametrize("patient_page", [True, False])
@pytest.mark.parametrize(
    ("label", "practice"),
    [
        ("", ""),
        ("Ottilie Fenn", PRACTICE),
        (LONG, PRACTICE),
        (UNBROKEN, ""),
        ("Zoë Ångström-Fenn 7", "Pràctice 12, 3\u202f% & sons"),
    ],
    ids=["bare", "named", "long", "unbroken", "accents"],
)
def test_every_way_of_printing_agrees(
    label: str, practice: str, patient_page: bool, paper: Paper, tmp_path: Path
) -> None:
    """Printed eight years ago in another zone, three minutes after the assessment."""
    zone = timezone(timedelta(hours=-3, minutes=-30))
    then = datetime(2018, 3, 9, 23, 59, 30, tzinfo=zone)
    assessment = replace(assess_patient(CASE.model, CASE.entry, at=then), label=label)
    pdf = make_report(
        assessment,
        practice=practice,
        printed_at=then + timedelta(minutes=3),
        parts=PrintParts(patient_page=patient_page),
        paper=paper,
    )
    found = checked(pdf, tmp_path, assessment)
    assert found.differences == ()
    assert found.agrees


@pytest.mark.parametrize("practice", [PRACTICE, ""])
@pytest.mark.parametrize(
    "letterhead", [("Tarnwick Northgate", "3 Quay Lane"), tuple(f"{n} {'Words of a line ' * 5}"[:80] for n in range(4))]
)
def test_a_print_with_a_letterhead_agrees_and_another_letterhead_does_not(
    practice: str, letterhead: tuple[str, ...], tmp_path: Path
) -> None:
    """What this machine's settings say by now plays no part: the lines come from the print."""
    assessment = assess_patient(CASE.model, CASE.entry, at=AT)
    pdf = make_report(assessment, practice=practice, printed_at=PRINTED, letterhead=letterhead)
    assert checked(pdf, tmp_path, assessment).agrees
    other = make_report(assessment, practice=practice, printed_at=PRINTED, letterhead=("Elsewhere", *letterhead[1:]))
    assert not checked(with_page(without_page(pdf, 0), other, 0, at=0), tmp_path, assessment).agrees


def test_a_print_without_a_number_agrees_and_its_changed_page_does_not(tmp_path: Path) -> None:
    assessment = with_band(age="")
    assert assessment.estimate is None
    assert checked(printed(assessment), tmp_path, assessment).agrees
    changed = with_page(without_page(printed(assessment), 0), printed(with_band()), 0, at=0)
    assert not checked(changed, tmp_path, assessment).agrees


def test_the_last_sentences_say_what_was_compared(tmp_path: Path) -> None:
    same = report_recheck(checked(PDF, tmp_path))
    assert same[-2].startswith("The text of every page was compared")
    assert "drawings were not compared" in same[-1]
    other = report_recheck(recheck(read_back(PDF, tmp_path), open_example("general-cvd-2008-lipids.json")))
    assert other[-2].startswith("The pages were not compared")


def test_another_file_is_named_with_what_it_gives(tmp_path: Path) -> None:
    other = open_example("general-cvd-2008-lipids.json")
    found = recheck(read_back(PDF, tmp_path), other)
    said = "\n".join(report_recheck(found))
    assert not found.same_model
    assert not found.agrees
    assert "Model: another file." in said
    assert other.content.title in said
    assert "Differs: Probability: 12.3\u202f%" in said


def test_a_level_that_is_never_made_is_refused(tmp_path: Path) -> None:
    def change(record: Any) -> None:
        record["level"] = 7

    with pytest.raises(ClinicalcError, match="level 7"):
        checked(with_changed_record(PDF, change), tmp_path)


def test_hidden_characters_of_a_forged_record_are_spelt_out(tmp_path: Path) -> None:
    def change(record: Any) -> None:
        record["model"]["title"] = "safe\x1b[2J\u202eelif"
        record["findings"][0]["message"] = "\x1b]0;x\x07"

    said = "\n".join(report_recheck(checked(with_changed_record(PDF, change), tmp_path)))
    assert all(character.isprintable() or character == "\n" for character in said.replace("\u202f", ""))
    assert "[U+001B]" in said

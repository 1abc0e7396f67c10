"""What figures answer, what the researcher answered and keeps, and what nobody did."""

from dataclasses import replace

import msgspec
import pytest

from clinicalc.coefficients.schema import Documentation
from clinicalc.development.fit_documentation import NOT_STATED, FitDocumentation, Item, document_fit
from clinicalc.development.stated_fit import (
    MinimumSize,
    MissingShare,
    StatedConcordance,
    StatedFit,
    StatedFollowUp,
    StatedSlope,
)
from clinicalc.estimation.sample_size import R2Origin, size_for_binary, size_for_survival

BARE = StatedFit(
    equation="",
    people=4000,
    events=300,
    parameters=12,
    left_out=0,
    missing=(),
    method="Cox regression, Efron’s ties; all terms chosen beforehand.",
    software=(("clinicalc", "0.1.0"), ("numpy", "2.4.6")),
)
FULL = replace(
    BARE,
    equation="Women",
    left_out=700,
    missing=(MissingShare("Smoker", 20), MissingShare("Total cholesterol", 500), MissingShare("Age", 0)),
    competing=31,
    follow_up=StatedFollowUp(7.31, "years", "reverse Kaplan–Meier"),
    concordance=StatedConcordance(0.8123, 0.78, 0.8349),
    calibration_slope=StatedSlope(1.0, is_exact=True),
    minimum=MinimumSize(size_for_survival(12, 0.011, 7.3, 10.0, 0.05), R2Origin.APPARENT),
)


def told(documentation: FitDocumentation) -> dict[str, str]:
    """Texts by item; every item of the file is of its shape, and no name comes twice here."""
    msgspec.convert(msgspec.to_builtins(documentation.items), tuple[Documentation, ...])
    texts = {entry.item: entry.text for entry in documentation.items}
    assert len(texts) == len(documentation.items)
    return texts


def test_the_figures_are_filled_in() -> None:
    texts = told(document_fit([replace(FULL, equation="")], [], is_timed=True))
    assert texts["sample size and events"] == (
        "4,000 people, 300 events (7.5\u202f%), 31 with a competing event first; 25 events for each of 12 coefficients."
    )
    assert texts["follow-up"] == "Median 7.31 years (reverse Kaplan–Meier)."
    assert texts["missing data"] == (
        "700 people of 4,700 were left out; only complete cases were used. Missing: Total cholesterol 500"
        " (10.6\u202f%) and Smoker 20 (0.4\u202f%)."
    )
    assert texts["analysis"] == "Cox regression, Efron’s ties; all terms chosen beforehand."
    assert texts["discrimination"].startswith("C statistic 0.812 (95\u202f% interval 0.780 to 0.835) in the people the")
    assert texts["apparent calibration"].startswith("Slope 1.00 in the people the model was fitted to")
    assert texts["software"] == "clinicalc 0.1.0, numpy 2.4.6."


def test_the_smallest_sample_stands_beside_the_people_there_were() -> None:
    texts = told(document_fit([replace(FULL, equation="")], [], is_timed=True))
    size = size_for_survival(12, 0.011, 7.3, 10.0, 0.05)
    assert texts["sample size needed"].startswith(f"{size.people:,} people by the criteria of Riley and others")
    assert "adjusted for optimism, so worked out afterwards and not planned" in texts["sample size needed"]
    # the paper's example (Stat Med 2019;38:1276) needs 662 people
    small = replace(BARE, people=500, minimum=MinimumSize(size_for_binary(24, 0.174, 0.288), R2Origin.ANTICIPATED))
    needed = told(document_fit([small], [], is_timed=False))["sample size needed"]
    assert needed.startswith("662 people")
    assert needed.endswith("as expected beforehand. There were fewer: 500.")


def test_what_was_not_worked_out_is_not_stated() -> None:
    found = document_fit([BARE], [], is_timed=True)
    texts = told(found)
    for item in ("discrimination", "apparent calibration", "follow-up", "sample size needed"):
        assert item not in texts
        assert item in found.unanswered
    assert texts["missing data"] == "None."


def test_what_nobody_answered_is_named_in_one_item_at_the_end() -> None:
    found = document_fit([BARE], [Documentation(item="funding", text="None.")], is_timed=True)
    last = found.items[-1]
    assert last.item == NOT_STATED
    assert last.text == f"{'; '.join(found.unanswered)}."
    assert "funding" not in found.unanswered
    assert {"limitations", "fairness", "risk of bias", "external validation"} <= set(found.unanswered)
    assert {entry.item for entry in found.items[:-1]} | set(found.unanswered) == {item.value for item in Item}


def test_follow_up_is_not_asked_for_where_there_is_none() -> None:
    assert "follow-up" not in document_fit([BARE], [], is_timed=False).unanswered


def test_answers_are_kept_word_for_word_in_the_order_of_the_list() -> None:
    answers = [
        Documentation(item="ethics", text="Invented people need no committee.  "),
        Documentation(item="Limitations", text="One practice only."),
        Documentation(item="missing   DATA", text="Complete cases; cholesterol was not asked for in 2009."),
        Documentation(item="fairness", text="Not looked at."),
    ]
    found = document_fit([replace(FULL, equation="")], answers, is_timed=True)
    for answer in answers:
        assert answer in found.items
    names = [entry.item for entry in found.items]
    assert names.index("missing   DATA") < names.index("fairness") < names.index("Limitations") < names.index("ethics")
    assert names[names.index("missing   DATA") + 1] == "missing data (figures of the fit)"


@pytest.mark.parametrize("text", ["Not stated", "not  stated.", " "])
def test_an_answer_that_says_nothing_is_none(text: str) -> None:
    found = document_fit([BARE], [Documentation(item="funding", text=text)], is_timed=True)
    assert "funding" in found.unanswered


def test_what_was_made_before_is_made_anew_and_does_not_grow() -> None:
    answers = [Documentation(item="analysis", text="Ours.")]
    once = document_fit([replace(BARE, people=3999)], answers, is_timed=True)
    again = document_fit(
        [BARE], [entry for entry in once.items if entry.item != "sample size and events"], is_timed=True
    )
    assert [entry.item for entry in again.items].count(NOT_STATED) == 1
    assert told(again)["analysis (figures of the fit)"] == BARE.method
    assert again.unanswered == document_fit([BARE], answers, is_timed=True).unanswered


def test_equations_are_told_apart_and_a_gap_in_one_is_not_covered_by_the_other() -> None:
    men = replace(BARE, equation="Men")
    texts = told(document_fit([FULL, men], [], is_timed=True))
    assert texts["discrimination"].startswith("Women: C statistic 0.812")
    assert texts["discrimination"].endswith(" Men: not stated.")
    assert texts["missing data"].endswith(" Men: None.")
    assert texts["analysis"] == BARE.method  # the same for both
    # a count that happens to be the same would look like a sum
    alike = told(document_fit([men, replace(men, equation="Women")], [], is_timed=True))
    counts = "4,000 people, 300 events (7.5\u202f%); 25 events for each of 12 coefficients."
    assert alike["sample size and events"] == f"Men: {counts} Women: {counts}"


def test_twenty_equations_with_long_names_take_more_items_of_the_same_name_and_lose_nothing() -> None:
    holes = tuple(MissingShare(f"{number:02d}" + "x" * 118, 10 + number) for number in range(25))
    fits = [replace(FULL, equation=f"{number:02d}" + "y" * 118, missing=holes) for number in range(20)]
    found = document_fit(fits, [], is_timed=True)
    msgspec.convert(msgspec.to_builtins(found.items), tuple[Documentation, ...])
    whole = " ".join(entry.text for entry in found.items if entry.item == "missing data")
    assert all(fit.equation in whole for fit in fits)
    assert "and 5 more with fewer each" in whole
    assert "24xxx" in whole
    assert "04xxx" not in whole


def test_without_a_fit_only_answers_count() -> None:
    found = document_fit([], [Documentation(item="software", text="R 4.2.2")], is_timed=False)
    assert [entry.item for entry in found.items] == ["software", NOT_STATED]


@pytest.mark.parametrize(
    ("people", "events", "said"), [(1, 1, "1 person, 1 event (100.0"), (0, 0, "0 people, 0 events")]
)
def test_small_counts(people: int, events: int, said: str) -> None:
    texts = told(document_fit([replace(BARE, people=people, events=events, parameters=1)], [], is_timed=False))
    assert texts["sample size and events"].startswith(said)
    assert texts["sample size and events"].endswith(" for 1 coefficient.")

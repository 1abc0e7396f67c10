"""Worked examples as rows of a figure: each patient once, under a name that no other row has."""

from dataclasses import replace

from clinicalc.library.effect import Effect, ExampleEffect, Whose, find_effect
from clinicalc.operations.effect_on_ruler import moves_of, name_examples, spell_value, why_no_numbers
from tests.library.versions import Tree, model_of

BASE = ExampleEffect(
    stated_by=Whose.BOTH,
    values="age 61, sex female, smoker yes (10 years)",
    typed=(("age", "61"), ("sex", "female"), ("smoker", "yes")),
    within="10 years",
    recalibration="",
    stated=0.1,
    old=0.1,
    new=0.12,
    old_because="",
    new_because="",
)


def example(typed: dict[str, str], within: str = "10 years", recalibration: str = "") -> ExampleEffect:
    values = f"{sorted(typed.items())} {within} {recalibration}"
    return replace(BASE, typed=tuple(sorted(typed.items())), within=within, recalibration=recalibration, values=values)


def test_a_name_is_sex_age_and_what_is_answered_with_yes() -> None:
    typed = {"age": "76", "sex": "male", "smoker": "yes", "bp_treated": "yes", "diabetes": "no", "weight": "80 kg"}
    assert name_examples([example(typed)]) == ("man of 76, bp treated, smoker",)
    assert name_examples([example({"age": "9", "sex": "female"})]) == ("female of 9",)


def test_names_that_would_be_alike_say_what_differs() -> None:
    woman = {"age": "55", "sex": "female", "sbp": "120", "group": "east_side"}
    named = name_examples([example(woman), example({**woman, "group": "west_side"}), example({**woman, "age": "60"})])
    assert named == ("woman of 55, group east side", "woman of 55, group west side", "woman of 60")


def test_horizon_and_recalibration_are_named_where_they_are_not_all_the_same() -> None:
    woman = {"age": "55", "sex": "female"}
    assert name_examples([example(woman), example(woman, "5 years")]) == (
        "woman of 55, within 10 years",
        "woman of 55, within 5 years",
    )
    assert name_examples([example(woman, recalibration="low"), example(woman, recalibration="high")]) == (
        "woman of 55, recalibration low",
        "woman of 55, recalibration high",
    )


def test_what_cannot_be_told_apart_is_counted() -> None:
    woman = {"age": "55", "sex": "female", "diabetes": "no"}
    other = {"age": "55", "sex": "female"}
    assert name_examples([example(woman), example(other)]) == ("woman of 55", "woman of 55 (2)")


def test_each_patient_is_one_row_whatever_both_versions_state() -> None:
    """Both versions state eight examples for the same people; those with other numbers stand twice in the effect."""

    def change(model: Tree) -> None:
        model["version"] = "1.1.0"
        model["equations"][0]["terms"][0]["coefficient"] *= 1.1

    old = model_of("tarnwick-cvd-10y", lambda model: None)
    new = model_of("tarnwick-cvd-10y", change)
    effect = find_effect(old, new)
    assert len(effect.examples) > 8
    moves = moves_of(effect, "1.0.0", "1.1.0")
    assert len(moves.moves) == 8
    assert len({move.label for move in moves.moves}) == 8
    assert moves.moves[0].label == "woman of 61, smoker"
    assert (moves.link, moves.caption) == (old.equations[0].content.link, "% within 10 years")
    first = effect.examples[0]
    assert (moves.moves[0].old, moves.moves[0].new, moves.moves[0].said) == (first.old, first.new, first.values)


def test_the_caption_names_no_horizon_where_there_are_several() -> None:
    woman = {"age": "55", "sex": "female"}
    effect = Effect((), (example(woman), example(woman, "5 years")), (), "logit")
    assert moves_of(effect, "1", "2").caption == "%"


def test_why_there_is_no_number_is_a_sentence_with_the_version() -> None:
    stopped = replace(BASE, new=None, new_because="Age 61: the range is 20–60.")
    effect = Effect((), (stopped,), (), "logit")
    assert why_no_numbers(effect, "1.2.0", "1.3.0") == (
        "woman of 61, smoker: no number from 1.3.0. Age 61: the range is 20–60.",
    )
    assert why_no_numbers(Effect((), (BASE,), (), "logit"), "1.2.0", "1.3.0") == ()


def test_values_are_written_as_people_write_them() -> None:
    assert spell_value("1.3 mmol/L") == "1.3 mmol/L"
    assert spell_value("90 mL/min/{1.73_m2}") == "90 mL/min/1.73 m²"
    assert spell_value("african_american") == "african american"

"""A typed answer means the same in a worked example and in a patient's entry."""

import msgspec
import pytest
from hypothesis import given
from hypothesis import strategies as st

from clinicalc.assessment.entry import Typed
from clinicalc.assessment.fields import AnswerOption, QuestionField
from clinicalc.assessment.questions import take_answer
from clinicalc.coefficients.answers import find_answer
from clinicalc.coefficients.rules.catalogue import list_names
from clinicalc.coefficients.rules.examples import read_answers
from clinicalc.coefficients.rules.labels import look_of
from clinicalc.coefficients.schema import Choice, ChoicePredictor
from tests.coefficients.tiny_model import tiny_cloglog_model

AREAS = (("north", "By the river"), ("south", "Below the hill"), ("hill", "Strasse"))


@pytest.mark.parametrize(
    ("typed", "place"),
    [
        ("north", 0),
        (" SOUTH ", 1),
        ("by the RIVER", 0),
        ("straße", 2),  # casefold, not lower
        ("hill", 2),
        ("below", None),
        ("", None),
        ("nor th", None),
    ],
)
def test_by_id_or_label_without_regard_to_capitals_and_spaces_around(typed: str, place: int | None) -> None:
    assert find_answer(typed, AREAS) == place


def test_an_id_goes_before_a_label() -> None:
    """A file with such labels is refused; the rule holds all the same."""
    assert find_answer("b", [("a", "B"), ("b", "A")]) == 1
    assert find_answer("A", [("x", "a"), ("y", "a"), ("a", "x")]) == 2


IDS = st.lists(st.from_regex(r"[a-c]{1,2}", fullmatch=True), min_size=2, max_size=4, unique=True)
SPELLINGS = st.text(alphabet="abcABC ßſ", min_size=1, max_size=3).filter(str.strip)


@given(IDS, st.data())
def test_worked_examples_and_patients_agree(ids: list[str], data: st.DataObject) -> None:
    labels = data.draw(st.lists(SPELLINGS, min_size=len(ids), max_size=len(ids), unique_by=look_of))
    for place, label in enumerate(labels):
        if any(look_of(label) == id for other, id in enumerate(ids) if other != place):
            return  # refused at load
    typed = data.draw(st.one_of(SPELLINGS, st.sampled_from(ids), st.sampled_from(labels)))
    choices = tuple(Choice(id, label) for id, label in zip(ids, labels, strict=True))
    model = msgspec.structs.replace(
        tiny_cloglog_model(), predictors=(ChoicePredictor(id="area", label="Area", group="Person", choices=choices),)
    )
    options = tuple(AnswerOption(choice.id, choice.label) for choice in choices)
    taken, _ = take_answer(QuestionField("area", "Area", "Person", options), Typed(typed))
    expected = {} if taken is None else {"area": taken.option.id}
    assert read_answers({"area": typed}, list_names(model)) == expected

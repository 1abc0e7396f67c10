"""Decision points in sentences."""

import pytest

from clinicalc.assessment.decision import DecisionPoint, PlacedPoint, PointOrigin
from clinicalc.report.phrases_decision import confidence_sentence, confidence_words, point_sentence


def placed(probability: float, *, above: bool, confidence: float | None = None, origin: str = "file") -> PlacedPoint:
    """A placed point with an invented source."""
    point = DecisionPoint(probability, "Offer tablets", "invented, 2026", PointOrigin(origin))
    return PlacedPoint(point, above, crossed=False, confidence=confidence)


@pytest.mark.parametrize(
    ("place", "shown", "words"),
    [
        (placed(0.1, above=True), "10.5 %", "10.5 %, above the decision point 10.0 % (Offer tablets; invented, 2026)"),
        (placed(0.1, above=False), "9.96 %", "9.96 %, below the decision point 10.0 % (Offer tablets; invented, 2026)"),
        (placed(0.1, above=True), "10.0\u202f%", "10.0 %, at or just above the decision point 10.0 % (Offer tablets"),
        (
            placed(0.0025, above=True, origin="practice"),
            "0.3 %",
            "0.3 %, above this practice’s decision point 0.25 % (Offer tablets; invented, 2026)",
        ),
    ],
)
def test_one_line_a_point(place: PlacedPoint, shown: str, words: str) -> None:
    assert point_sentence(place, shown).replace("\u202f", " ").startswith(words)


@pytest.mark.parametrize(
    ("confidence", "words"),
    [
        (1.0, "almost certainly above 10.0 % (more than 99 of 100)"),
        (0.9901, "almost certainly above 10.0 % (more than 99 of 100)"),
        (0.99, "very probably above 10.0 % (about 99 of 100)"),
        (0.95, "very probably above 10.0 % (about 95 of 100)"),
        (0.86, "probably above 10.0 % (about 86 of 100)"),
        (0.65, "about as likely above 10.0 % as below (above in about 65 of 100)"),
        (0.52, "about as likely above 10.0 % as below (above in about 52 of 100)"),
        (0.36, "about as likely above 10.0 % as below (above in about 36 of 100)"),
        (0.14, "probably below 10.0 % (about 86 of 100)"),
        (0.05, "very probably below 10.0 % (about 95 of 100)"),
        (0.0, "almost certainly below 10.0 % (more than 99 of 100)"),
    ],
)
def test_confidence_in_words(confidence: float, words: str) -> None:
    assert confidence_words(confidence, "10.0 %") == words


def test_the_sentence_says_what_it_is_about() -> None:
    places = [placed(0.1, above=True, confidence=0.95), placed(0.2, above=False, confidence=0.001)]
    assert confidence_sentence(places).replace("\u202f", " ") == (
        "Given how precisely the coefficients are known, the model’s number for people with these values is very"
        " probably above 10.0 % (about 95 of 100) and almost certainly below 20.0 % (more than 99 of 100). This is"
        " about the model’s coefficients, not about this patient’s event."
    )
    assert confidence_sentence([placed(0.1, above=True)]) == ""
    assert confidence_sentence([]) == ""

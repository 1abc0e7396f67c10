"""Labels that a person can tell apart: of the fields on one page, and of the answers to one question."""

import unicodedata
from collections.abc import Iterable, Iterator

from clinicalc.coefficients.pointers import point, quoted
from clinicalc.coefficients.rules.catalogue import Catalogue, at
from clinicalc.coefficients.schema import Choice, ChoicePredictor, ModelContent
from clinicalc.errors import Problem


def check_labels(model: ModelContent, names: Catalogue) -> Iterator[Problem]:
    """No two fields are labelled alike, and no answer is labelled like another or like another's id."""
    del names
    fields = [
        *((at("predictors", index, "label"), part.label) for index, part in enumerate(model.predictors)),
        *((at("derived", index, "label"), part.label) for index, part in enumerate(model.derived)),
        *((at("exclusions", index, "ask"), part.ask) for index, part in enumerate(model.exclusions)),
    ]
    yield from _check_distinct(fields, "whoever fills in the page could not tell the two fields apart")
    for index, predictor in enumerate(model.predictors):
        if isinstance(predictor, ChoicePredictor):
            yield from _check_choices(predictor.choices, at("predictors", index, "choices"))


def look_of(text: str) -> str:
    """What a reader sees of a text: capitals, width, composition and runs of spaces make no difference."""
    return " ".join(unicodedata.normalize("NFKC", text).casefold().split())


def _check_choices(choices: tuple[Choice, ...], base: str) -> Iterator[Problem]:
    labels = [(point(base, place, "label"), choice.label) for place, choice in enumerate(choices)]
    yield from _check_distinct(labels, "nobody could tell the two answers apart")
    ids = {choice.id: place for place, choice in enumerate(choices)}
    for place, (path, label) in enumerate(labels):
        other = ids.get(look_of(label), place)
        if choices[other].id != choices[place].id:
            yield Problem(
                path,
                f"{quoted(label)} is the id of another answer, at {point(base, other, 'id')}; who types it could mean "
                "either. Label it otherwise.",
            )


def _check_distinct(labels: Iterable[tuple[str, str]], why: str) -> Iterator[Problem]:
    first: dict[str, str] = {}
    for path, label in labels:
        look = look_of(label)
        if look in first:
            yield Problem(path, f"{quoted(label)} reads like the text at {first[look]}; {why}. Label one otherwise.")
        first.setdefault(look, path)

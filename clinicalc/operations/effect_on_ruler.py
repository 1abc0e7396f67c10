"""The worked examples of two versions as rows of a figure, each named in a few words that tell it from the others."""

from collections import Counter
from collections.abc import Mapping, Sequence

from clinicalc.coefficients.roles import SEX
from clinicalc.library.effect import Effect, ExampleEffect
from clinicalc.report.effect_figure import Move, Moves
from clinicalc.units.unit import find_unit

_AGE = "age"
_YES, _NO = "yes", "no"
_GROWN = 18
_WHO = {"female": "woman", "male": "man"}


def moves_of(effect: Effect, old_name: str, new_name: str) -> Moves:
    """The patients of both versions' worked examples, each once; the names are such as "1.2.0"."""
    examples = _each_once(effect)
    horizons = {example.within for example in examples}
    caption = f"% within {horizons.pop()}" if len(horizons) == 1 and "" not in horizons else "%"
    moves = [Move(label, e.old, e.new, e.values) for label, e in zip(name_examples(examples), examples, strict=True)]
    return Moves(effect.link, tuple(moves), old_name, new_name, caption)


def names_by_values(effect: Effect) -> Mapping[str, str]:
    """The short name of each worked example by its values in one line."""
    examples = _each_once(effect)
    return {example.values: name for example, name in zip(examples, name_examples(examples), strict=True)}


def why_no_numbers(effect: Effect, old_name: str, new_name: str) -> tuple[str, ...]:
    """For each worked example to which a version gives no number, the sentence that says why."""
    examples = _each_once(effect)
    return tuple(
        f"{label}: no number from {name}. {because}".rstrip()
        for label, example in zip(name_examples(examples), examples, strict=True)
        for name, number, because in (
            (old_name, example.old, example.old_because),
            (new_name, example.new, example.new_because),
        )
        if number is None
    )


def name_examples(examples: Sequence[ExampleEffect]) -> tuple[str, ...]:
    """Sex, age and what is answered with yes; where that fits several, also the other values in which these differ.

    Where the examples are not all for one horizon or one recalibration, these too.
    """
    horizons = {example.within for example in examples}
    adjusted = {example.recalibration for example in examples}
    named = []
    short = [_short(dict(example.typed)) for example in examples]
    for words, example in zip(short, examples, strict=True):
        alike = [other for other, of_other in zip(examples, short, strict=True) if of_other == words]
        within = f"within {example.within}" if len(horizons) > 1 and example.within else ""
        recalibration = f"recalibration {example.recalibration}" if len(adjusted) > 1 and example.recalibration else ""
        named.append(", ".join(filter(None, (words, *_apart(example, alike), within, recalibration))))
    again = Counter[str]()
    for place, name in enumerate(named):
        again[name] += 1
        if again[name] > 1:
            named[place] = f"{name} ({again[name]})"
    return tuple(named)


def spell_value(text: str) -> str:
    """A typed value with its unit as people write it, an answer without underlines."""
    number, _, code = text.strip().partition(" ")
    known = find_unit(code) if code else None
    return text.strip().replace("_", " ") if known is None else f"{number} {known.spelling}"


def _each_once(effect: Effect) -> tuple[ExampleEffect, ...]:
    """One example for each patient: versions that state other numbers for the same one are compared in it."""
    return tuple({example.values: example for example in effect.examples}.values())


def _short(typed: dict[str, str]) -> str:
    """ "woman of 61, smoker": with the words of the file's own ids."""
    sex, age = typed.get(SEX, "").strip(), typed.get(_AGE, "").strip()
    who = _WHO.get(sex, sex) if _is_grown(age) else sex
    yes = [id.replace("_", " ") for id, text in typed.items() if text.strip().casefold() == _YES]
    return ", ".join(filter(None, (" of ".join(filter(None, (who, age))), *yes)))


def _is_grown(age: str) -> bool:
    try:
        return float(age) >= _GROWN
    except ValueError:
        return False


def _apart(example: ExampleEffect, alike: list[ExampleEffect]) -> list[str]:
    """The values beside those of short names in which the examples of one short name are not all the same."""
    found = []
    for id, text in example.typed:
        if id in (SEX, _AGE) or text.strip().casefold() in (_YES, _NO):
            continue
        if len({dict(other.typed).get(id, "") for other in alike}) > 1:
            found.append(f"{id.replace('_', ' ')} {spell_value(text)}")
    return found

"""The ranges a study leaves to its people: the lowest and highest value of those its fits were made from."""

from collections.abc import Iterator, Mapping

import numpy as np

from clinicalc.development.estimating import FittedStudy
from clinicalc.development.study_figures import HorizonFigures
from clinicalc.development.study_terms import Tree, parts


def with_ranges(fitted: FittedStudy, model: Tree) -> Tree:
    """The model with `derivation` filled in for each number, measured or worked out, that has none and was used."""
    filled = dict(model)
    for kind in ("predictors", "derived"):
        found = model.get(kind)
        if isinstance(found, list):
            filled[kind] = [_with_range(fitted, part) if _is_open(part, kind) else part for part in found]
    return filled


def observed(fitted: FittedStudy, id: str) -> tuple[float, float] | None:
    """Lowest and highest value of a predictor or derived value among those used; None where no fit uses it."""
    ends = [
        (float(np.nanmin(used)), float(np.nanmax(used)))  # of those who have it, where values are filled in
        for people in fitted.people.values()
        if id in people.columns and np.isfinite(used := people.columns[id][people.complete]).any()
    ]
    if not ends:
        return None
    return min(low for low, _ in ends), max(high for _, high in ends)


def count_people(fitted: FittedStudy) -> tuple[int, int]:
    """People and events over all fits; their people are different ones."""
    return sum(one.people for one in fitted.figures), sum(one.events for one in fitted.figures)


def with_horizon_figures(fitted: FittedStudy, model: Tree) -> Tree:
    """The model with people, events and those still at risk beside each horizon of a Cox fit that does not say them."""
    said: dict[str, list[HorizonFigures]] = {}
    for one in fitted.figures:
        for horizon in one.horizons:
            said.setdefault(horizon.equation, []).append(horizon)
    equations = []
    for equation in parts(model, "equations"):
        figures = said.get(str(equation.get("id")), [])
        horizons = parts(equation, "horizons")
        if figures:
            horizons = [
                {"people": at.people, "events": at.events, "still_at_risk": at.still_at_risk, **horizon}
                for horizon, at in zip(horizons, figures, strict=True)
            ]
        equations.append({**equation, "horizons": horizons})
    return {**model, "equations": equations}


def with_source_figures(fitted: FittedStudy, model: Tree) -> Tree:
    """The model with people and events in its source, where that does not say them."""
    source = model.get("source")
    if not isinstance(source, dict):
        return model
    people, events = count_people(fitted)
    stated = source.get("derivation")
    figures = {"people": people, "events": events, **(stated if isinstance(stated, dict) else {})}
    return {**model, "source": {**source, "derivation": figures}}


def remark_other_figures(fitted: FittedStudy, completed: Tree) -> Iterator[str]:
    """Counts that the study states itself and that the fit does not bear out, such as those of an earlier file."""
    people, events = count_people(fitted)
    source = completed.get("source")
    derivation = source.get("derivation") if isinstance(source, dict) else None
    yield from _remark_counts("source, derivation", derivation, {"people": people, "events": events})
    found = {(at.equation, at.span): at for one in fitted.figures for at in one.horizons}
    stated = {str(equation.get("id")): parts(equation, "horizons") for equation in parts(completed, "equations")}
    for (equation, span), at in found.items():
        lines = [line.span for one in fitted.model.equations if one.content.id == equation for line in one.lines]
        counts = {"people": at.people, "events": at.events, "still_at_risk": at.still_at_risk}
        yield from _remark_counts(f"{equation}, {span.words}", stated[equation][lines.index(span)], counts)


def _remark_counts(where: str, stated: object, counts: Mapping[str, int]) -> Iterator[str]:
    for name, count in counts.items():
        said = stated.get(name) if isinstance(stated, dict) else None
        if isinstance(said, int) and said != count:
            yield (
                f'{where}: the study says {name} = {said}, which is kept, and the fit has {count}. Leave "{name}" out '
                "to have the figure of the fit."
            )


def _is_open(part: object, kind: str) -> bool:
    return isinstance(part, dict) and "derivation" not in part and (kind == "derived" or part.get("kind") == "number")


def _with_range(fitted: FittedStudy, part: Tree) -> Tree:
    ends = observed(fitted, str(part.get("id")))
    return part if ends is None or ends[0] == ends[1] else {**part, "derivation": list(ends)}

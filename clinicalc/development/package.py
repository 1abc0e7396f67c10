"""From a description and its fits to one coefficient file, complete and proved, or to every problem at once."""

import os
import re
from collections.abc import Iterator, Mapping
from dataclasses import dataclass, field
from pathlib import Path

import msgspec

from clinicalc.assessment.model import Model, prepare_model
from clinicalc.assessment.proof import load_model_bytes, number_ranges
from clinicalc.coefficients.pointers import find_at, listed, point, quoted, suggest
from clinicalc.coefficients.reader import ReadFile, read_bytes
from clinicalc.coefficients.rules import RULES
from clinicalc.coefficients.rules.catalogue import list_names
from clinicalc.coefficients.rules.examples import check_examples
from clinicalc.coefficients.schema import FORMAT, CoefficientFile, ModelContent
from clinicalc.coefficients.shape import find_shape_problems
from clinicalc.coefficients.writer import write_bytes, write_file
from clinicalc.covariates.finiteness import find_nonfinite
from clinicalc.development.description import Description
from clinicalc.development.filling import (
    Tree,
    fill_equation,
    find_misshapen,
    find_said_twice,
    find_unfitted,
    stand_in,
    wanted_of,
)
from clinicalc.development.fit import Fit, FitKind
from clinicalc.development.fit_tables import take_fit
from clinicalc.development.patients import Draft, complete_examples, draft_examples, find_patient_problems
from clinicalc.development.places import place_problem, spell_place
from clinicalc.development.rebuilding import rebuild, stand_in_for_band
from clinicalc.development.tables import Fault, read_json, read_text
from clinicalc.errors import CoefficientFileRefused, DescriptionRefused, Problem, UsageError

_STAND_IN_EXAMPLE: Tree = {"values": {}, "probability": 0.5, "tolerance": 0.01, "source": "-"}


@dataclass(frozen=True, slots=True, eq=False)
class Package:
    """A coefficient file ready to be put in place: its content, its bytes, the model they prove to be, and remarks."""

    content: CoefficientFile
    data: bytes
    model: Model
    remarks: tuple[str, ...]


@dataclass(slots=True)
class _Making:
    """A package being made: the description, and the problems met so far, with pointers into the model."""

    description: Description
    problems: list[Problem] = field(default_factory=list)
    placed: list[Problem] = field(default_factory=list)
    remarks: list[str] = field(default_factory=list)
    failed: set[int] = field(default_factory=set)
    fitted: set[str] = field(default_factory=set)
    misshapen: set[int] = field(default_factory=set)
    drafts: tuple[Draft, ...] = ()

    def found(self) -> tuple[Problem, ...]:
        """The problems so far, each at its place in the description."""
        kept = [problem for problem in self.problems if not self._is_of_a_stand_in(problem)]
        patients = [draft.patient for draft in self.drafts]
        model, fitted = self.description.model, frozenset(self.fitted)
        found = [*self.placed, *(place_problem(problem, model, fitted, patients) for problem in kept)]
        return tuple(dict.fromkeys(found))

    def refuse_if_any(self) -> None:
        """Raise DescriptionRefused where there are problems."""
        found = self.found()
        if found:
            raise DescriptionRefused(self.description.name, found)

    def _is_of_a_stand_in(self, problem: Problem) -> bool:
        found = re.match(
            r"/model/equations/([0-9]+)/(?:terms/([0-9]+)/(?:interval|coefficient)|uncertainty)", problem.path
        )
        if found is None or int(found[1]) not in self.failed:
            return False
        return found[2] is None or not self._is_fixed(int(found[1]), int(found[2]))

    def _is_fixed(self, equation: int, term: int) -> bool:
        """Whether the coefficient of that term is the description's own."""
        found = find_at(self.description.model, point("", "equations", equation, "terms", term))
        return isinstance(found, dict) and found.get("fixed") is True


def package_model(description: Description, fits: Mapping[str, Fit] | None = None) -> Package:
    """The proved coefficient file of a description.

    `fits` are fits by equation id, from `statsmodels_fit`, say; they take the place of the [fit] tables of those
    equations. Raises DescriptionRefused with every problem; nothing is written here.
    """
    making = _Making(description, list(description.problems))
    tree = dict(description.model)
    tree["equations"] = _fill_equations(making, dict(fits or {}))
    if not any(problem.path.startswith("/patients") for problem in description.problems):
        making.problems += find_patient_problems(description.patients)
    content = _check_content(making, tree)
    making.refuse_if_any()
    assert content is not None  # what could not be built was refused
    return _prove(making, content)


def check_before_fits(description: Description) -> tuple[ModelContent | None, tuple[Problem, ...]]:
    """What a description says before its fits are there (None in `fits`), and every problem with it so far.

    The content has figures that break no rule in place of the fits', and is None where its shape is wrong. People need
    not be described yet.
    """
    making = _Making(description, list(description.problems))
    tree = dict(description.model)
    tree["equations"] = _fill_equations(making, {})
    if description.patients:
        making.problems += find_patient_problems(description.patients)
    content = _check_content(making, tree)
    return content, making.found()


def write_package(package: Package, path: Path, *, replace: bool = False) -> None:
    """Put the file at `path` whole or not at all.

    Raises UsageError where something stands there and `replace` is not said, and FileNotWritten.
    """
    check_place(path, replace=replace)
    write_file(path, package.content)


def check_place(path: Path, *, replace: bool = False) -> None:
    """Whether a package may be put there, before long work is done for it. Raises UsageError."""
    if os.path.lexists(path):
        _check_may_replace(path, replace)


def _check_may_replace(path: Path, replace: bool) -> None:
    if not replace:
        raise UsageError(
            f"{path} is there already and was left as it is.", do="Choose another name, or say --replace to replace it."
        )
    text = read_text(path)
    value = text if isinstance(text, Fault) else read_json(text)
    if not isinstance(value, dict) or value.get("format") != FORMAT:
        raise UsageError(
            f"{path} is no coefficient file and was left as it is.",
            do="Only such a file is replaced. Choose another name.",
        )


def _fill_equations(making: _Making, given: dict[str, Fit]) -> object:
    description = making.description
    known = [str(equation.get("id")) for equation in description.equations]
    for id in [*description.fits, *given]:
        if id not in known:
            making.placed.append(Problem(f"fit.{id}", f"there is no equation {quoted(id)}.{suggest(id, known)}"))
    equations = description.model.get("equations")
    if not isinstance(equations, list):
        return equations
    return [
        _fill(making, place, equation, given) if isinstance(equation, dict) else equation
        for place, equation in enumerate(equations)
    ]


def _fill(making: _Making, place: int, equation: Tree, given: Mapping[str, Fit]) -> Tree:
    id, base = str(equation.get("id")), point("/model", "equations", place)
    fits = making.description.fits
    if making.description.rebuilds:
        making.problems += _find_beside_rebuilding(equation, base, has_fit=id in fits or id in given)
        return stand_in_for_band(equation)
    if id not in fits and id not in given:
        making.problems += find_unfitted(equation, base)
        return equation
    misshapen = list(find_misshapen(equation, base))
    if misshapen:
        making.problems += misshapen
        making.misshapen.add(place)
        return equation
    making.fitted.add(id)
    table = fits.get(id)
    fit, kind = None, FitKind.LOGISTIC if equation.get("link") == "logit" else FitKind.COX
    if id in given:
        kind = given[id].kind
        faults = _judge_given(given[id], equation)
        making.placed += faults
        fit = None if faults else given[id]
    elif table is not None:
        kind = FitKind(table.kind)
        fit, problems = take_fit(table, wanted_of(equation), making.description.folder)
        making.placed += problems
    if id in given or table is not None:
        twice = find_said_twice(equation, kind, base)
        making.placed += [Problem(spell_place(said.path, making.description.model), said.message) for said in twice]
    if fit is None:
        making.failed.add(place)
        return stand_in(equation, kind)
    making.remarks += [f"Equation {quoted(id)}: {remark}" for remark in fit.remarks]
    return fill_equation(equation, fit)


def _find_beside_rebuilding(equation: Tree, base: str, *, has_fit: bool) -> Iterator[Problem]:
    if has_fit:
        yield Problem(
            "/reconstruct",
            f"the bands of all equations are rebuilt, and {quoted(equation.get('id'))} has a fit. Keep one of the two.",
        )
    if "uncertainty" in equation:
        yield Problem(point(base, "uncertainty"), "the band is rebuilt, as [reconstruct] asks. Leave this out.")


def _judge_given(fit: Fit, equation: Tree) -> list[Problem]:
    """What keeps a fit handed over in Python from filling its equation."""
    wanted, path = wanted_of(equation), f"fit.{equation.get('id')}"
    found = []
    if set(fit.names) != set(wanted.terms):
        odd = sorted(set(fit.names) ^ set(wanted.terms))
        found.append(
            Problem(path, f"{listed(map(quoted, odd))} stand only in the fit, or only among the estimated terms.")
        )
    if len(fit.baselines) != len(wanted.horizons):
        found.append(
            Problem(path, f"the fit has {len(fit.baselines)} baselines, and there are {len(wanted.horizons)} horizons.")
        )
    if wanted.band and (fit.covariance is None or any(line.variance is None for line in fit.baselines)):
        found.append(Problem(path, 'the fit has no covariance. Say uncertainty = {basis = "none", because = "..."}.'))
    return found


def _check_content(making: _Making, tree: Tree) -> ModelContent | None:
    """The model, its worked examples drafted; None where its shape is wrong."""
    tree["worked_examples"] = [_STAND_IN_EXAMPLE]
    shape = list(find_shape_problems({"format": FORMAT, "model": tree, "signatures": []}))
    bare = tuple(f"{point('/model', 'equations', place)}/" for place in making.misshapen)
    making.problems += [fault for fault in shape if not f"{fault.path}/".startswith(bare)] if bare else shape
    if shape:
        return None
    try:
        content = msgspec.convert(tree, ModelContent)
    except msgspec.ValidationError:  # a number or a text was refused while it was read, which has been said
        return None
    names = list_names(content)
    for rule in RULES:
        if rule is not check_examples:
            making.problems += rule(content, names)
    content, lacking = rebuild(content, making.description)
    said = {problem.path for problem in making.problems}
    making.problems += [problem for problem in lacking if problem.path not in said]
    if not making.description.patients or lacking:
        return content
    making.drafts = draft_examples(making.description.patients, content)
    content = msgspec.structs.replace(content, worked_examples=tuple(draft.example for draft in making.drafts))
    making.problems += check_examples(content, names)
    return content


def _prove(making: _Making, content: ModelContent) -> Package:
    name = f"{content.id}.json"
    model = prepare_model(ReadFile(name, CoefficientFile("clinicalc.coefficients/1", content, ()), b"", ""))
    making.problems += find_nonfinite(content, number_ranges(model))
    making.refuse_if_any()
    examples, misses = complete_examples(making.drafts, model)
    making.problems += misses
    making.refuse_if_any()
    file = CoefficientFile("clinicalc.coefficients/1", msgspec.structs.replace(content, worked_examples=examples), ())
    try:
        # read with answers in the order of the fingerprinted bytes: written so, the file is its own copy
        file = read_bytes(write_bytes(file), name).content
        data = write_bytes(file)
        proved = load_model_bytes(data, name)
    except CoefficientFileRefused as refused:
        making.problems += refused.problems
        making.refuse_if_any()
        raise
    return Package(file, data, proved, tuple(dict.fromkeys(making.remarks)))

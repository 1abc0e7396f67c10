"""An updated model made into the next version of its coefficient file: the verbs that window and command share.

update_model (room validation) -> package_update -> operations.study.write_study
"""

from collections.abc import Iterator, Sequence
from dataclasses import dataclass, replace

from msgspec import UNSET

from clinicalc.assessment.model import Model
from clinicalc.coefficients.file_types import LONGEST_TEXT
from clinicalc.coefficients.reader import read_bytes
from clinicalc.coefficients.schema import Ancestry, AncestryCohort, Derivation, Documentation, Equation
from clinicalc.coefficients.writer import write_bytes
from clinicalc.cohort.course import UNWATCHED, Course
from clinicalc.development.fit import Fit, FitBaseline, FitKind
from clinicalc.development.fitted import fit_with_intercept, rows_of
from clinicalc.development.package import Package, package_model
from clinicalc.development.updated_content import EXTERNAL, UPDATING, VersionWish, describe_version
from clinicalc.development.updated_equation import (
    Counted,
    Move,
    keep_spans,
    recalibrate_equation,
    refit_equation,
)
from clinicalc.errors import DescriptionRefused, Problem
from clinicalc.library.file_signatures import sign_file
from clinicalc.library.keys import SigningKey
from clinicalc.operations.updating_words import say_update, say_validation
from clinicalc.validation.updated import EquationUpdate, Refit, Update, UpdateMethod
from clinicalc.validation.validated import Validation

_FARTHEST = (UpdateMethod.REFIT, UpdateMethod.TWO_SCALE, UpdateMethod.INTERCEPT_SLOPE, UpdateMethod.INTERCEPT)
KEPT = (
    "the tests give no reason to change the model, so there is no new version to be made. It may go on being used as "
    "it is; who wants a new baseline all the same asks for intercept"
)


@dataclass(frozen=True, slots=True)
class NewVersion:
    """How the new version is to be called and whom it is from.

    `cohort` says in words who the people were, `begins` and `ends` when ("" where nobody says). `id`, `title` and
    `population` are the parent's where they are "". `documentation` are further answers (item, text).
    """

    version: str
    cohort: str
    id: str = ""
    title: str = ""
    population: str = ""
    begins: str = ""
    ends: str = ""
    documentation: tuple[tuple[str, str], ...] = ()


def package_update(
    model: Model,
    update: Update,
    new: NewVersion,
    course: Course = UNWATCHED,
    *,
    validation: Validation | None = None,
    key: SigningKey | None = None,
) -> Package:
    """The coefficient file of the new version, complete and proved by its worked examples; nothing is written.

    `model` is the parent. `validation`, where given, fills the documentation's item on external validation. With a
    `key` the file is signed. Write it by `operations.study.write_study`. Raises DescriptionRefused with every problem:
    an update that keeps the model, a version that is not higher than the parent's.
    """
    if update.keeps:
        raise DescriptionRefused(model.name, (Problem("", f"{KEPT}."),))
    course.say("Moving the equations", 0, 2)
    version = model.content.version
    equations = tuple(
        _update_equation(equation.content, found, update, version)
        for equation, found in zip(model.equations, update.equations, strict=True)
    )
    refitted = frozenset(found.id for found in update.equations if found.refit is not None)
    wish = VersionWish(
        id=new.id,
        version=new.version,
        title=new.title,
        population=new.population,
        documentation=_document(model, update, new, validation),
        refitted=_derivation(update, new) if len(refitted) == len(equations) else None,
    )
    described, remarks = describe_version(model.content, equations, refitted, _ancestry(model, update, new), wish)
    if described.problems:  # said once, and not by the rules of the file as well
        raise DescriptionRefused(described.name, tuple(Problem(p.path[1:], p.message) for p in described.problems))
    course.say("Working the examples", 1, 2)
    package = package_model(described)
    course.say("Working the examples", 2, 2)
    package = replace(package, remarks=(*package.remarks, *update.remarks, *remarks))
    if key is None:
        return package
    signed = sign_file(read_bytes(package.data, package.model.name), key)
    return replace(package, content=signed, data=write_bytes(signed))


def _update_equation(equation: Equation, found: EquationUpdate, update: Update, version: str) -> Equation:
    kept = keep_spans(equation, update.spans)
    if found.method is UpdateMethod.KEEP:
        return kept
    if found.refit is not None:
        counted = [Counted(line.people, line.events) for line in found.refit.lines]
        return refit_equation(kept, _fit(kept, found.refit), counted)
    # the slope of a subdistribution comes with a robust variance
    robust = equation.competing_events.handled == "subdistribution" and found.slope_se is not None
    moves = {
        line.span: Move(line.span, line.intercept, line.slope, line.covariance, line.people, line.events, robust)
        for line in found.lines
    }
    return recalibrate_equation(kept, moves, version)


def _fit(equation: Equation, refit: Refit) -> Fit:
    """A refit as the packaging takes fits."""
    if refit.joint is not None:
        kind = FitKind.LOGISTIC if equation.link == "logit" else FitKind.CLOGLOG
        coefficients = [refit.lines[0].lp0, *refit.coefficients.tolist()]
        at_zero = [0.0] * len(refit.terms)
        return fit_with_intercept(kind, refit.terms, coefficients, refit.joint, reference=at_zero)
    subdistribution = equation.competing_events.handled == "subdistribution"
    return Fit(
        kind=FitKind.FINE_GRAY if subdistribution else FitKind.COX,
        names=refit.terms,
        coefficients=tuple(refit.coefficients.tolist()),
        covariance=rows_of(refit.covariance),
        robust=refit.robust,
        baselines=tuple(FitBaseline(None, line.lp0, line.variance, line.centre) for line in refit.lines),
    )


def _ancestry(model: Model, update: Update, new: NewVersion) -> Ancestry:
    methods = {found.method for found in update.equations}
    return Ancestry(
        fingerprint=model.fingerprint,
        id=model.content.id,
        version=model.content.version,
        title=model.content.title,
        cohort=AncestryCohort(
            words=new.cohort,
            people=update.people,
            events=update.events,
            from_=new.begins or UNSET,
            to=new.ends or UNSET,
        ),
        method=next(method for method in _FARTHEST if method in methods).value,  # type: ignore[arg-type]
        figures=tuple(say_update(update)),
    )


def _derivation(update: Update, new: NewVersion) -> Derivation:
    return Derivation(update.people, update.events, new.begins or UNSET, new.ends or UNSET)


def _document(
    model: Model, update: Update, new: NewVersion, validation: Validation | None
) -> tuple[Documentation, ...]:
    """The items of the new version: how it was updated, how the parent did, what the parent said of either before."""
    before = model.content.version
    dates = " to ".join(date for date in (new.begins, new.ends) if date)
    who = f"{new.cohort} ({update.people:,} people, {update.events:,} events{f', {dates}' if dates else ''})"
    said = [(UPDATING, f"Version {before}, fingerprint {model.fingerprint}, was updated to {who}.")]
    said += [(UPDATING, sentence) for sentence in say_update(update)]
    said.append((UPDATING, f"Every item that says nothing of this version is answered as in version {before}."))
    if validation is not None:
        said += [(EXTERNAL, sentence) for sentence in say_validation(validation, before)]
        said += [(EXTERNAL, sentence) for sentence in validation.verdict]
    said.append(
        (
            EXTERNAL,
            f"Version {new.version} was made from these people, and has not been validated in others.",
        )
    )
    old = [(one.item, one.text) for one in model.content.documentation if one.item in (UPDATING, EXTERNAL)]
    said += [(item, f"Of version {before}: {text}") for item, text in old]
    said += [(item, text) for item, text in new.documentation]
    return tuple(
        Documentation(item, text)
        for item in dict.fromkeys(item for item, _ in said)
        for text in _join([text for name, text in said if name == item])
    )


def _join(sentences: Sequence[str]) -> Iterator[str]:
    """The sentences as few texts, none longer than a file may hold."""
    held = ""
    for sentence in sentences:
        if held and len(held) + 1 + len(sentence) > LONGEST_TEXT:
            yield held
            held = ""
        held = f"{held} {sentence}".strip()[:LONGEST_TEXT]
    yield held

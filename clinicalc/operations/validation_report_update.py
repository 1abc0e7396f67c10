"""An update of a model for the report of a validation: what was chosen and why, old against new, and the file made."""

from collections.abc import Iterator

from msgspec import UnsetType

from clinicalc.assessment.model import Model
from clinicalc.assessment.numerals import EN_DASH, NARROW_SPACE
from clinicalc.coefficients.fingerprint import group_fingerprint
from clinicalc.development.package import Package
from clinicalc.operations.updating_words import METHOD_WORDS
from clinicalc.operations.validation_names import MEAN_ERROR, list_measures
from clinicalc.operations.validation_report_update_lines import tell_estimates
from clinicalc.operations.validation_words import figure_words, limits_words, p_words, share_of_all
from clinicalc.report.calibration_words import points_words
from clinicalc.report.contents import Block, Column, Fact, FactList, Prose, Row, Section, Table
from clinicalc.validation.updated import EquationUpdate, Testing, Update, UpdateMethod
from clinicalc.validation.validated import HorizonValidation, Measure, Validation

_SHORT = {
    UpdateMethod.CLOSED_TEST: "closed testing",
    UpdateMethod.KEEP: "the model as it was",
    UpdateMethod.INTERCEPT: "a new baseline alone",
    UpdateMethod.INTERCEPT_SLOPE: "baseline and slope",
    UpdateMethod.REFIT: "a refit",
    UpdateMethod.TWO_SCALE: "groups on two scales",
}
_BASELINE = (
    "The baseline is what is the same for everybody: the intercept, or in a model of times the log of the cumulative"
    " hazard by the horizon."
)
_CLOSED = (
    "The fullest way was tested against each simpler one, the simplest first, at a level of {alpha}; the first that is"
    " not significantly worse was taken (Vergouwe and others 2017)."
)
_SAME_PEOPLE = (
    "Both in the people that the new version was updated to, in whom it looks better than it will in others. Only other"
    " people can show how good it is."
)
_NO_FILE = "No file was made of it."
_KEPT = "The model stays as it is: there is no new version, and no file was made."


def tell_update(
    model: Model, update: Update, package: Package | None, file: str, both: tuple[Validation, Validation | None]
) -> Iterator[Section]:
    """All sections of it; `both` are the validations of the model and of the new version, None where there is none."""
    yield Section("The update", tuple(_chosen(update)), whole=True)
    yield from (_tests(one, update) for one in _tested(update))
    yield from tell_estimates(model, update)
    before, after = both
    if after is not None:
        found = [(old, new) for old in before.horizons for new in after.horizons if old.span == new.span]
        for place, (old, new) in enumerate(found):
            yield _compare(old, new, "" if place else f"{_SAME_PEOPLE} ")
    yield _made(update, package, file)
    if update.remarks:
        yield Section("Remarks on the update", (Prose(update.remarks),))


def _chosen(update: Update) -> Iterator[Block]:
    facts = [
        Fact("Asked for", (METHOD_WORDS[update.wish.method],)),
        *(
            Fact(
                "Chosen" if len(update.equations) == 1 else f"Chosen for {one.id}",
                (METHOD_WORDS[one.method], f"{_by(one)} {one.people:,} people with {one.events:,} events in all"),
                strong=True,
            )
            for one in update.equations
        ),
    ]
    yield FactList(tuple(facts))
    if not update.keeps:
        yield Prose((_BASELINE,))


def _by(one: EquationUpdate) -> str:
    return "tested in" if one.method is UpdateMethod.KEEP else "from"


def _tested(update: Update) -> Iterator[EquationUpdate]:
    """The equations that were tested; with one testing for all together, the first stands for them."""
    tested = [one for one in update.equations if one.testing is not None]
    return iter(tested[:1] if update.wish.together else tested)


def _tests(one: EquationUpdate, update: Update) -> Section:
    testing = one.testing
    assert testing is not None
    several = len(update.equations) > 1 and not update.wish.together
    columns = (
        Column("fuller", 0.0, 160.0),
        Column("tested against", 166.0, 160.0),
        Column("chi²", 332.0, 46.0, at_end=True),
        Column("degrees of freedom", 384.0, 66.0, at_end=True),
        Column("p value", 456.0, 54.0, at_end=True),
    )
    rows = (
        Row(
            (
                _SHORT[test.fuller],
                _SHORT[test.simpler],
                figure_words(test.chi2),
                f"{test.df}",
                p_words(test.p),
            )
        )
        for test in testing.tests
    )
    said = [_CLOSED.format(alpha=f"{testing.alpha:g}"), f"Chosen: {_SHORT[testing.chosen]}. {_why(testing)}"]
    blocks: list[Block] = [Prose(tuple(said), keep=True), Table(columns, tuple(rows), small=True)]
    if testing.without_refit:
        blocks.append(Prose((f"A refit was not tested: {testing.without_refit.rstrip('.')}.",)))
    return Section(f"Why this way{f': {one.id}' if several else ''}", tuple(blocks), whole=True)


def _why(testing: Testing) -> str:
    """What the last of the tests that were made says about the choice."""
    for test in testing.tests:
        if test.simpler is testing.chosen:
            return f"{_begin(_SHORT[test.fuller])} is not significantly better (p {p_words(test.p)})."
    for test in reversed(testing.tests):
        if test.fuller is testing.chosen:
            return f"It is significantly better than {_SHORT[test.simpler]} (p {p_words(test.p)})."
    return ""


def _compare(old: HorizonValidation, new: HorizonValidation, said: str) -> Section:
    """Figures of both, and before them what is `said`."""
    columns = (
        Column("figure", 0.0, 156.0),
        Column(f"the model, 95{NARROW_SPACE}% limits", 162.0, 150.0, at_end=True),
        Column(f"the new version, 95{NARROW_SPACE}% limits", 318.0, 150.0, at_end=True),
    )
    rows = [Row(("Expected risk", share_of_all(old.expected, 2), share_of_all(new.expected, 2)))]
    rows += [
        Row((name, _figure(name, before), _figure(name, after)))
        for (name, before), (_, after) in zip(list_measures(old), list_measures(new), strict=True)
    ]
    at = "" if old.span is None else f", {old.span.words}"
    observed = Prose((f"{said}Observed risk: {share_of_all(old.observed.value, 2)}.",), keep=True)
    return Section(f"Old against new{at}", (observed, Table(columns, tuple(rows), small=True)), whole=True)


def _figure(name: str, measure: Measure) -> str:
    """With its limits in brackets; the score as it is scaled in percent, the mean calibration error in points."""
    if measure.value is None:
        return EN_DASH
    if name == MEAN_ERROR:
        return points_words(measure.value)
    if name == "Scaled Brier score":
        value, limits = share_of_all(measure.value), limits_words(measure, 1, percent=True)
    else:
        decimals = 4 if name == "Brier score" else 3
        value, limits = figure_words(measure.value, decimals), limits_words(measure, decimals)
    return f"{value}{'' if limits == EN_DASH else f' ({limits})'}"


def _made(update: Update, package: Package | None, file: str) -> Section:
    if package is None:
        return Section("The file", (Prose((_KEPT if update.keeps else _NO_FILE,)),), whole=True)
    content = package.content.model
    facts = [
        Fact("New version", (f"{content.title} {content.version}", f"id {content.id}"), strong=True),
        Fact("File", (file,)) if file else None,
        Fact("Fingerprint", (group_fingerprint(package.model.fingerprint),)),
        *_ancestry(package),
    ]
    vetting = Prose(("It is not vetted: until a practice has approved it, it gives no number for a patient.",))
    return Section("The file made of it", (FactList(tuple(fact for fact in facts if fact is not None)), vetting))


def _ancestry(package: Package) -> Iterator[Fact]:
    ancestry = package.content.model.ancestry
    if isinstance(ancestry, UnsetType):
        return
    yield Fact(
        "Updated from",
        (f"{ancestry.title} {ancestry.version}, id {ancestry.id}", group_fingerprint(ancestry.fingerprint)),
    )
    cohort = ancestry.cohort
    events = "" if isinstance(cohort.events, UnsetType) else f", {cohort.events:,} events"
    seen = [part for part in (cohort.from_, cohort.to) if not isinstance(part, UnsetType)]
    when = f"; {' to '.join(seen)}" if seen else ""
    yield Fact("Updated to", (cohort.words, f"{cohort.people:,} people{events}{when}"))
    yield Fact("In its own words", ancestry.figures)


def _begin(words: str) -> str:
    return f"{words[:1].upper()}{words[1:]}"

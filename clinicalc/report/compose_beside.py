"""The figures beside the number on a print: ruler and notes, comparison, shares, matching age, assumptions."""

from collections.abc import Iterator
from dataclasses import replace

from clinicalc.assessment.band_assumptions import band_assumptions
from clinicalc.assessment.result import Assessment, Estimate
from clinicalc.assessment.shown_figures import shown_probability
from clinicalc.report import phrases
from clinicalc.report.comparison_figure import Compared
from clinicalc.report.contents import ComparisonPart, Prose, RulerPart, Section, SharesPart
from clinicalc.report.matching_age_words import MATCHING_AGE_MEANING, say_matching_age
from clinicalc.report.on_the_ruler import axis_caption, compared_of, measure_assessment, walk_of
from clinicalc.report.parts import PrintParts, offered_parts
from clinicalc.report.phrases_comparison import comparison_sentences
from clinicalc.report.phrases_decision import decision_sentences
from clinicalc.report.phrases_spread import spread_meaning
from clinicalc.report.shares_figure import SHARES_MEANING, Walk

COMPARISON_HEADING, SHARES_HEADING = "Comparison", "Shares"
AGE_HEADING, ASSUMPTIONS_HEADING = "Matching age", "What the band assumes"
REBUILT_BELOW = f"Approximate, rebuilt from printed intervals: see “{ASSUMPTIONS_HEADING}”."
"""In the place of where the assumptions are listed, on a print that lists them itself."""


def compose_ruler(assessment: Assessment, parts: PrintParts) -> RulerPart | None:
    """The ruler of a number; none without one, so that nothing beside a stop looks like a number."""
    estimate, span = assessment.estimate, assessment.span
    if estimate is None or span is None:
        return None
    notes = (*_band_notes(assessment, estimate, parts), *_decision_notes(assessment, estimate))
    return RulerPart(measure_assessment(assessment), axis_caption(assessment), notes)


def compose_further(assessment: Assessment, parts: PrintParts) -> tuple[Section, ...]:
    """What stands after everything else for the clinician, as far as it was chosen and is there."""
    estimate, offered = assessment.estimate, offered_parts(assessment)
    if estimate is None:
        return ()
    sections: list[Section] = []
    compared = compared_of(assessment)
    if parts.comparison and offered.comparison and compared is not None:
        sections.append(_comparison(compared))
    if parts.shares:
        sections.append(_shares(estimate, walk_of(assessment), parts))
    if parts.matching_age and estimate.matching_age is not None:
        said = (say_matching_age(estimate.matching_age), MATCHING_AGE_MEANING)
        reference = () if parts.shares else _reference(estimate)
        sections.append(Section(AGE_HEADING, (Prose((" ".join(said), *reference)),), whole=True))
    assumed = band_assumptions(assessment)
    if parts.assumptions and assumed:
        sections.append(Section(ASSUMPTIONS_HEADING, (Prose(assumed),)))
    return tuple(sections)


def _band_notes(assessment: Assessment, estimate: Estimate, parts: PrintParts) -> Iterator[str]:
    """What band and spread say, in one paragraph; a spread of no width says that it is none."""
    if estimate.band is None:
        said = [f"No band: {estimate.band_absent_because}"]
    else:
        listed = parts.assumptions and offered_parts(assessment).assumptions
        basis = REBUILT_BELOW if listed else phrases.basis_words(estimate.band)
        said = [phrases.band_meaning(estimate), basis]
    if estimate.spread is not None:
        said.append(spread_meaning(estimate.spread))
    yield " ".join(said)


def _decision_notes(assessment: Assessment, estimate: Estimate) -> Iterator[str]:
    """On which side of each decision point the number lies, and how sure that is; in one paragraph where it is one."""
    said = decision_sentences(estimate.decision_points, shown_probability(assessment))
    yield from (" ".join(said),) if len(estimate.decision_points) == 1 else said


def _comparison(compared: Compared) -> Section:
    """The drawing, the sentences, and what is to be said about the changed values."""
    comparison = compared.comparison
    words = " ".join(comparison_sentences(comparison, compared.beside))
    about = (phrases.say_finding(finding) for finding in comparison.findings)
    return Section(COMPARISON_HEADING, (ComparisonPart(compared), Prose((words, *about))), whole=True)


def _shares(estimate: Estimate, walk: Walk | None, parts: PrintParts) -> Section:
    """The walk with the reference person in words, or why there is none; the matching age only where it is chosen."""
    if walk is None:
        because = f"No shares: {estimate.shares_absent_because}"
        return Section(SHARES_HEADING, (Prose((because,)),), whole=True)
    drawn = walk if parts.matching_age else replace(walk, patient="")
    words = " ".join((SHARES_MEANING, *_reference(estimate)))
    return Section(SHARES_HEADING, (SharesPart(drawn), Prose((words,))), whole=True)


def _reference(estimate: Estimate) -> tuple[str, ...]:
    return (f"Reference person: {estimate.reference_person}.",) if estimate.reference_person else ()

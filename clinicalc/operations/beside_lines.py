"""The figures beside the number as lines of text: spread, decision points, comparison, shares, matching age."""

from clinicalc.assessment.band_assumptions import band_assumptions
from clinicalc.assessment.numerals import percent
from clinicalc.assessment.result import Assessment
from clinicalc.assessment.shown_figures import shown_probability
from clinicalc.report.matching_age_words import MATCHING_AGE_MEANING, say_matching_age
from clinicalc.report.on_the_ruler import stated_points
from clinicalc.report.phrases import say_finding
from clinicalc.report.phrases_comparison import comparison_sentences
from clinicalc.report.phrases_decision import decision_sentences
from clinicalc.report.phrases_spread import spread_sentence
from clinicalc.report.shares_figure import share_words

SHARES_ON_LINK = "Shares on the model’s link scale; those with a plus raise the number, those with a minus lower it."


def spread_lines(assessment: Assessment) -> list[str]:
    """The re-measurement spread in one sentence; nothing where the file states no variation of these values."""
    estimate = assessment.estimate
    if estimate is None or estimate.spread is None:
        return []
    return [spread_sentence(estimate.spread, stated_points(estimate))]


def assumption_lines(assessment: Assessment) -> list[str]:
    """What a rebuilt band assumes, one assumption a line under their heading; nothing for any other band."""
    assumed = band_assumptions(assessment)
    return ["The band assumes:", *(f"- {assumption}" for assumption in assumed)] if assumed else []


def decision_lines(assessment: Assessment) -> list[str]:
    """The number's side of each decision point, and how sure the coefficients make that where it is known."""
    placed = () if assessment.estimate is None else assessment.estimate.decision_points
    return list(decision_sentences(placed, shown_probability(assessment)))


def comparison_lines(assessment: Assessment) -> list[str]:
    """The comparison, sentence by sentence; nothing where none was asked for or there is no number."""
    estimate = assessment.estimate
    if estimate is None or estimate.comparison is None:
        return []
    about = (say_finding(finding) for finding in estimate.comparison.findings)
    return [*comparison_sentences(estimate.comparison, stated_points(estimate)), *about]


def share_lines(assessment: Assessment, *, as_table: bool = True) -> list[str]:
    """Each value's share with the value itself, under the reference person.

    A table for a fixed pitch, which says why there are no shares; else one statement a line, none without shares.
    """
    estimate = assessment.estimate
    if estimate is None:
        return []
    shares, because = estimate.shares, estimate.shares_absent_because
    if shares is None:
        return [f"No shares: {because}"] if because and as_table else []
    start = percent(shares.reference_probability)
    head = [SHARES_ON_LINK, f"Reference person: {start}. {estimate.reference_person}."]
    rows = [(step.label, step.own, share_words(step.amount)) for step in shares.steps]
    if not rows:
        return [*head, "No value differs from the reference person’s."]
    if not as_table:
        return [*head, *(f"{label}{'' if label.endswith('?') else ':'} {own}, {share}" for label, own, share in rows)]
    labels, values, figures = (max(map(len, column)) for column in zip(*rows, strict=True))
    return [*head, *(f"{label:<{labels}}  {own:<{values}}  {share:>{figures}}" for label, own, share in rows)]


def matching_age_lines(assessment: Assessment) -> list[str]:
    """The matching age with what it does not say; nothing where nobody asked for it."""
    estimate = assessment.estimate
    if estimate is None or estimate.matching_age is None:
        return []
    return [say_matching_age(estimate.matching_age), MATCHING_AGE_MEANING]

"""What an approver chooses, and whether a file and a date allow it."""

from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from datetime import date

from clinicalc.coefficients.pointers import listed
from clinicalc.coefficients.schema import DecisionPoint, ModelContent, Unconfirmed
from clinicalc.errors import LibraryError, UsageError
from clinicalc.library.appointing import check_label
from clinicalc.library.records import Compared
from clinicalc.settings import MOST_POINTS, PracticePoint
from clinicalc.units.quoting import quote

MOST_YEARS = 5
"""The furthest review date, in years from today."""


@dataclass(frozen=True, slots=True)
class Choices:
    """What an approver decides. `fingerprint` is the whole one as typed, "" where none was."""

    reason: str
    review_until: date
    recalibration: str | None = None
    decision_points: tuple[DecisionPoint, ...] = ()
    compared: tuple[Compared, ...] = ()
    fingerprint: str = ""


def check_review(until: date, today: date) -> date:
    """The date of the next review. Raises UsageError where it is not ahead, or more than five years."""
    if until <= today:
        raise UsageError(f"the review date {until} is not in the future; today is {today}.", do="Give a later date.")
    try:
        furthest = today.replace(year=today.year + MOST_YEARS)
    except ValueError:  # 29 February
        furthest = today.replace(year=today.year + MOST_YEARS, day=28)
    if until > furthest:
        raise UsageError(
            f"the review date {until} is more than {MOST_YEARS} years ahead; the latest is {furthest}.",
            do="Give an earlier date. It can be extended when it has been reviewed.",
        )
    return until


def settle_comparisons(unconfirmed: Sequence[Unconfirmed], said: Iterable[Compared]) -> tuple[Compared, ...]:
    """Who compared each unconfirmed figure of a file, one entry for each place that the file names.

    What is said of a place holds for the places below it; of two the later one counts. Raises LibraryError with the
    figures that nobody compared, and UsageError for a place that the file does not name as unconfirmed.
    """
    told = tuple(Compared(one.at, check_label(one.by, "name of who compared it")) for one in said)
    places = list(dict.fromkeys(entry.at for entry in unconfirmed))
    for one in told:
        if not any(_covers(one.at, place) for place in places):
            named = listed(quote(place) for place in places)
            raise UsageError(
                f"{quote(one.at)} is no figure that this file calls unconfirmed.", why=f"It names {named}."
            )
    settled = {place: one for one in told for place in places if _covers(one.at, place)}
    open = [entry for entry in unconfirmed if entry.at not in settled]
    if open:
        raise LibraryError(
            f"{len(open)} of {len(unconfirmed)} figures that the file calls unconfirmed were compared by nobody: "
            f"{listed(entry.at or 'the whole model' for entry in open)}.",
            why=f"The first is to be compared with {open[0].check_against.rstrip('. ')}.",
            do=f'Have each compared with its source, and say who did: --compared "{open[0].at}=NAME".',
        )
    return tuple(Compared(place, settled[place].by) for place in places)


def check_recalibration(content: ModelContent, id: str | None) -> str | None:
    """The recalibration to be fixed. Raises UsageError for one that the file does not offer, or none where it must."""
    offered = tuple(dict.fromkeys(offer.id for offer in content.recalibrations))
    if id is not None and id not in offered:
        raise UsageError(
            f"{quote(id)} is not a recalibration of this file.",
            why=f"It offers {listed(offered)}." if offered else "It offers none.",
            do="Choose one of them with --recalibration." if offered else "Leave --recalibration out.",
        )
    if id is None and content.recalibration_required:
        raise UsageError(
            "this file gives no number without one of its recalibrations.",
            why=f"It offers {listed(offered)}.",
            do="Choose the practice’s with --recalibration.",
        )
    return id


def check_points(content: ModelContent, points: tuple[DecisionPoint, ...]) -> tuple[DecisionPoint, ...]:
    """The practice's decision points. Raises UsageError where one cannot be, stands twice, or they are too many."""
    if len(points) > MOST_POINTS:
        raise UsageError(f"{len(points)} decision points were given, and at most {MOST_POINTS} are kept.")
    for point in points:
        try:
            # as it will stand beside a number, at whichever horizon
            PracticePoint(content.id, 1.0, "a", point.probability, point.label, point.source)
        except UsageError as fault:
            raise UsageError(f"decision point {point.probability:g}: {fault.what}") from None
    if len({point.probability for point in points}) < len(points):
        raise UsageError("two of the decision points have the same probability.", do="Give each once.")
    return points


def _covers(above: str, place: str) -> bool:
    return place == above or place.startswith(f"{above}/")

"""What is said of whoever was not used: why nobody could be, and what a column of exclusions may tell wrongly."""

from collections.abc import Iterator, Mapping

from clinicalc.assessment.model import Model
from clinicalc.coefficients.pointers import listed, quoted
from clinicalc.cohort.checked import Column
from clinicalc.validation.plan import ExcludedPeople
from clinicalc.validation.suspected_units import suspect_refused
from clinicalc.validation.validated import PeopleCount

MOST_SHOWN = 4


def say_nobody(model: Model, columns: Mapping[str, Column], count: PeopleCount) -> str:
    """Where everybody in the file went, and what to look at."""
    where = [
        (sum(count.excluded.values()), "excluded by a question of the model"),
        (count.not_covered, "covered by none of its equations"),
        (count.no_outcome, "without an outcome"),
        (count.missing, f"without {_name(model, count.missing_by)}"),
        (count.refused, f"outside the limits of {_name(model, count.refused_by)}"),
    ]
    said = listed([f"{number:,} {words}" for number, words in where if number])
    doubts = [
        f" The column of {model.by_id[one.id].label} {one.words}."
        for one in suspect_refused(model, columns, count.refused_by)
    ]
    hint = "".join(doubts) or " Look at the columns named."
    return f"nobody can be used: of {count.in_file:,} people in the file {said}.{hint}"


def say_exclusions(exclusions: tuple[ExcludedPeople, ...]) -> Iterator[str]:
    """A sentence for each that may be told wrongly: whoever is not said to answer yes is taken to answer no."""
    for one in exclusions:
        if not one.yes.any():
            holds = listed([quoted(text) for text in one.texts[:MOST_SHOWN]]) or "nothing"
            more = " and others" if len(one.texts) > MOST_SHOWN else ""
            yes = listed([quoted(text) for text in one.means_yes], "or")
            yield (
                f"Nobody was left out by {one.id}: {yes}, which means yes, stands in no line of the column"
                f" {quoted(one.column)}. It holds {holds}{more}. If one of these means yes, say so: yes = … of {one.id}"
                " in exclusions."
            )
        if one.empty:
            yield (
                f"The column {quoted(one.column)} of {one.id} is empty in {one.empty:,} lines. These people were not"
                " left out: an empty cell was taken for a no."
            )


def _name(model: Model, by: Mapping[str, int]) -> str:
    return listed([model.by_id[id].label for id in by][:4], "or")

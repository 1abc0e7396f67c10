"""What a file says about the variation of repeated values within a person: one kind, the part below the whole."""

from collections.abc import Iterator

from msgspec import UnsetType

from clinicalc.coefficients.pointers import point, quoted
from clinicalc.coefficients.questions import WithinPerson
from clinicalc.errors import Problem


def check_within_person(within: WithinPerson, base: str) -> Iterator[Problem]:
    """Exactly one of SD and CV; the part within a visit of the same kind, and smaller. `base` is its JSON Pointer.

    That each is positive, and a CV less than 1, is part of the shape.
    """
    cv, sd = within.cv, within.sd
    part_cv, part_sd = within.within_visit_cv, within.within_visit_sd
    if isinstance(cv, UnsetType) == isinstance(sd, UnsetType):
        yield Problem(base, 'give exactly one of "cv" (a fraction) and "sd" (in the unit of the predictor).')
        return
    if not isinstance(part_cv, UnsetType) and not isinstance(part_sd, UnsetType):
        yield Problem(base, 'give at most one of "within_visit_cv" and "within_visit_sd", of the kind of the whole.')
        return
    kind, whole, part, other = (
        ("cv", cv, part_cv, part_sd) if isinstance(sd, UnsetType) else ("sd", sd, part_sd, part_cv)
    )
    named = f"within_visit_{kind}"
    if not isinstance(other, UnsetType):
        unlike = "within_visit_sd" if kind == "cv" else "within_visit_cv"
        yield Problem(
            point(base, unlike),
            f"the whole is given as {quoted(kind)}, so its part must be {quoted(named)}: convert it.",
        )
    elif not isinstance(part, UnsetType) and not isinstance(whole, UnsetType) and part >= whole:
        yield Problem(
            point(base, named),
            f"{quoted(part)} must be less than {quoted(whole)}, the whole {quoted(kind)} that it is a part of. Were the"
            " two exchanged? The whole is that of one reading at one visit, so it holds the variation within a visit.",
        )

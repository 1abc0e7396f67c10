"""What the methods of a fit came to, as parts of the study's JSON object: plain digits, shares from 0 to 1."""

from clinicalc.development.study_method_figures import (
    CompetingFigures,
    ImputationFigures,
    OptimismFigures,
    Penalty,
    PenaltyFigures,
)

Tree = dict[str, object]


def record_penalty(penalty: PenaltyFigures | None) -> Tree | None:
    """The penalty, None without one."""
    if penalty is None:
        return None
    return {
        "kind": str(penalty.kind),
        "strength": penalty.strength,
        "strengths_over_sets": None if penalty.over_sets is None else list(penalty.over_sets),
        "chosen": penalty.chosen,
        "effective_degrees": penalty.degrees if penalty.kind is Penalty.RIDGE else None,
        "mean_predicted": penalty.mean_predicted,
        "observed": penalty.observed,
    }


def record_imputation(imputed: ImputationFigures | None) -> Tree | None:
    """What was filled in, None where nothing was."""
    if imputed is None:
        return None
    return {
        "sets": imputed.sets,
        "rounds": imputed.rounds,
        "seed": imputed.seed,
        "filled": dict(imputed.filled),
        "not_filled": dict(imputed.not_filled),
        "terms": [
            {
                "term": one.term,
                # no number for without end in JSON
                "degrees": one.degrees if one.degrees < float("inf") else None,
                "missing_information": one.missing_information,
            }
            for one in imputed.terms
        ],
        "mixing": imputed.mixing,
        "worst": imputed.worst,
        "settled": imputed.settled,
    }


def record_optimism(found: OptimismFigures | None) -> Tree | None:
    """The bootstrap, None without one."""
    if found is None:
        return None
    return {
        "samples": found.replicates,
        "fitted": found.used,
        "seed": found.seed,
        "horizon": None if found.span is None else {"time": found.span.time, "unit": found.span.unit},
        "figures": [
            {
                "figure": str(one.statistic),
                "apparent": one.apparent,
                "optimism": one.optimism,
                "corrected": one.corrected,
            }
            for one in found.figures
        ],
        "lost": [{"code": one.code, "count": one.count, "terms": list(one.terms)} for one in found.lost],
    }


def record_incidence(one: CompetingFigures) -> Tree:
    """The share with the event at a horizon where other events come first."""
    return {
        "equation": one.equation,
        "time": one.span.time,
        "unit": one.span.unit,
        "incidence": one.incidence,
        "standard_error": one.se,
        "other": one.other,
        "censored": one.naive,
        "excess": one.excess,
    }

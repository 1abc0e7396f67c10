"""What is wrong with how equations of a study are to be fitted: kinds, covariances and outcomes that do not match."""

from collections.abc import Iterator, Mapping

from msgspec import UNSET

from clinicalc.coefficients.pointers import point, quoted, suggest
from clinicalc.cohort.cohort_tables import CohortTable, TimeToEventTable, spell_cells
from clinicalc.development.filling import find_said_twice
from clinicalc.development.fit import FitKind
from clinicalc.development.study_tables import EstimateTable
from clinicalc.development.study_terms import Tree, parts
from clinicalc.errors import Problem


def find_equation_problems(
    model: Mapping[str, object],
    tables: Mapping[str, EstimateTable],
    cohort: CohortTable | None,
    beside: Mapping[str, object],
) -> Iterator[Problem]:
    """Every such problem; `beside` is the tree of the tables that a description does not have."""
    equations = {str(equation.get("id")): equation for equation in parts(model, "equations")}
    stated = beside.get("estimate")
    stated = stated if isinstance(stated, dict) else {}
    for id in stated:
        if id not in equations:
            yield Problem(point("/estimate", id), f"there is no equation {quoted(id)}.{suggest(id, equations)}")
    clusters = {table.cluster for table in tables.values()} - {UNSET}
    for place, (id, equation) in enumerate(equations.items()):
        if id not in stated:
            yield Problem(
                point("/model/equations", place), f"there is no table [estimate.{id}] that says how to fit it."
            )
        if id not in tables:
            continue
        yield from find_said_twice(equation, FitKind(tables[id].kind), point("/model/equations", place))
        yield from _judge_table(tables[id], point("/estimate", id), len(clusters))
        if cohort is not None:
            yield from _judge_outcome(tables[id], cohort, equation, place)


def _judge_table(table: EstimateTable, path: str, clusters: int) -> Iterator[Problem]:
    if table.kind == "fine-gray":
        yield from _judge_subdistribution(table, path)
    elif table.kind != "cox":
        for name in ("ties", "strata", "round_times"):
            if getattr(table, name) is not UNSET:
                kinds = '"cox"' if name == "strata" else '"cox" and "fine-gray"'
                yield Problem(point(path, name), f"this is for kind = {kinds} only, and here stands {table.kind}.")
    yield from _judge_penalty(table, path)
    if (table.covariance == "cluster") != (table.cluster is not UNSET):
        yield Problem(
            path, 'covariance = "cluster" and cluster = "..." (a column of the file) are said together, or neither.'
        )
    elif clusters > 1 and table.cluster is not UNSET:
        yield Problem(point(path, "cluster"), "all equations of a study take the same column of clusters.")


def _judge_outcome(table: EstimateTable, cohort: CohortTable, equation: Tree, place: int) -> Iterator[Problem]:
    timed, needs_time = isinstance(cohort.outcome, TimeToEventTable), table.kind in ("cox", "fine-gray")
    if not needs_time and len(parts(equation, "horizons")) > 1:
        yield Problem(
            point("/model/equations", place, "horizons"), f"a {table.kind} fit has one horizon, and several stand here."
        )
    path = point("/estimate", str(equation.get("id")), "kind")
    if needs_time and not timed:
        name = "Cox" if table.kind == "cox" else "Fine–Gray"
        yield Problem(path, f'a {name} fit needs a time: outcome = {{kind = "time_to_event", ...}} in [cohort].')
    elif timed and not needs_time:
        yield Problem(
            path,
            f'a {table.kind} fit needs an outcome known of everybody, outcome = {{kind = "binary", ...}}; with times '
            'say kind = "cox" or "fine-gray", because people whose follow-up ended early are neither with nor without '
            "the event.",
        )
    if isinstance(cohort.outcome, TimeToEventTable) and table.kind == "fine-gray":
        yield from _judge_competing(cohort.outcome, path)
    elif isinstance(cohort.outcome, TimeToEventTable) and spell_cells(cohort.outcome.competing):
        stated = equation.get("competing_events")
        if isinstance(stated, dict) and stated.get("handled") == "not_applicable":
            yield Problem(
                point("/model/equations", place, "competing_events", "handled"),
                "the cohort names competing events, and a Cox fit takes them as censored: say "
                'competing_events = {handled = "censored", which = "..."}. Its probability is then that of a world '
                "without them, which is higher than the share of people who will have the event. If that share is "
                'wanted, fit kind = "fine-gray".',
            )


def _judge_subdistribution(table: EstimateTable, path: str) -> Iterator[Problem]:
    """What a Fine–Gray fit cannot have."""
    if table.covariance == "model":
        yield Problem(
            point(path, "covariance"),
            "the inverse of the information is no covariance of a Fine–Gray fit, because somebody with a competing "
            'event counts on with a weight. Say "robust" or "cluster", or leave it out, which means "robust".',
        )
    if table.strata is not UNSET:
        yield Problem(
            point(path, "strata"),
            "a Fine–Gray fit has one baseline here. Make this a term, or give each answer an equation of its own with "
            "applies_when.",
        )


def _judge_penalty(table: EstimateTable, path: str) -> Iterator[Problem]:
    """What stands beside a penalty that it cannot have, or without one."""
    if table.ridge_strength is not UNSET and table.penalty != "ridge":
        yield Problem(point(path, "ridge_strength"), 'this is for penalty = "ridge" only. Say so, or leave it out.')
    if table.penalty == "firth" and table.kind != "logistic":
        other = ' A Cox fit can have penalty = "ridge".' if table.kind == "cox" else ""
        yield Problem(
            point(path, "penalty"),
            f'Firth\'s penalty is for kind = "logistic" only, and here stands {table.kind}.{other}',
        )
    elif table.penalty == "ridge" and table.kind not in ("logistic", "cox"):
        yield Problem(
            point(path, "penalty"), f'a ridge is for kind = "logistic" and "cox" only, and here stands {table.kind}.'
        )
    elif table.penalty == "firth" and table.covariance_kind != "model":
        yield Problem(
            point(path, "covariance"),
            "with Firth's penalty the covariance is the inverse of the information, because a robust one is far too "
            'small where a coefficient rests on a few people. Say "model", or leave it out.',
        )


def _judge_competing(outcome: TimeToEventTable, path: str) -> Iterator[Problem]:
    """What a Fine–Gray fit needs of the outcome."""
    if not spell_cells(outcome.competing):
        yield Problem(
            path,
            "a Fine–Gray fit needs competing events, and the outcome in [cohort] names none: say competing = [...], "
            'what stands for them in the column of the status. If there are none, say kind = "cox".',
        )
    if outcome.entry is not UNSET:
        yield Problem(
            "/cohort/outcome/entry",
            "a Fine–Gray fit is made here from people who are all watched from time nought, and a column of late entry "
            'stands here. Leave it out if all were, or say kind = "cox".',
        )

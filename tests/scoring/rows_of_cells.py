"""Models and rows of cells to be scored, and what `assess` says of each row: the reference of this room's tests."""

import json
from collections.abc import Mapping
from dataclasses import dataclass, field
from functools import cache

import msgspec
import numpy as np
from hypothesis import strategies as st

from clinicalc.assessment.assess import assess
from clinicalc.assessment.entry import PatientEntry, Typed
from clinicalc.assessment.fields import Field, NumberField, QuestionField
from clinicalc.assessment.model import Model, prepare_model
from clinicalc.coefficients.schema import ModelContent
from clinicalc.coefficients.spans import Span
from clinicalc.resources import list_example_models, read_shipped
from clinicalc.scoring.finding_sets import codes_of
from clinicalc.scoring.said_once import is_said_once
from clinicalc.scoring.score_rows import Scorer
from clinicalc.scoring.scored import ScoredBlock
from clinicalc.units.fitting import usual_in
from tests.assessment.cases import NOW, shipped
from tests.coefficients.tiny_model import Tree, changed, read_of, tiny_cloglog_model, tiny_logit_model

MISSING = ("NA", "99999")

UNUSED: Tree = {
    "id": "non_hdl",
    "label": "Non-HDL cholesterol",
    "quantity": "non_hdl_cholesterol",
    "unit": "mg/dL",
    "equation": "non_hdl_cholesterol",
    "inputs": {"total_cholesterol": "total_cholesterol", "hdl_cholesterol": "hdl_cholesterol"},
    "may_be_typed": True,
    "group": "Blood tests",
}
"""A value that no equation uses: it is worked out only to be set beside a typed one."""

Row = tuple[frozenset[str], frozenset[str], frozenset[str], str, float | None, float | None, float | None]
"""Stops, cautions, notes, equation, probability, lower, upper."""


@dataclass(frozen=True, slots=True)
class Run:
    """What holds for all rows of one scoring."""

    model: Model
    span: Span | None
    recalibration: str | None
    level: float
    units: Mapping[str, str] = field(default_factory=dict)

    def scorer(self) -> Scorer:
        """A new scorer."""
        return Scorer(
            self.model,
            span=self.span,
            recalibration=self.recalibration,
            level=self.level,
            units=self.units,
            missing=MISSING,
            at=NOW,
        )


def _variant(id: str, *changes: tuple[str, object]) -> Model:
    """A shipped file with something in it changed, without asking the rules."""
    tree: Tree = changed(json.loads(read_shipped(f"example_models/{id}.json")), *changes)
    return prepare_model(read_of(msgspec.convert(tree["model"], ModelContent), f"{id}.json"))


def unsure(id: str, *paths: str) -> Model:
    """A shipped file of which nothing but the figures at these paths is unconfirmed."""
    listed = [{"at": path, "why": "Invented.", "check_against": "nothing"} for path in paths]
    return _variant(id, ("/model/unconfirmed", listed))


@cache
def models() -> tuple[Model, ...]:
    """The shipped files, two tiny ones, and variants for what no shipped file has."""
    lipids, base = "general-cvd-2008-lipids", "total-cvd-2024-base"
    imprecise = {
        "id": "east",
        "label": "East",
        "source": "invented",
        "years": 10,
        "equations": {
            "women": {"intercept": 0.1, "slope": 0.9, "covariance": None},
            "men": {"intercept": -0.1, "slope": 1.1, "covariance": [[0.01, 0.001], [0.001, 0.02]]},
        },
    }
    return (
        *(shipped(name.removesuffix(".json")) for name in list_example_models()),
        prepare_model(read_of(tiny_logit_model())),
        prepare_model(read_of(tiny_cloglog_model())),
        _variant(lipids, ("/model/recalibrations", [imprecise])),
        _variant("tarnwick-cvd-10y-cox", ("/model/equations/0/uncertainty", _draws(12))),
        unsure(base, "/predictors/2/factor", "/predictors/3/factor"),
        unsure(base, "/predictors/1/choices/1", "/equations/0/terms/12/coefficient", "/derived/0"),
        unsure("diabetes-2007-clinical", "/derived/0", "/equations/0/terms/4"),
        _variant("diabetes-2007-clinical", ("/model/derived/0/possible", [22, 36])),
        _variant(lipids, ("/model/derived", [UNUSED])),
    )


def _draws(terms: int) -> Tree:
    draw = np.random.default_rng(5)
    return {
        "basis": "draws",
        "coefficients": (0.02 * draw.standard_normal((300, terms))).tolist(),
        "baselines": (-3 + 0.1 * draw.standard_normal((300, 1))).tolist(),
    }


def one_by_one(run: Run, cells: Mapping[str, list[str]]) -> list[Row]:
    """What `assess` gives for each row, without what is said once."""
    once = run.scorer().said_once
    rows = []
    for place in range(len(next(iter(cells.values())))):
        texts = {id: column[place] for id, column in cells.items()}
        typed = {id: Typed("" if text.strip() in MISSING else text, run.units.get(id)) for id, text in texts.items()}
        result = assess(
            run.model,
            PatientEntry(typed),
            span=run.span,
            recalibration=run.recalibration,
            level=run.level,
            at=NOW,
            number_only=True,
        )
        said = codes_of(finding for finding in result.findings if not is_said_once(finding, once))
        estimate = result.estimate
        band = None if estimate is None else estimate.band
        stops, cautions, notes = (
            frozenset(code.text for code in said if code.grade == grade) for grade in ("stop", "caution", "note")
        )
        rows.append(
            (
                stops,
                cautions,
                notes,
                result.equation or "",
                None if estimate is None else estimate.probability,
                None if band is None else band.lower,
                None if band is None else band.upper,
            )
        )
    return rows


def rows_of(block: ScoredBlock) -> list[Row]:
    """The rows of a block in the same form."""
    texts = zip(block.stops, block.cautions, block.notes, strict=True)
    numbers = zip(block.probability.tolist(), block.lower.tolist(), block.upper.tolist(), strict=True)
    return [
        (
            frozenset(stops.split()),
            frozenset(cautions.split()),
            frozenset(notes.split()),
            equation,
            *(None if figure != figure else figure for figure in figures),
        )
        for (stops, cautions, notes), equation, figures in zip(texts, block.equation_ids, numbers, strict=True)
    ]


@st.composite
def runs(draw: st.DrawFn) -> Run:
    """A model with a horizon, a recalibration, a level and units of columns."""
    model = draw(st.sampled_from(models()))
    span = draw(st.sampled_from(model.spans))
    offered: list[str | None] = [offer.id for offer in model.recalibrations_at(span)]
    recalibration = draw(st.sampled_from(offered if model.content.recalibration_required else [None, *offered]))
    numbers = [one for one in model.fields if isinstance(one, NumberField) and not one.quantity.no_conversion]
    units = {one.id: draw(st.sampled_from(one.quantity.units)) for one in numbers if draw(st.integers(0, 4)) == 0}
    return Run(model, span, recalibration, draw(st.sampled_from([0.95, 0.9, 0.99])), units)


@st.composite
def cells_for(draw: st.DrawFn, run: Run, *, most: int = 8) -> dict[str, list[str]]:
    """Rows of cells: most columns there, most cells plain, some odd."""
    odd = draw(st.sampled_from([0, 1, 3]))
    size = draw(st.integers(1, most))
    cells = {}
    for one in run.model.fields:
        rarely = isinstance(one, NumberField) and one.formula is not None
        if draw(st.integers(0, 1 if rarely else 30)) == 0:
            continue
        cell = _cell(one, run.units.get(one.id), odd + 2 * rarely)
        cells[one.id] = draw(st.lists(cell, min_size=size, max_size=size))
    return cells or {run.model.fields[0].id: ["no"] * size}


def _cell(one: Field, unit: str | None, odd: int) -> st.SearchStrategy[str]:
    plain = _plain_answer(one) if isinstance(one, QuestionField) else _plain_number(one, unit)
    strange = _odd_answer(one) if isinstance(one, QuestionField) else _odd_number(one, unit)
    return st.one_of(*[plain] * 12, *[strange] * odd)


def _plain_answer(one: QuestionField) -> st.SearchStrategy[str]:
    return st.just("no") if one.excludes else st.sampled_from([option.id for option in one.options])


def _odd_answer(one: QuestionField) -> st.SearchStrategy[str]:
    texts = [
        "",
        " ",
        "NA",
        "unknown",
        "Not Measured",
        "maybe",
        "1",
        *(f" {option.label.upper()}" for option in one.options),
    ]
    return st.sampled_from(texts)


def _plain_number(one: NumberField, unit: str | None) -> st.SearchStrategy[str]:
    usual = None if unit is None else usual_in(one.quantity, unit, one.factor)
    low, high = one.usual if usual is None else (usual.low, usual.high)
    values = st.floats(0.0 if low is None else low, 100.0 if high is None else high)
    return st.builds(lambda value, decimals: f"{value:.{decimals}f}", values, st.sampled_from([0, 0, 1, 2]))


def _odd_number(one: NumberField, unit: str | None) -> st.SearchStrategy[str]:
    plain = _plain_number(one, unit)
    ends = [end for limits in (one.possible, one.usual, one.derivation) for end in limits if end is not None]
    near = st.builds(
        lambda end, by: f"{end + by:.3f}".rstrip("0").rstrip("."), st.sampled_from(ends or [1.0]), st.floats(-1, 1)
    )
    return st.one_of(
        st.sampled_from(["", "NA", "99999", "unknown", "abc", "1e5", "<5", "1,234", "−5", "0", "30", "40", "70", "71"]),
        st.sampled_from([f"{end:g}" for end in ends] or ["1"]),
        near,
        plain.map(lambda text: text.replace(".", ",")),
        plain.map(lambda text: f"  {text} of 2 visits on 2025-01-02"),
        plain.map(lambda text: f"{text} on 2027-01-01"),
        st.builds(lambda text, code: f"{text} {code}", plain, st.sampled_from(one.quantity.units)),
        st.floats(-10, 1000).map(lambda value: f"{value:.2f}"),
    )

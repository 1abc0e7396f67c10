"""The figures of a fit that its documentation states, as plain values: nothing here knows how they were found."""

from dataclasses import dataclass

from clinicalc.estimation.sample_size import R2Origin, SampleSize


@dataclass(frozen=True, slots=True)
class StatedFollowUp:
    """The median follow-up in `unit` (words: "years"), and how it was worked out, such as "reverse Kaplan–Meier"."""

    median: float
    unit: str
    method: str


@dataclass(frozen=True, slots=True)
class StatedConcordance:
    """A C statistic in the people of the fit, with its limits at `level`; not corrected for optimism."""

    value: float
    lower: float
    upper: float
    level: float = 0.95


@dataclass(frozen=True, slots=True)
class MinimumSize:
    """The smallest sample by Riley and others (2019), and where its R2 comes from."""

    size: SampleSize
    origin: R2Origin


@dataclass(frozen=True, slots=True)
class MissingShare:
    """How many of those asked about have no value of a predictor, which is named as a reader knows it."""

    label: str
    people: int


@dataclass(frozen=True, slots=True)
class StatedFilling:
    """Missing values filled in by multiple imputation: `filled` and `not_filled` (left out for it) by predictor.

    `mixing` is the largest ratio of Gelman and Rubin, of the predictor `worst`; `settled` says that it will do.
    """

    sets: int
    rounds: int
    seed: int
    filled: tuple[MissingShare, ...]
    not_filled: tuple[MissingShare, ...]
    mixing: float
    worst: str
    settled: bool


@dataclass(frozen=True, slots=True)
class StatedFigure:
    """A figure of performance by its name: in the people of the fit, its optimism, and corrected for it."""

    name: str
    apparent: float
    optimism: float
    corrected: float


@dataclass(frozen=True, slots=True)
class StatedOptimism:
    """Internal validation: samples drawn and used, why others could not be fitted, figures (none where too few).

    With `few_events` for each coefficient the corrected figures are likely still too good.
    """

    samples: int
    used: int
    seed: int
    figures: tuple[StatedFigure, ...]
    lost: tuple[str, ...]
    few_events: bool = False


@dataclass(frozen=True, slots=True)
class StatedIncidence:
    """By a horizon ("10 years"): the share with the event, its standard error, another event first, and one minus
    Kaplan-Meier, which takes the others as censored."""

    horizon: str
    share: float
    se: float
    other: float
    censored: float


@dataclass(frozen=True, slots=True)
class StatedMean:
    """The mean of the predictions in the people of the fit, and the share of them who had the event."""

    predicted: float
    observed: float


@dataclass(frozen=True, slots=True)
class StatedSlope:
    """The calibration slope in the people of the fit; `is_exact` where maximum likelihood makes it 1 by itself."""

    value: float
    is_exact: bool


@dataclass(frozen=True, slots=True)
class StatedFit:
    """One equation's fit.

    `equation` is its label, "" where the model has only one. `people`, `events` and `competing` (None where the outcome
    has no competing events) count those used; `left_out` those to whom the equation applies but who were not used,
    `missing` counts among both together. `method` says in words how it was fitted, `software` by what, with versions.
    What is None was not worked out.
    """

    equation: str
    people: int
    events: int
    parameters: int
    left_out: int
    missing: tuple[MissingShare, ...]
    method: str
    software: tuple[tuple[str, str], ...]
    competing: int | None = None
    follow_up: StatedFollowUp | None = None
    concordance: StatedConcordance | None = None
    calibration_slope: StatedSlope | None = None
    minimum: MinimumSize | None = None
    filling: StatedFilling | None = None
    optimism: StatedOptimism | None = None
    incidences: tuple[StatedIncidence, ...] = ()
    mean: StatedMean | None = None

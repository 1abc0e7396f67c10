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
    calibration_slope: float | None = None
    minimum: MinimumSize | None = None

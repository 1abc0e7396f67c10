"""Missing values filled in several times by chained equations: each column in turn from all others, round after round.

van Buuren, Flexible Imputation of Missing Data, 2nd ed. 2018, ch. 4; White, Royston & Wood, Stat Med 2011;30:377. Each
set is the end of a chain of its own, from values drawn at random among those known, so that the chains can be compared.
Draws belong to the seed and the number of the chain: whatever is done before or beside, a set comes out the same.

statsmodels' MICEData is not used: it takes the same drawn coefficients for donors and for those who get (with one
column beside, donors then never change), among people alike in everything always the same donors, and a normal model
for answers of yes and no.
"""

from collections.abc import Callable, Sequence
from dataclasses import dataclass, field

import numpy as np
from numpy.random import Generator
from numpy.typing import NDArray

from clinicalc.estimation.filled_column import draw_answers, draw_numbers, split_scaled
from clinicalc.estimation.mixing import find_mixing

Array = NDArray[np.float64]
Mask = NDArray[np.bool_]

SETTLED = 1.1
"""Ratio of Gelman and Rubin up to which chains are taken to have mixed (Gelman & others, Bayesian Data Analysis)."""
EXTENSIONS = 2
"""How often the rounds are run once more where they have not."""


@dataclass(frozen=True, slots=True, eq=False)
class ChainColumn:
    """A column of the imputation, (n,), NaN where it is to be filled in; `answers` are 1 and 0.

    `products` are pairs of places of other columns whose products tell of this one too.
    """

    values: Array
    answers: bool = False
    products: tuple[tuple[int, int], ...] = ()


@dataclass(frozen=True, slots=True)
class ChainPlan:
    """How many sets, after how many rounds, from which seed."""

    sets: int
    rounds: int
    seed: int


@dataclass(frozen=True, slots=True, eq=False)
class FilledIn:
    """The values filled in: for each set the columns that had gaps, whole, by place.

    `mixing` is the ratio of Gelman & Rubin of each of them, by place, after `rounds` rounds.
    """

    sets: tuple[dict[int, Array], ...]
    rounds: int
    mixing: dict[int, float]

    @property
    def settled(self) -> bool:
        """Whether all chains have mixed."""
        return all(ratio <= SETTLED for ratio in self.mixing.values())


Tell = Callable[[int, int], None]
"""Told before each round of each chain how many are done, of how many; it may raise to stop the work."""


def fill_in(columns: Sequence[ChainColumn], plan: ChainPlan, tell: Tell) -> FilledIn:
    """The sets; `columns` in which something is missing have been found to be fit for it (find_unfillable).

    Where chains have not mixed after the rounds asked for, as many are run again, twice at most.
    """
    order = _order(columns)
    chains = [_begin(columns, order, np.random.default_rng((plan.seed, number))) for number in range(plan.sets)]
    rounds = 0
    mixing: dict[int, float] = {}
    for _ in range(1 + EXTENSIONS):
        for _ in range(plan.rounds):
            for number, chain in enumerate(chains):
                tell(rounds * plan.sets + number, max(rounds + 1, plan.rounds) * plan.sets)
                _go_round(chain, columns, order)
            rounds += 1
        mixing = {place: _mixing_of(chains, place, columns[place].answers) for place in order}
        if all(ratio <= SETTLED for ratio in mixing.values()):
            break
    filled = tuple({place: chain.table[:, place].copy() for place in order} for chain in chains)
    return FilledIn(filled, rounds, mixing)


@dataclass(slots=True, eq=False)
class _Chain:
    """One chain: the table as it is filled now, and the mean and SD of what was filled in each round, by column."""

    table: Array
    rng: Generator
    starts: dict[int, Array] = field(default_factory=dict)
    means: dict[int, list[float]] = field(default_factory=dict)
    spreads: dict[int, list[float]] = field(default_factory=dict)


def _order(columns: Sequence[ChainColumn]) -> tuple[int, ...]:
    """Places of the columns with gaps, those with the fewest first."""
    counts = {place: int(np.isnan(column.values).sum()) for place, column in enumerate(columns)}
    return tuple(sorted((place for place, count in counts.items() if count), key=lambda place: counts[place]))


def _begin(columns: Sequence[ChainColumn], order: tuple[int, ...], rng: Generator) -> _Chain:
    table = np.asfortranarray(np.column_stack([column.values for column in columns]))
    for place in order:
        lacks = np.isnan(columns[place].values)
        table[lacks, place] = rng.choice(columns[place].values[~lacks], int(lacks.sum()))
    return _Chain(table, rng)


def _go_round(chain: _Chain, columns: Sequence[ChainColumn], order: tuple[int, ...]) -> None:
    for place in order:
        column = columns[place]
        lacks = np.isnan(column.values)
        halves = split_scaled(_beside(chain.table, place, column.products), lacks)
        known = column.values[~lacks]
        if column.answers:
            start = chain.starts.get(place, np.zeros(halves.known.shape[1] + 1))
            drawn, chain.starts[place] = draw_answers(known, halves, start, chain.rng)
        else:
            drawn = draw_numbers(known, halves, chain.rng)
        chain.table[lacks, place] = drawn
        chain.means.setdefault(place, []).append(float(drawn.mean()))
        chain.spreads.setdefault(place, []).append(float(drawn.std()))


def _beside(table: Array, place: int, products: tuple[tuple[int, int], ...]) -> Array:
    """What tells of a column: all others, and the products asked for."""
    others = [table[:, other] for other in range(table.shape[1]) if other != place]
    return np.column_stack([*others, *(table[:, one] * table[:, two] for one, two in products)])


def _mixing_of(chains: Sequence[_Chain], place: int, answers: bool) -> float:
    """The larger ratio of the two of what was filled in, its mean and its SD; of answers the mean says both."""
    ratio = find_mixing(np.array([chain.means[place] for chain in chains]))
    return ratio if answers else max(ratio, find_mixing(np.array([chain.spreads[place] for chain in chains])))

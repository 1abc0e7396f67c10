"""Re-measurement spread of one value, against quadrature and the delta method of other software."""

import math
from statistics import NormalDist

import pytest

from clinicalc.assessment.proof import load_model_bytes
from tests.assessment.one_equation import BMI, HDL, SBP, SCORE, file_with, g, spread, x
from tests.assessment.whole_case import case_of
from tests.coefficients.tiny_model import Tree

Z = NormalDist().inv_cdf(0.975)

# one mismeasured value, by quadrature and by the delta method with a central difference: numpy 2.4.6, scipy 1.17.1,
# Python 3.11; plug-in risk, sd of the linear predictor (delta), 95 % band (delta), band from the risks at x -+ 1.96 sd.
# The last figure is how far the two bands lie apart, relative to the larger end.
NONLINEAR = [
    (
        "logit", SBP, [(0.02, [x({"subtract": 120})])], -3.0, "140", 8.0, 0.06913842034334682, 0.16000000009341875,
        (0.051485628153085584, 0.092255105339176), (0.05148562816202712, 0.09225510532384265), 1e-9,
    ),
    (
        "logit", SBP, [(1.9, [x({"divide": 120}, {"log": "natural"})])], -2.6, "150", 10.0, 0.10192400066026602,
        0.1266666669330618, (0.08133916521440335, 0.12699815091699898), (0.08001991884792192, 0.125351843023686), 0.017,
    ),
    (
        "cloglog", HDL, [(0.6, [x({"divide": 2}, {"log": "natural"})])], -2.4, "1.1", 0.12, 0.0614075895732148,
        0.06545454545570095, (0.05421849808391148, 0.06951437643012925), (0.05337876603152087, 0.06871250481280437),
        0.016,
    ),
    (
        "logit", BMI, [(0.06, [x({"subtract": 25})]), (0.004, [x({"subtract": 25}, {"power": 2})])], -2.8, "25.5", 1.5,
        0.05902252784862789, 0.09600000004938991, (0.04939936122946634, 0.07038152519013409),
        (0.05104840875976495, 0.07267744795911768), 0.033,
    ),
]  # fmt: skip


@pytest.mark.parametrize(
    ("link", "predictor", "terms", "lp0", "typed", "sd", "plug_in", "link_sd", "band", "ends", "apart"), NONLINEAR
)
def test_one_value_through_transforms(
    link: str, predictor: Tree, terms: list[tuple[float, list[Tree]]], lp0: float, typed: str, sd: float,
    plug_in: float, link_sd: float, band: tuple[float, float], ends: tuple[float, float], apart: float,
) -> None:  # fmt: skip
    data = file_with(
        [predictor | {"within_person": {"sd": sd, "source": "invented"}}], terms, lp0, link=link,
        example=({"x": typed}, plug_in),
    )  # fmt: skip
    found = spread(case_of(load_model_bytes(data, "nonlinear.json"), {"x": typed}))
    assert found.link_sd == pytest.approx(link_sd, rel=4e-9)  # what the reference's own difference is good for
    assert (found.lower, found.upper) == pytest.approx(band, rel=2e-9)
    (part,) = found.parts
    assert (part.field, part.label, part.sd, part.source) == ("x", predictor["label"], sd, "invented")
    assert part.link_sd == found.link_sd
    # for a value that enters alone and monotonically the risks at x -+ 1.96 sd are the exact band: say how far off
    distance = max(abs(one - other) / other for one, other in zip((found.lower, found.upper), ends, strict=True))
    assert distance == pytest.approx(apart, abs=max(1e-9, 0.05 * apart))


# normal error on the link scale: numpy 2.4.6, scipy 1.17.1; link, linear predictor, its standard error from the
# coefficients, sd from measurement, plug-in risk, 95 % band of the measurement alone and of both, independent
LINK_NORMAL = [
    (
        "logit", -2.5, 0.12, 0.25, 0.07585818002124355,
        (0.04788010031281016, 0.11815603964662158),
        (0.04549829147579888, 0.12384791780289303),
    ),
    (
        "logit", -6.0, 0.5, 0.3, 0.0024726231566347743,
        (0.0013749126816929138, 0.0044428308176473735),
        (0.0007898750748263696, 0.0077126229509871394),
    ),
    (
        "logit", 0.4, 0.2, 0.2, 0.598687660112452,
        (0.502001790077561, 0.6882590624760697),
        (0.4614860613936021, 0.7219914704003184),
    ),
    (
        "logit", 3.5, 0.4, 0.6, 0.9706877692486436,
        (0.9108470542710713, 0.990769588663393),
        (0.8895988294550115, 0.9927057659270012),
    ),
    (
        "cloglog", -2.3, 0.08, 0.2, 0.09539676314038573,
        (0.06550200829010819, 0.1378929041916547),
        (0.06361700320929033, 0.14180550090568028),
    ),
    (
        "cloglog", -7.0, 0.6, 0.4, 0.0009114663275421669,
        (0.00041626280210906605, 0.0019951963056361295),
        (0.00022186065142799498, 0.0037405483270321017),
    ),
    (
        "cloglog", 0.9, 0.15, 0.3, 0.9145311341240541,
        (0.7449178053794361, 0.9880638342741389),
        (0.7204485754639363, 0.9913173279720798),
    ),
]  # fmt: skip


@pytest.mark.parametrize(("link", "lp", "se", "sd", "plug_in", "measurement", "combined"), LINK_NORMAL)
def test_normal_error_on_the_link_scale(
    link: str, lp: float, se: float, sd: float, plug_in: float, measurement: tuple[float, float],
    combined: tuple[float, float],
) -> None:  # fmt: skip
    precision = {
        "basis": "covariance",
        "covariance": [[1e-4]],
        "at_centre": [{"years": 10, "variance": se * se, "centre": [lp]}],
        "lower": g(link, lp - Z * se),
        "upper": g(link, lp + Z * se),
    }
    data = file_with(
        [SCORE | {"within_person": {"sd": sd, "source": "invented"}}], [(1.0, [x()])], 0.0, link=link,
        uncertainty=precision, example=({"x": str(lp)}, plug_in),
    )  # fmt: skip
    case = case_of(load_model_bytes(data, "normal.json"), {"x": str(lp)})
    found = spread(case)
    assert (found.lower, found.upper) == pytest.approx(measurement, rel=1e-9)
    band = case.predict_with({}, band=True)
    assert band.eta_upper is not None
    own = float(band.eta_upper[0] - band.eta[0]) / Z
    both = Z * math.sqrt(own * own + found.link_sd * found.link_sd)
    assert (g(link, lp - both), g(link, lp + both)) == pytest.approx(combined, rel=1e-9)

"""An update as one JSON object, for programs that run the command."""

from clinicalc.validation.updated import EquationUpdate, Refit, Testing, Update

Tree = dict[str, object]


def record_update(updated: Update) -> Tree:
    """What was asked for and what each equation became, with the tests that chose it."""
    return {
        "method": str(updated.wish.method),
        "keeps": updated.keeps,
        "people": updated.people,
        "events": updated.events,
        "equations": [_equation(one) for one in updated.equations],
        "remarks": list(updated.remarks),
    }


def _equation(one: EquationUpdate) -> Tree:
    return {
        "id": one.id,
        "method": str(one.method),
        "people": one.people,
        "events": one.events,
        "competing": one.competing,
        "slope": one.slope,
        "slope_standard_error": one.slope_se,
        "lines": [
            {
                "time": line.span.time,
                "unit": line.span.unit,
                "intercept": line.intercept,
                "slope": line.slope,
                "covariance": list(line.covariance),
            }
            for line in one.lines
        ],
        "refit": None if one.refit is None else _refit(one.refit),
        "testing": None if one.testing is None else _testing(one.testing),
    }


def _refit(refit: Refit) -> Tree:
    return {
        "terms": list(refit.terms),
        "coefficients": [float(value) for value in refit.coefficients],
        "covariance": [[float(value) for value in row] for row in refit.covariance],
        "shrinkage": None if refit.shrinkage is None else refit.shrinkage.factor,
    }


def _testing(testing: Testing) -> Tree:
    return {
        "alpha": testing.alpha,
        "chosen": str(testing.chosen),
        "without_refit": testing.without_refit,
        "tests": [
            {
                "fuller": str(test.fuller),
                "simpler": str(test.simpler),
                "chi2": test.chi2,
                "df": test.df,
                "p": test.p,
            }
            for test in testing.tests
        ],
    }

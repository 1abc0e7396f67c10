"""Studies that were fitted wrongly without a word, or refused without saying why: each says so now."""

from pathlib import Path
from typing import Any

import numpy as np
import pytest

from clinicalc.errors import DescriptionRefused
from tests.development.describing import Tree
from tests.development.studying import plain_study, run_study, timed, write_people, write_study

COX = {"kind": "cox"}
PEOPLE = 200


def people(**more: Any) -> dict[str, Any]:
    """Drawn people with a number x, a time in days and a status."""
    rng = np.random.default_rng(11)
    x = np.round(rng.normal(50, 10, PEOPLE))
    event = np.ceil(rng.exponential(900 * np.exp(-0.03 * (x - 50))))
    end = np.ceil(rng.uniform(400, 2000, PEOPLE))
    return {"x": x, "time": np.minimum(event, end), "status": (event <= end).astype(np.int64)} | more


def study(folder: Path, columns: dict[str, Any], tree: Tree) -> Path:
    """The study and its people in that folder."""
    write_people(folder / "people.csv", columns)
    return write_study(folder, tree)


def refusal(path: Path) -> str:
    """All that is said against a study."""
    with pytest.raises(DescriptionRefused) as refused:
        run_study(path)
    return "\n".join(f"{problem.path}: {problem.message}" for problem in refused.value.problems)


def test_an_event_before_time_zero_stops_a_fit_with_entries(tmp_path: Path) -> None:
    columns = people(entry=np.zeros(PEOPLE))
    columns["entry"][3], columns["time"][3], columns["status"][3] = -500.0, -300.0, 1
    said = refusal(study(tmp_path, columns, plain_study(["x"], timed(entry="entry"), COX)))
    assert 'Column "time": a time of −300 cannot be, in line 5; times are above zero' in said


def test_entries_at_or_before_time_zero_are_no_late_entries(tmp_path: Path) -> None:
    columns = people()
    plain = run_study(study(tmp_path, columns, plain_study(["x"], timed(), COX)))
    columns["entry"] = np.where(np.arange(PEOPLE) < 5, -7.0, 0.0)
    entered = run_study(study(tmp_path, columns, plain_study(["x"], timed(entry="entry"), COX)))
    assert entered.data == plain.data
    assert not any("after time nought" in remark for remark in entered.remarks)


@pytest.mark.parametrize(
    ("column", "said"),
    [
        (
            {"levels": {"a": "1", "b": "1", "c": "2"}},
            'cohort.columns.site.levels.b: "1" stands for "a" as well. Each text means one thing.',
        ),
        (
            {"levels": {"a": "1", "b": "2", "c": "X"}, "missing": ["9", "x"]},
            'cohort.columns.site.levels.c: "X" is named under missing as well. Each text means one thing.',
        ),
    ],
)
def test_a_text_that_means_two_things_is_refused(tmp_path: Path, column: Tree, said: str) -> None:
    choices = [{"id": id, "label": id.upper()} for id in "abc"]
    site = {"id": "site", "label": "Site", "kind": "choice", "group": "Values", "choices": choices}
    terms = [{"id": "x", "product": [{"of": "x"}]}, {"id": "b", "product": [{"of": "site", "steps": [{"is": ["b"]}]}]}]
    tree = plain_study(["x", site], timed(), COX, terms=terms)
    tree["cohort"]["columns"] = {"site": column}
    columns = people(site=np.where(np.arange(PEOPLE) % 3 == 0, "1", "2"))
    assert refusal(study(tmp_path, columns, tree)) == said


@pytest.mark.parametrize(
    ("outcome", "said"),
    [
        (timed("a"), "once times are rounded, a time is 0 or below. Say more decimals in round_times"),
        (timed("a", entry="entry"), "once times are rounded, somebody enters at or after the time at which he leaves."),
    ],
)
def test_rounding_that_leaves_no_time_is_named(tmp_path: Path, outcome: Tree, said: str) -> None:
    columns = people()
    columns["time"] = columns["time"] / 365.25
    columns["entry"] = np.where(np.arange(PEOPLE) < 5, columns["time"] * 0.9, 0.0)
    tree = plain_study(["x"], outcome, COX | {"round_times": 0}, horizons=[{"years": 2}])
    assert said in refusal(study(tmp_path, columns, tree))


def missing_data(path: Path) -> list[tuple[str, str]]:
    """What the file says about missing data: the names of the items and their texts."""
    items = run_study(path).content.model.documentation
    return [(item.item, item.text) for item in items if item.item.startswith("missing data")]


def two_equations(**more: Any) -> Tree:
    """A study of women and men apart, whose file has the sex of each."""
    choices = [{"id": "female", "label": "Female"}, {"id": "male", "label": "Male"}]
    sex = {"id": "sex", "label": "Sex", "kind": "choice", "group": "Values", "choices": choices}
    tree = plain_study(["x", sex], timed(), COX, terms=[{"id": "x", "product": [{"of": "x"}]}], **more)
    each = tree["equations"][0]
    tree["equations"] = [{**each, "id": id, "applies_when": {"sex": [id]}} for id in ("female", "male")]
    return tree | {"estimate": {"female": COX, "male": COX}}


def test_people_of_no_equation_are_in_the_documentation(tmp_path: Path) -> None:
    columns = people(sex=np.where(np.arange(PEOPLE) % 2 == 0, "female", "male").astype(object))
    columns["sex"][:3] = ""
    said = "3 more people are in no fit, of 200: what decides which equation applies is missing."
    assert missing_data(study(tmp_path, columns, two_equations())) == [
        ("missing data", "female: None. male: None."),
        ("missing data", said),
    ]
    answer = [{"item": "Missing data", "text": "Few."}]
    assert missing_data(study(tmp_path, columns, two_equations(documentation=answer))) == [
        ("missing data (figures of the fit)", "female: None. male: None."),
        ("missing data (figures of the fit)", said),
    ]


def test_an_outcome_that_is_missing_is_in_the_documentation(tmp_path: Path) -> None:
    columns = people()
    columns["status"] = columns["status"].astype(object)
    columns["status"][:4] = ""
    assert missing_data(study(tmp_path, columns, plain_study(["x"], timed(), COX))) == [
        (
            "missing data",
            "4 people of 200 were left out; only complete cases were used. Missing: the outcome 4 (2.0\u202f%).",
        )
    ]


def test_an_event_among_very_few_who_came_early_is_told(tmp_path: Path) -> None:
    columns = people(entry=np.full(PEOPLE, 30.0))
    columns["time"] = columns["time"] + 31.0
    columns["entry"][:2], columns["time"][0], columns["status"][0] = 0.0, 20.0, 1
    tree = plain_study(["x"], timed(entry="entry"), COX)
    told = [one for one in run_study(study(tmp_path, columns, tree)).remarks if "under observation at" in one]
    assert len(told) == 1
    assert told[0].startswith("all: only 2 people were under observation at 20 days, when somebody had the event.")
    columns["time"][0] = 300.0
    assert not any("under observation at" in one for one in run_study(study(tmp_path, columns, tree)).remarks)


def test_counts_of_the_study_that_are_not_those_of_the_fit_are_told(tmp_path: Path) -> None:
    horizons = [{"years": 1, "people": PEOPLE, "events": 3}]
    tree = plain_study(["x"], timed(), COX, horizons=horizons)
    tree["source"]["derivation"] = {"people": 205}
    package = run_study(study(tmp_path, people(), tree))
    told = [one for one in package.remarks if "which is kept" in one]
    assert [one.split(", which")[0] for one in told] == [
        "source, derivation: the study says people = 205",
        "all, 1 year: the study says events = 3",
    ]
    assert "and the fit has 200." in told[0]

"""The model of a study's draft: what a file of people suggests, its terms, and how it is fitted."""

import re
import unicodedata
from collections.abc import Mapping
from copy import deepcopy
from dataclasses import dataclass

from clinicalc.cohort.dictionary import ColumnEntry
from clinicalc.units.table import quantity_table

Tree = dict[str, object]
EQUATION = "all"
"""The id of the one equation that a draft has from the beginning."""
_NOT_ID = re.compile(r"[^a-z0-9]+")
_YES_NO = frozenset({"yes", "no"})
FIT_FIELDS = ("kind", "ties", "covariance", "cluster", "penalty", "ridge_strength")
"""What is said of a fit in one form, so that what is left out there is gone."""
_ONLY_OF = {"strata": ("cox",), "round_times": ("cox", "fine-gray")}
_ANY = ("cox", "fine-gray", "logistic", "cloglog")
_NO_OTHERS = "not_applicable"


@dataclass(frozen=True, slots=True)
class About:
    """What a person has to say of a model, in texts that the file holds."""

    title: str = ""
    outcome: str = ""
    plain: str = ""
    population: str = ""
    setting: str = ""
    caution: str = ""
    citation: str = ""


def make_id(text: str, *, dash: str = "_") -> str:
    """An id out of any text: small letters and digits, the first a letter."""
    letters = unicodedata.normalize("NFKD", text.casefold())
    plain = "".join(letter for letter in letters if not unicodedata.combining(letter))
    made = _NOT_ID.sub(dash, plain).strip(dash)[:60]
    return made if made[:1].isalpha() else f"x{dash}{made}".rstrip(dash)


def begin_model(name: str, *, is_timed: bool) -> Tree:
    """The tree of a model of which nothing is known but the name of the file of people."""
    equation: Tree = {"id": EQUATION, "competing_events": {"handled": _NO_OTHERS}}
    equation["horizons"] = [{"years": 5}] if is_timed else [{"time": 90, "unit": "d"}]
    equation["terms"] = []
    return {
        "id": make_id(name, dash="-"),
        "version": "0.1.0",
        "title": "",
        "outcome": "",
        "source": {"kind": "local", "citation": ""},
        "use": {
            "population": "",
            "setting": "",
            "not_for": [],
            "not_used": [],
            "cautions": [],
            "plain": {"outcome": "", "cautions": []},
        },
        "predictors": [],
        "equations": [equation],
        "estimate": {EQUATION: {"kind": "cox" if is_timed else "logistic"}},
    }


def predictor_of(entry: ColumnEntry) -> Tree:
    """The table of a predictor as a column suggests it."""
    label = entry.column.replace("_", " ").strip() or entry.predictor
    made: Tree = {"id": entry.predictor, "label": f"{label[:1].upper()}{label[1:]}"[:120]}
    answers = tuple(dict.fromkeys(id for id, _ in entry.levels))
    if answers:
        is_yes_no = set(answers) <= _YES_NO
        made |= {"kind": "yes_no" if is_yes_no else "choice", "group": "Answers"}
        if not is_yes_no:
            made["choices"] = [{"id": id, "label": id.replace("_", " ").capitalize()} for id in answers]
        return made
    known = {row.id: row for row in quantity_table().quantities}
    quantity = known.get(entry.predictor)
    if quantity is None:
        return made | {"kind": "number", "quantity": "number", "unit": "1", "group": "Values"}
    unit = entry.unit if entry.unit in quantity.units else quantity.unit
    return made | {"label": quantity.label, "kind": "number", "quantity": quantity.id, "unit": unit, "group": "Values"}


def about_of(tree: Mapping[str, object]) -> About:
    """What the tree says of the model."""
    use, plain = _table(tree, "use"), _table(tree, "use", "plain")
    cautions = use.get("cautions")
    return About(
        title=_text(tree.get("title")),
        outcome=_text(tree.get("outcome")),
        plain=_text(plain.get("outcome")),
        population=_text(use.get("population")),
        setting=_text(use.get("setting")),
        caution=_text(cautions[0]) if isinstance(cautions, list) and cautions else "",
        citation=_text(_table(tree, "source").get("citation")),
    )


def with_about(tree: Tree, about: About) -> Tree:
    """The tree with other texts; what it says beside them stays."""
    made = deepcopy(tree)
    made["title"], made["outcome"] = about.title, about.outcome
    source, use = made.setdefault("source", {}), made.setdefault("use", {})
    assert isinstance(source, dict)
    assert isinstance(use, dict)
    source["citation"] = about.citation
    use["population"], use["setting"] = about.population, about.setting
    cautions = use.setdefault("cautions", [])
    use["cautions"] = [*([about.caution] if about.caution else []), *cautions[1:]]
    use.setdefault("plain", {"cautions": []})["outcome"] = about.plain
    return made


def answers_of(tree: Mapping[str, object]) -> tuple[tuple[str, str], ...]:
    """The items of the documentation that the tree answers, with the answers."""
    found = tree.get("documentation")
    listed = [one for one in found if isinstance(one, dict)] if isinstance(found, list) else []
    return tuple((_text(one.get("item")), _text(one.get("text"))) for one in listed)


def with_answer(tree: Tree, item: str, text: str) -> Tree:
    """The tree with another answer to an item, in the place of the one before or at the end; without one for ""."""
    made = deepcopy(tree)
    answers = dict(answers_of(tree)) | {item: text}
    made["documentation"] = [{"item": name, "text": said} for name, said in answers.items() if said]
    return made


def terms_of(tree: Mapping[str, object], equation: int = 0) -> list[object]:
    """The terms of an equation."""
    equations = tree.get("equations")
    found = equations[equation] if isinstance(equations, list) and equation < len(equations) else {}
    terms = found.get("terms") if isinstance(found, dict) else None
    return list(terms) if isinstance(terms, list) else []


def with_terms(tree: Tree, terms: list[object], equation: int = 0) -> Tree:
    """The tree with other terms of an equation."""
    made = deepcopy(tree)
    equations = made["equations"]
    assert isinstance(equations, list)
    equations[equation]["terms"] = terms
    return made


def which_competes(tree: Mapping[str, object], equation: int = 0) -> str:
    """What the competing events of an equation are, in words; "" where there are none."""
    equations = tree.get("equations")
    found = equations[equation] if isinstance(equations, list) and equation < len(equations) else {}
    return _text(_table(found, "competing_events").get("which")) if isinstance(found, dict) else ""


def with_competing(tree: Tree, which: str) -> Tree:
    """The tree with competing events handled in every equation as its kind of fit does; none for ""."""
    made = deepcopy(tree)
    equations = made.get("equations")
    for equation in equations if isinstance(equations, list) else []:
        handled: Tree = {"handled": _handled(made, equation), "which": which} if which else {"handled": _NO_OTHERS}
        equation["competing_events"] = handled
    return made


def equation_of(tree: Mapping[str, object], equation: int = 0) -> Tree:
    """An equation as the tree has it, empty where there is none; to be read only."""
    equations = tree.get("equations")
    found = equations[equation] if isinstance(equations, list) and equation < len(equations) else {}
    return dict(found) if isinstance(found, dict) else {}


def fit_of(tree: Mapping[str, object], equation: int = 0) -> Tree:
    """How the tree has an equation fitted; to be read only."""
    return _table(tree, "estimate", str(equation_of(tree, equation).get("id", "")))


def with_fit(tree: Tree, estimate: Tree, horizons: list[object], equation: int = 0) -> Tree:
    """The tree with another way of fitting an equation, and other horizons; competing events follow the kind of it.

    What `estimate` does not speak of stays: strata and rounded times, unless they are for another kind of fit.
    """
    made = deepcopy(tree)
    equations = made["equations"]
    assert isinstance(equations, list)
    before = fit_of(tree, equation)
    kept = {name: before[name] for name in before if name not in FIT_FIELDS}
    kept = {name: value for name, value in kept.items() if estimate.get("kind") in _ONLY_OF.get(name, _ANY)}
    equations[equation]["horizons"] = horizons
    estimates = made.setdefault("estimate", {})
    assert isinstance(estimates, dict)
    estimates[str(equations[equation]["id"])] = {**estimate, **kept}
    stated = equations[equation].get("competing_events")
    if isinstance(stated, dict) and stated.get("handled") != _NO_OTHERS:
        equations[equation]["competing_events"] = {**stated, "handled": _handled(made, equations[equation])}
    return made


def _handled(tree: Tree, equation: Mapping[str, object]) -> str:
    """How the fit of an equation handles competing events."""
    kind = _table(tree, "estimate", str(equation.get("id", ""))).get("kind")
    return "subdistribution" if kind == "fine-gray" else "censored"


def _table(tree: Mapping[str, object], *path: str) -> Tree:
    found: object = tree
    for key in path:
        found = found.get(key) if isinstance(found, Mapping) else None
    return dict(found) if isinstance(found, Mapping) else {}


def _text(value: object) -> str:
    return value if isinstance(value, str) else ""

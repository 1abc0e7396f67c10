"""Random bytes, random JSON and random damage never leave the error tree; random valid models read back the same."""

import json
from typing import Any

import jsonschema_rs
import msgspec
from hypothesis import given, settings
from hypothesis import strategies as st

from clinicalc.coefficients.json_schema import schema_document
from clinicalc.coefficients.pointers import REFUSED_CHARACTERS
from clinicalc.coefficients.reader import ReadFile, read_bytes
from clinicalc.coefficients.schema import ModelContent
from clinicalc.coefficients.shape import find_shape_problems
from clinicalc.coefficients.strict_json import parse
from clinicalc.coefficients.writer import write_bytes
from clinicalc.errors import CoefficientFileRefused
from tests.coefficients.tiny_model import DROP, Tree, changed, file_of, tiny_cloglog_model, tiny_logit_model, tree_of

LOGIT = tree_of(tiny_logit_model())
CLOGLOG = tree_of(tiny_cloglog_model())
VALIDATOR = jsonschema_rs.validator_for(schema_document())

LEAVES = st.one_of(
    st.none(),
    st.booleans(),
    st.integers(),
    st.floats(),
    st.text(max_size=20),
    st.sampled_from(["age", "sex", "female", "yes", "logit", "number", "10", "", "1", "mg/dL", "\ud800", "\u202e"]),
)
KEYS = st.text(st.characters(exclude_characters="/"), max_size=8)  # places are named by pointers here
JSON = st.recursive(
    LEAVES,
    lambda inner: st.lists(inner, max_size=4) | st.dictionaries(KEYS, inner, max_size=4),
    max_leaves=20,
)


def read_or_refuse(data: bytes) -> ReadFile | None:
    try:
        return read_bytes(data, "random.json")
    except CoefficientFileRefused as refused:
        problems = refused.problems
    assert problems
    for problem in problems:
        assert problem.message.endswith((".", "?"))
        str(problem).encode("utf-8")  # can be shown anywhere
    return None


def check_identity(read: ReadFile) -> None:
    again = read_bytes(write_bytes(read.content), read.name)
    assert again == read
    assert write_bytes(again.content) == write_bytes(read.content)


def pointers_into(tree: object, base: str = "") -> list[str]:
    """Every place of a tree but the top."""
    members: list[tuple[object, object]] = (
        list(tree.items()) if isinstance(tree, dict) else list(enumerate(tree)) if isinstance(tree, list) else []
    )
    found = []
    for name, value in members:
        found += [f"{base}/{name}", *pointers_into(value, f"{base}/{name}")]
    return found


@given(st.binary(max_size=300))
@settings(max_examples=300, deadline=None)
def test_random_bytes(data: bytes) -> None:
    assert read_or_refuse(data) is None


@given(st.integers(0, 3000), st.binary(min_size=1, max_size=4))
@settings(max_examples=200, deadline=None)
def test_bytes_damaged_in_one_place(place: int, damage: bytes) -> None:
    data = write_bytes(file_of(tiny_logit_model()))
    read = read_or_refuse(data[:place] + damage + data[place + len(damage) :])
    if read is not None:
        check_identity(read)


@given(JSON)
@settings(max_examples=200, deadline=None)
def test_random_json(value: object) -> None:
    data = json.dumps(value).encode()
    assert read_or_refuse(data) is None
    assert read_or_refuse(json.dumps({"format": "x", "model": value, "signatures": []}).encode()) is None


@st.composite
def damaged(draw: st.DrawFn) -> Tree:
    """A valid file in which one to three places are taken away, put in the place of others, or made something else."""
    tree = draw(st.sampled_from([LOGIT, CLOGLOG]))
    for _ in range(draw(st.integers(1, 3))):
        places = pointers_into(tree)
        target, other = draw(st.sampled_from(places)), draw(st.sampled_from(places))
        deed = draw(st.sampled_from(["drop", "replace", "copy"]))
        value: Any = DROP
        if deed == "replace":
            value = draw(JSON)
        elif deed == "copy":
            value = _at(tree, other)
        tree = changed(tree, (target, value))
    return tree


def _at(tree: Any, pointer: str) -> Any:
    for part in pointer.split("/")[1:]:
        tree = tree[int(part)] if isinstance(tree, list) else tree[part]
    return tree


@given(damaged())
@settings(max_examples=500, deadline=None)
def test_random_damage_to_a_valid_file(tree: Tree) -> None:
    read = read_or_refuse(json.dumps(tree).encode())
    if read is not None:
        check_identity(read)


@given(damaged())
@settings(max_examples=300, deadline=None)
def test_the_walk_over_the_shape_agrees_with_msgspec_and_with_the_json_schema(tree: Tree) -> None:
    parsed = parse(json.dumps(tree).encode())
    if parsed.problems:
        return
    ours = not list(find_shape_problems(parsed.value))
    try:
        msgspec.json.decode(json.dumps(tree["model"]).encode(), type=ModelContent) if "model" in tree else None
        theirs = True
    except msgspec.ValidationError:
        theirs = False
    if not theirs:
        assert not ours
    assert ours == VALIDATOR.is_valid(parsed.value)


NAMES = st.from_regex(r"[a-z][a-z0-9_-]{0,12}", fullmatch=True).filter(
    lambda name: name not in ("yes", "no", "sex", "age")
)
LABELS = st.text(st.characters(codec="utf-8", exclude_categories=("C", "Z")), min_size=1, max_size=30).filter(
    lambda text: not REFUSED_CHARACTERS.search(text)
)
NUMBERS = st.floats(-1e9, 1e9).filter(bool)


@st.composite
def valid_models(draw: st.DrawFn) -> Tree:
    """A logistic file with random questions and numbers, terms, steps, texts, horizons and band."""
    names = draw(st.lists(NAMES, min_size=1, max_size=5, unique=True))
    predictors: list[Tree] = []
    factors: list[Tree] = []
    for name in names:
        common = {"id": name, "label": f"{name} {draw(LABELS)}", "group": draw(LABELS)}  # no two alike
        if draw(st.booleans()):
            predictors.append({**common, "kind": "yes_no", "modifiable": draw(st.booleans())})
            factors.append({"of": name, "steps": [{"is": [draw(st.sampled_from(["yes", "no"]))]}]})
        else:
            low, high = sorted(draw(st.lists(st.floats(0.1, 1e6), min_size=2, max_size=2, unique=True)))
            predictors.append({**common, "kind": "number", "quantity": "number", "unit": "1", "possible": [low, high]})
            step = draw(
                st.sampled_from(["subtract", "divide", "multiply", "above", "from", "below", "up_to", "clip_low"])
            )
            factors.append({"of": name, "steps": [{"log": "natural"}, {step: draw(NUMBERS)}]})
    terms = [
        {"id": f"t{place}", "coefficient": draw(NUMBERS), "product": [factor], "fixed": draw(st.booleans())}
        for place, factor in enumerate(factors)
    ]
    size = sum(not term["fixed"] for term in terms)
    years = draw(st.lists(st.integers(1, 90), min_size=1, max_size=3, unique=True))
    band: Tree = {"basis": "none", "because": draw(LABELS)}
    if size and draw(st.booleans()):
        scales = draw(st.lists(st.floats(1e-6, 1e3), min_size=size, max_size=size))
        band = {
            "basis": draw(st.sampled_from(["covariance", "robust", "reconstructed"])),
            "covariance": [[0.3 * one * other for other in scales] for one in scales],
            "at_centre": [{"years": year, "variance": draw(st.floats(0, 9)), "centre": scales} for year in years],
        }
        for place, scale in enumerate(scales):
            band["covariance"][place][place] = scale * scale
    limits = {} if band["basis"] == "none" else {"lower": 0.1, "upper": 0.9}
    example = {"values": {}, "years": years[0], "probability": 0.5, "tolerance": 0.01, "source": draw(LABELS), **limits}
    equation = {
        **LOGIT["model"]["equations"][0],
        "terms": terms,
        "horizons": [{"years": year, "intercept": year / 7} for year in years],
        "uncertainty": band,
    }
    del equation["reference_person"]
    return changed(
        LOGIT,
        ("/model/predictors", predictors),
        ("/model/exclusions", []),
        ("/model/equations", [equation]),
        ("/model/worked_examples", [example]),
        ("/model/outcome", draw(LABELS)),
    )


@given(valid_models())
@settings(max_examples=200, deadline=None)
def test_random_valid_models_read_and_write_as_the_same(tree: Tree) -> None:
    read = read_bytes(json.dumps(tree).encode(), "random.json")
    assert read.content.model == msgspec.convert(tree["model"], ModelContent)
    check_identity(read)
    assert VALIDATOR.is_valid(tree)

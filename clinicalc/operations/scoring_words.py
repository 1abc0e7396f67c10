"""What is said of a table that was scored, in lines and as one JSON object."""

from collections import Counter
from collections.abc import Iterator

from clinicalc.assessment.model import Model
from clinicalc.coefficients.fingerprint import group_fingerprint
from clinicalc.operations.folding import fold
from clinicalc.report import phrases
from clinicalc.scoring.score_file import FileScore

_STOP_WORDS = {
    "missing": "no value",
    "unreadable": "cannot be read",
    "unknown_answer": "not one of the answers",
    "wrong_unit": "a unit that does not belong to it",
    "impossible": "not possible",
    "outside_derivation": "outside what the model was made from",
    "excluded": "answered yes: the model does not answer",
    "cross_check": "contradicts another value",
    "not_computable": "cannot be worked out",
    "future_date": "dated after today",
    "not_measured": "said not to be measured, and may not be",
}


def tell_scoring(model: Model, score: FileScore) -> Iterator[str]:
    """The lines after a run: what was scored by what, how many rows have a number, and why the others have none."""
    tally = score.tally
    yield f"{model.content.title}, version {model.content.version}"
    yield f"Fingerprint {group_fingerprint(model.fingerprint, 3)}"
    yield f"{phrases.vetting_words(None)}."
    yield ""
    yield from fold(f"{score.told}{_tell_blank(score.blank)}")
    yield f"{_count(tally.rows, 'row')} scored into {score.out}; {tally.with_number:,} with a number."
    if score.went_on_after is not None:
        yield f"The first {_count(score.went_on_after, 'row')} had been scored by the run that was stopped."
    labels = {field.id: field.label for field in model.fields}
    yield from _tell_counts("No number", tally.stops, labels, _STOP_WORDS)
    yield from _tell_counts("With a caution", tally.cautions, labels, {})
    if score.without:
        named = ", ".join(score.without)
        yield from fold(f"No column holds {named}: unanswered in every row.")
    for finding in score.once.findings:
        yield from fold(phrases.say_finding(finding))


def record_scoring(model: Model, score: FileScore) -> dict[str, object]:
    """The same as plain values; `vetting` is null, as of every file that was opened by its name."""
    return {
        "model": {
            "id": model.content.id,
            "version": model.content.version,
            "title": model.content.title,
            "fingerprint": model.fingerprint,
        },
        "vetting": None,
        "out": str(score.out),
        "rows": score.tally.rows,
        "with_number": score.tally.with_number,
        "stops": dict(score.tally.stops.most_common()),
        "cautions": dict(score.tally.cautions.most_common()),
        "empty_lines": score.blank,
        "went_on_after": score.went_on_after,
        "unanswered": list(score.without),
        "findings": [
            {"grade": one.grade.value, "code": one.code.value, "field": one.field or None, "message": one.message}
            for one in score.once.findings
        ],
    }


def _tell_counts(head: str, counts: Counter[str], labels: dict[str, str], words: dict[str, str]) -> Iterator[str]:
    if not counts:
        return
    yield f"{head}, by reason (a row may have several):"
    width = len(f"{max(counts.values()):,}")
    for code, count in sorted(counts.items(), key=lambda one: (-one[1], one[0])):
        kind, _, field = code.partition(":")
        label = labels.get(field, "")
        mark = "" if label.endswith("?") else ":"
        named = f"{label}{mark} {words.get(kind, kind.replace('_', ' '))}" if label else code
        yield f"  {count:>{width},}  {named}" if named == code else f"  {count:>{width},}  {named} ({code})"


def _count(number: int, noun: str) -> str:
    return f"{number:,} {noun}" if number == 1 else f"{number:,} {noun}s"


def _tell_blank(lines: int) -> str:
    if not lines:
        return ""
    return f" {_count(lines, 'empty line')} {'was' if lines == 1 else 'were'} left out."

"""A term is added to the equation: a value as it is, transformed, a spline, categories, or a product of two."""

from enum import Enum

from clinicalc.errors import UsageError
from clinicalc.gui.errands import Errands
from clinicalc.gui.form import Form
from clinicalc.gui.form_deed import FormDeed, refuse_at
from clinicalc.gui.form_fields import TextField
from clinicalc.operations.study_draft import StudyDraft, changed
from clinicalc.operations.study_draft_model import Tree, terms_of, with_terms


class TermKind(Enum):
    """What a term makes of a value."""

    LINEAR = "as it is"
    LOG = "natural logarithm"
    POWER = "a power"
    SPLINE = "restricted cubic spline"
    CATEGORIES = "one term for each answer"
    PRODUCT = "product of two values"


_SHOWN = {
    TermKind.LINEAR: ("subtract", "divide"),
    TermKind.LOG: (),
    TermKind.POWER: ("power",),
    TermKind.SPLINE: ("knots",),
    TermKind.CATEGORIES: ("reference",),
    TermKind.PRODUCT: ("second",),
}


class TermDeed(FormDeed):
    """`done` has the StudyDraft with one term more."""

    def __init__(self, draft: StudyDraft, errands: Errands) -> None:
        form = Form("Add a term", "It stands after the others, and its coefficient is estimated.", "&Add")
        found = draft.tree.get("predictors")
        self._predictors: list[Tree] = list(found) if isinstance(found, list) else []
        values = [(str(one.get("label") or one.get("id")), str(one.get("id"))) for one in self._predictors]
        self.of = form.add_choice("&Value", values or [("there are none yet", None)])
        self.kind = form.add_choice("&Enters", [(kind.value, kind.name) for kind in TermKind])
        self.subtract = form.add_text(
            "&Less", says="Such as 60, so that 60 counts as nought; may be left empty.", width=120
        )
        self.divide = form.add_text("&Per", says="Such as 10, for a coefficient per 10; may be left empty.", width=120)
        self.power = form.add_text("E&xponent", says="Such as 2, 0.5 or -1.", width=120)
        self.knots = form.add_text(
            "&Knots",
            says="How many, at the default quantiles of the people; or where, parted by commas.",
        )
        self.reference = form.add_choice("&Reference", [("–", None)])
        self.second = form.add_choice("&Times", values or [("there are none yet", None)])
        self.id = form.add_text("&Name", says="Small letters, digits and _; may be left empty.", longest=64)
        self.knots.edit.setText("4")
        super().__init__(form, errands)
        self._draft = draft
        self.kind.chooser.currentIndexChanged.connect(lambda _: self._arrange())
        self.of.chooser.currentIndexChanged.connect(lambda _: self._arrange())
        self._arrange()

    def begin(self) -> None:
        """Put the term into the draft."""
        of = self.of.chooser.currentData()
        if of is None:
            refuse_at(
                UsageError("no column of the file is a value yet.", do="Say so on the step Data."), self.of.chooser
            )
        term = self._term(str(of), TermKind[self.kind.chooser.currentData()])
        terms = [*terms_of(self._draft.tree), term]
        self.done.emit(changed(self._draft, with_terms(self._draft.tree, terms)))

    def _term(self, of: str, kind: TermKind) -> Tree:
        if kind is TermKind.SPLINE:
            return {"spline_of": of, "knots": self._knots()}
        if kind is TermKind.CATEGORIES:
            if self.reference.chooser.currentData() is None:
                numbers = UsageError(f"{of} is no choice.", do="Choose how its value enters otherwise.")
                refuse_at(numbers, self.kind.chooser)
            return {"categories_of": of, "reference": self.reference.chooser.currentData()}
        name = self.id.text
        if kind is TermKind.PRODUCT:
            second = str(self.second.chooser.currentData())
            return {"id": name or f"{of}_by_{second}", "product": [{"of": of}, {"of": second}]}
        steps = self._steps(kind)
        return {"id": name or of, "product": [{"of": of, **({"steps": steps} if steps else {})}]}

    def _steps(self, kind: TermKind) -> list[Tree]:
        if kind is TermKind.LOG:
            return [{"log": "natural"}]
        if kind is TermKind.POWER:
            return [{"power": _number(self.power, needed=True)}]
        made: list[Tree] = []
        for name, field in (("subtract", self.subtract), ("divide", self.divide)):
            number = _number(field)
            if number is not None:
                made.append({name: number})
        return made

    def _knots(self) -> object:
        parts = [part.strip() for part in self.knots.text.split(",") if part.strip()]
        try:
            numbers = [float(part) for part in parts]
        except ValueError:
            numbers = []
        if not numbers:
            what = UsageError("no knots are given.", do="Give how many, such as 4, or where, such as 45, 55, 65, 75.")
            refuse_at(what, self.knots.edit)
        return int(numbers[0]) if len(numbers) == 1 else numbers

    def _arrange(self) -> None:
        """Show the fields that the kind has, and the answers of the value."""
        kind = TermKind[self.kind.chooser.currentData()]
        fields = {
            "subtract": self.subtract,
            "divide": self.divide,
            "power": self.power,
            "knots": self.knots,
            "reference": self.reference,
            "second": self.second,
        }
        for name, field in fields.items():
            self.form.show_field(field, name in _SHOWN[kind])
        self.form.show_field(self.id, kind not in (TermKind.SPLINE, TermKind.CATEGORIES))
        predictor = next((one for one in self._predictors if one.get("id") == self.of.chooser.currentData()), {})
        choices = predictor.get("choices")
        answers = [(str(one["label"]), str(one["id"])) for one in choices] if isinstance(choices, list) else []
        self.reference.chooser.offer(answers or [("–", None)], 0)


def _number(field: TextField, *, needed: bool = False) -> float | int | None:
    text = field.text.replace("\u2212", "-")
    if not text and not needed:
        return None
    try:
        number = float(text)
    except ValueError:
        refuse_at(UsageError(f"“{field.text}” is no number.", do="Write it with a point, such as 0.5."), field.edit)
    return int(number) if number.is_integer() else number

"""How an equation is fitted, and for which time spans it gives a probability."""

from clinicalc.errors import UsageError
from clinicalc.gui.errands import Errands
from clinicalc.gui.form import Form
from clinicalc.gui.form_deed import FormDeed, refuse_at
from clinicalc.gui.study.column_fields import SPANS
from clinicalc.operations.study_draft import StudyDraft, changed, plan_of, table_of
from clinicalc.operations.study_draft_model import Tree, which_competes, with_competing, with_fit

_KINDS = (("Cox, times to an event", "cox"), ("logistic", "logistic"), ("complementary log-log", "cloglog"))
_TIES = (("Efron", "efron"), ("Breslow", "breslow"))
_COVARIANCES = (("of the model", "model"), ("robust (sandwich)", "robust"), ("robust, by groups of people", "cluster"))


class FittingDeed(FormDeed):
    """`done` has the StudyDraft with the fit changed."""

    def __init__(self, draft: StudyDraft, errands: Errands) -> None:
        form = Form("How it is fitted", "", "&Set")
        self.kind = form.add_choice("&Fit", _KINDS)
        self.ties = form.add_choice("&Ties", _TIES)
        self.covariance = form.add_choice("Co&variance", _COVARIANCES)
        self.cluster = form.add_choice("&Groups", [(column, column) for column in draft.columns])
        self.horizons = form.add_text("&Horizons", says="Time spans, parted by commas, such as 1, 5, 10.", width=190)
        self.unit = form.add_choice("&In", [(words, code) for code, words in reversed(SPANS.items())])
        self.which = form.add_text(
            "&Competing events",
            says="What they are, such as: death from another cause. A Cox fit takes them as censored.",
        )
        super().__init__(form, errands)
        self._draft = draft
        self._fill()
        for field in (self.kind, self.covariance):
            field.chooser.currentIndexChanged.connect(lambda _: self._arrange())
        self._arrange()

    def begin(self) -> None:
        """Put it into the draft."""
        kind, covariance = self.kind.chooser.currentData(), self.covariance.chooser.currentData()
        estimate: Tree = {"kind": kind}
        if kind == "cox":
            estimate["ties"] = self.ties.chooser.currentData()
        estimate["covariance"] = covariance
        if covariance == "cluster":
            estimate["cluster"] = self.cluster.chooser.currentData()
        tree = with_fit(self._draft.tree, estimate, self._spans())
        if self._competes:
            if not self.which.text:
                refuse_at(UsageError("it is not said what competes.", do="Say it in a few words."), self.which.edit)
            tree = with_competing(tree, self.which.text)
        self.done.emit(changed(self._draft, tree))

    def _spans(self) -> list[object]:
        unit = str(self.unit.chooser.currentData())
        spans: list[object] = []
        for part in self.horizons.text.split(","):
            try:
                number = float(part)
            except ValueError:
                wrong = UsageError(f"“{part.strip()}” is no time span.", do="Write numbers parted by commas: 1, 5, 10.")
                refuse_at(wrong, self.horizons.edit)
            value = int(number) if number.is_integer() else number
            spans.append({"years": value} if unit == "a" else {"time": value, "unit": unit})
        return spans

    def _fill(self) -> None:
        equations = self._draft.tree.get("equations")
        equation = equations[0] if isinstance(equations, list) and equations else {}
        estimate = table_of(self._draft.tree, "estimate", str(equation.get("id", "")))
        for field, name in (
            (self.kind, "kind"),
            (self.ties, "ties"),
            (self.covariance, "covariance"),
            (self.cluster, "cluster"),
        ):
            place = field.chooser.findData(estimate.get(name))
            if place >= 0:
                field.chooser.show_place(place)
        horizons = [one for one in equation.get("horizons", []) if isinstance(one, dict)]
        self.horizons.edit.setText(", ".join(f"{one.get('years', one.get('time', ''))}" for one in horizons))
        self.which.edit.setText(which_competes(self._draft.tree))
        code = "a" if not horizons or "years" in horizons[0] else str(horizons[0].get("unit"))
        self.unit.chooser.show_place(max(0, self.unit.chooser.findData(code)))

    @property
    def _competes(self) -> bool:
        """Whether the data have competing events; what they are is then said here."""
        return bool(plan_of(self._draft).competing)

    def _arrange(self) -> None:
        self.form.show_field(self.which, self._competes)
        self.form.show_field(self.ties, self.kind.chooser.currentData() == "cox")
        self.form.show_field(self.cluster, self.covariance.chooser.currentData() == "cluster")

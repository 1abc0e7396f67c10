"""How an equation is fitted, and for which time spans it gives a probability."""

from clinicalc.errors import UsageError
from clinicalc.gui.chooser import Chooser
from clinicalc.gui.errands import Errands
from clinicalc.gui.form import Form
from clinicalc.gui.form_deed import FormDeed, refuse_at
from clinicalc.gui.study.column_fields import SPANS
from clinicalc.gui.study.fitting_kinds import KINDS, NO_PENALTY, TIES, Entries, covariances_of, penalties_of, usual_ties
from clinicalc.gui.study.typed_figures import read_positive
from clinicalc.operations.study_draft import StudyDraft, changed, plan_of
from clinicalc.operations.study_draft_model import (
    Tree,
    equation_of,
    fit_of,
    which_competes,
    with_competing,
    with_fit,
)

_CENSORED = "What they are, such as: death from another cause. This fit takes them as censored."
_KEPT = "What they are, such as: death from another cause. A Fine–Gray fit gives the probability in their presence."


class FittingDeed(FormDeed):
    """`done` has the StudyDraft with the fit of one equation changed; `penalty` is chosen already where it is said."""

    def __init__(self, draft: StudyDraft, errands: Errands, *, equation: int = 0, penalty: str = "") -> None:
        self._draft, self._equation = draft, equation
        form = Form(self._title(), "", "&Set")
        self.kind = form.add_choice("&Fit", KINDS)
        self.ties = form.add_choice("&Ties", TIES)
        self.penalty = form.add_choice("&Penalty", penalties_of(""))
        self.strength = form.add_text(
            "St&rength",
            says="Of the ridge, above 0. Left empty: chosen by cross-validation when it is fitted, and said.",
            width=190,
            longest=30,
        )
        self.covariance = form.add_choice("Co&variance", covariances_of(""))
        self.cluster = form.add_choice("&Groups", [(column, column) for column in draft.columns])
        self.horizons = form.add_text("&Horizons", says="Time spans, parted by commas, such as 1, 5, 10.", width=190)
        self.unit = form.add_choice("&In", [(words, code) for code, words in reversed(SPANS.items())])
        self.which = form.add_text("&Competing events", says=_CENSORED)
        super().__init__(form, errands)
        self._fill(penalty)
        self.kind.chooser.currentIndexChanged.connect(lambda _: self._take_kind())
        self.penalty.chooser.currentIndexChanged.connect(lambda _: self._offer())
        self.covariance.chooser.currentIndexChanged.connect(lambda _: self._arrange())

    def begin(self) -> None:
        """Put it into the draft."""
        kind, covariance, penalty = self._kind, self.covariance.chooser.currentData(), self._penalty
        estimate: Tree = {"kind": kind}
        if usual_ties(kind):
            estimate["ties"] = self.ties.chooser.currentData()
        if penalty != NO_PENALTY:
            estimate["penalty"] = penalty
        if penalty == "ridge" and self.strength.text:
            do = "Write such as 4, or leave it empty: it is then chosen by cross-validation."
            estimate["ridge_strength"] = read_positive(self.strength, "the strength of the ridge", do)
        estimate["covariance"] = covariance
        if covariance == "cluster":
            estimate["cluster"] = self.cluster.chooser.currentData()
        tree = with_fit(self._draft.tree, estimate, self._spans(), self._equation)
        if self._competes:
            if not self.which.text:
                refuse_at(UsageError("it is not said what competes.", do="Say it in a few words."), self.which.edit)
            tree = with_competing(tree, self.which.text)
        self.done.emit(changed(self._draft, tree))

    def focus_first(self) -> None:
        """The focus to what was chosen here for somebody, or else to the first field."""
        if self._is_offered:
            self.penalty.chooser.setFocus()
        else:
            super().focus_first()

    def _title(self) -> str:
        several = self._draft.tree.get("equations")
        is_one = not isinstance(several, list) or len(several) < 2
        return "How it is fitted" + ("" if is_one else f": {equation_of(self._draft.tree, self._equation).get('id')}")

    @property
    def _kind(self) -> str:
        return str(self.kind.chooser.currentData())

    @property
    def _penalty(self) -> str:
        return str(self.penalty.chooser.currentData())

    @property
    def _competes(self) -> bool:
        """Whether the data have competing events; what they are is then said here."""
        return bool(plan_of(self._draft).competing)

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

    def _fill(self, penalty: str) -> None:
        equation, estimate = equation_of(self._draft.tree, self._equation), fit_of(self._draft.tree, self._equation)
        _point(self.kind.chooser, estimate.get("kind"))
        self._offer(penalty or str(estimate.get("penalty", NO_PENALTY)), str(estimate.get("covariance", "")))
        _point(self.ties.chooser, estimate.get("ties", usual_ties(self._kind)))
        _point(self.cluster.chooser, estimate.get("cluster"))
        self.strength.edit.setText(str(estimate.get("ridge_strength", "")))
        stated = equation.get("horizons")
        horizons = [one for one in stated if isinstance(one, dict)] if isinstance(stated, list) else []
        self.horizons.edit.setText(", ".join(f"{one.get('years', one.get('time', ''))}" for one in horizons))
        self.which.edit.setText(which_competes(self._draft.tree, self._equation))
        code = "a" if not horizons or "years" in horizons[0] else str(horizons[0].get("unit"))
        self.unit.chooser.show_place(max(0, self.unit.chooser.findData(code)))
        self._is_offered = bool(penalty) and self._penalty == penalty

    def _take_kind(self) -> None:
        """Another kind of fit, which takes ties in its own way where nothing else is chosen."""
        _point(self.ties.chooser, usual_ties(self._kind))
        self._offer()

    def _offer(self, penalty: str = "", covariance: str = "") -> None:
        """The penalties and covariances of the kind that is chosen; what was chosen before stays where it can."""
        _offer(self.penalty.chooser, penalties_of(self._kind), penalty or self._penalty)
        covariances = covariances_of(self._kind, self._penalty)
        _offer(self.covariance.chooser, covariances, covariance or self.covariance.chooser.currentData())
        self._arrange()

    def _arrange(self) -> None:
        kind, show = self._kind, self.form.show_field
        show(self.which, self._competes)
        show(self.ties, bool(usual_ties(kind)))
        show(self.penalty, len(penalties_of(kind)) > 1)
        show(self.strength, self._penalty == "ridge")
        show(self.covariance, self.covariance.chooser.count() > 1)
        show(self.cluster, self.covariance.chooser.currentData() == "cluster")
        self.form.say_under(self.which, _KEPT if kind == "fine-gray" else _CENSORED)


def _offer(chooser: Chooser, entries: Entries, wanted: str) -> None:
    codes = [code for _, code in entries]
    chooser.offer(entries, codes.index(wanted) if wanted in codes else 0)


def _point(chooser: Chooser, data: object) -> None:
    place = chooser.findData(data)
    if place >= 0:
        chooser.show_place(place)

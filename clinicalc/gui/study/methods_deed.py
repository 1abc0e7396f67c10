"""What is done about values that are missing, and about the optimism of a fit judged by its own people."""

from clinicalc.gui.errands import Errands
from clinicalc.gui.form import Form
from clinicalc.gui.form_deed import FormDeed
from clinicalc.gui.form_fields import TextField
from clinicalc.gui.study.typed_figures import LARGEST_SEED, read_whole
from clinicalc.operations.study_draft import StudyDraft, changed
from clinicalc.operations.study_draft_methods import (
    Methods,
    methods_of,
    usual_bootstrap,
    usual_imputation,
    with_methods,
)
from clinicalc.operations.study_draft_model import Tree

_NO, _YES = "no", "yes"
_MISSING = (("people who lack one are left out", _NO), ("filled in several times (multiple imputation)", _YES))
_OPTIMISM = (("not looked into", _NO), ("found by bootstrap", _YES))
SETS, ROUNDS, REPLICATES = (2, 200), (1, 200), (20, 5000)
"""Least and most of each, as a study file may say them."""
_SHORT = 120


class MethodsDeed(FormDeed):
    """`done` has the StudyDraft with the methods changed; what is not chosen leaves no table in it."""

    def __init__(self, draft: StudyDraft, errands: Errands) -> None:
        form = Form(
            "Missing values and optimism",
            "Both are worked out when the model is fitted, and take as many fits as is said here. A seed makes them"
            " come out the same again.",
            "&Set",
        )
        self.missing = form.add_choice("Missing va&lues", _MISSING)
        self.sets = form.add_text(
            "Se&ts", says="So many complete files are made, fitted and pooled.", width=_SHORT, longest=16
        )
        self.rounds = form.add_text(
            "&Rounds", says="Over all columns, before a set is taken.", width=_SHORT, longest=16
        )
        self.seed = form.add_text("See&d of the sets", width=_SHORT, longest=16)
        self.optimism = form.add_choice("&Optimism", _OPTIMISM)
        self.replicates = form.add_text(
            "Bootstrap sam&ples",
            says="Drawn from the people of the fit; the model is fitted anew to each.",
            width=_SHORT,
            longest=16,
        )
        self.drawing = form.add_text("S&eed of the samples", width=_SHORT, longest=16)
        super().__init__(form, errands)
        self._draft = draft
        self._fill(methods_of(draft.tree))
        for field in (self.missing, self.optimism):
            field.chooser.currentIndexChanged.connect(lambda _: self._arrange())
        self._arrange()

    def begin(self) -> None:
        """Put it into the draft."""
        imputation: Tree | None = None
        bootstrap: Tree | None = None
        if self._fills_in:
            imputation = {
                "sets": read_whole(self.sets, "the sets", *SETS),
                "rounds": read_whole(self.rounds, "the rounds", *ROUNDS),
                "seed": read_whole(self.seed, "the seed of the sets", 0, LARGEST_SEED),
            }
        if self._draws:
            bootstrap = {
                "replicates": read_whole(self.replicates, "the bootstrap samples", *REPLICATES),
                "seed": read_whole(self.drawing, "the seed of the samples", 0, LARGEST_SEED),
            }
        self.done.emit(changed(self._draft, with_methods(self._draft.tree, Methods(imputation, bootstrap))))

    @property
    def _fills_in(self) -> bool:
        return bool(self.missing.chooser.currentData() == _YES)

    @property
    def _draws(self) -> bool:
        return bool(self.optimism.chooser.currentData() == _YES)

    def _fill(self, methods: Methods) -> None:
        self.missing.chooser.show_place(int(methods.imputation is not None))
        self.optimism.chooser.show_place(int(methods.bootstrap is not None))
        imputation = methods.imputation or usual_imputation()
        bootstrap = methods.bootstrap or usual_bootstrap()
        filled: tuple[tuple[TextField, object], ...] = (
            (self.sets, imputation["sets"]),
            (self.rounds, imputation["rounds"]),
            (self.seed, imputation["seed"]),
            (self.replicates, bootstrap["replicates"]),
            (self.drawing, bootstrap["seed"]),
        )
        for field, value in filled:
            field.edit.setText(str(value))

    def _arrange(self) -> None:
        for field in (self.sets, self.rounds, self.seed):
            self.form.show_field(field, self._fills_in)
        for field in (self.replicates, self.drawing):
            self.form.show_field(field, self._draws)

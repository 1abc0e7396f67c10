"""What a column of the file of people is for, and what its cells mean."""

from clinicalc.cohort.dictionary import ColumnEntry, Role
from clinicalc.errors import UsageError
from clinicalc.gui.chooser import Chooser
from clinicalc.gui.errands import Errands
from clinicalc.gui.form import Form
from clinicalc.gui.form_deed import FormDeed, refuse_at
from clinicalc.gui.study.column_fields import (
    ANSWERS,
    NUMBER,
    SPANS,
    fields_of,
    read_answers,
    read_cells,
    spell_answers,
    units_of,
)
from clinicalc.gui.study.data_words import ROLES
from clinicalc.operations.study_draft import StudyDraft, entry_of, plan_of, table_of, with_column, with_outcome
from clinicalc.operations.study_draft_model import Tree, make_id, predictor_of
from clinicalc.units.table import quantity_table


class ColumnDeed(FormDeed):
    """`done` has the StudyDraft with the column changed."""

    def __init__(self, draft: StudyDraft, column: str, errands: Errands) -> None:
        self._draft, self._column = draft, column
        entry, plan = entry_of(draft, column), plan_of(draft)
        reason = f"Proposed because: {entry.reason}" if entry.reason else ""
        form = Form(f"The column {column}", reason, "&Set")
        self.role = form.add_choice("&Role", [(words, role.value) for role, words in ROLES.items() if _offered(role)])
        self.id = form.add_text("&Id", says="What terms call it: small letters, digits and _.", longest=64)
        self.label = form.add_text("&Label", says="What the clinician reads beside the field.", longest=120)
        self.kind = form.add_choice("&Kind", [(words, kind) for kind, words in ANSWERS.items()])
        self.quantity = form.add_choice("&Quantity", [(row.label, row.id) for row in quantity_table().quantities])
        self.unit = form.add_choice("&Unit of the cells", [("–", None)])
        self.answers = form.add_text("&Answers", says="Cell = answer, parted by commas: F = female, M = male.")
        self.missing = form.add_text("&Not measured", says="Cells that mean it, beside empty ones and NA: -9, 999.")
        self.time_unit = form.add_choice("&Time in", [(words, code) for code, words in SPANS.items()])
        self.happened = form.add_text("&Event", says="Cells that mean it, parted by commas.")
        self.censored = form.add_text("&Censored", says="Left empty: everything else.")
        self.competing = form.add_text("Co&mpeting event", says="Left empty: none.")
        self.no_event = form.add_text("N&o event", says="Left empty: everything else.")
        super().__init__(form, errands)
        self._predictor = _predictor_of(draft, entry)
        self._fill(entry)
        for field, cells in (
            (self.happened, plan.event),
            (self.censored, plan.censored),
            (self.competing, plan.competing),
            (self.no_event, plan.no_event),
        ):
            field.edit.setText(", ".join(cells))
        _point(self.time_unit.chooser, plan.unit)
        self.role.chooser.currentIndexChanged.connect(lambda _: self._arrange())
        self.kind.chooser.currentIndexChanged.connect(lambda _: self._arrange())
        self.quantity.chooser.currentIndexChanged.connect(lambda _: self._offer_units())
        self._arrange()

    def begin(self) -> None:
        """Put it into the draft."""
        role = Role(self.role.chooser.currentData())
        if role is Role.VALUE:
            entry, predictor = self._value()
            self.done.emit(with_column(self._draft, entry, predictor))
            return
        draft = with_column(self._draft, ColumnEntry(self._column, role))
        self.done.emit(self._with_outcome(draft, role))

    def _value(self) -> tuple[ColumnEntry, Tree]:
        id = self.id.text or make_id(self._column)
        if id != make_id(id):
            wrong = UsageError(f"“{id}” is no id.", do=f"An id has small letters, digits and _, such as {make_id(id)}.")
            refuse_at(wrong, self.id.edit)
        kind = self.kind.chooser.currentData()
        missing = read_cells(self.missing.text)
        if kind == NUMBER:
            unit = str(self.unit.chooser.currentData() or "1")
            entry = ColumnEntry(self._column, Role.VALUE, id, unit, (), missing)
            known = {"quantity": self.quantity.chooser.currentData(), "unit": unit}
            shape = {**predictor_of(ColumnEntry(self._column, Role.VALUE, id, unit)), "kind": "number", **known}
        else:
            levels = read_answers(self.answers.text)
            if isinstance(levels, UsageError):
                refuse_at(levels, self.answers.edit)
            if kind == "yes_no" and not {answer for answer, _ in levels} <= {"yes", "no"}:
                answers = UsageError(
                    "a yes/no question has the answers yes and no.", do="Write such as 1 = yes, 0 = no."
                )
                refuse_at(answers, self.answers.edit)
            entry = ColumnEntry(self._column, Role.VALUE, id, "", levels, missing)
            shape = predictor_of(entry)
        kept = {key: value for key, value in self._predictor.items() if key not in _MADE}
        if self.label.text:
            shape["label"] = self.label.text
        return entry, {**kept, **shape}

    def _with_outcome(self, draft: StudyDraft, role: Role) -> StudyDraft:
        """The draft with what the cells of an outcome's column mean."""
        outcome = table_of(draft.tree, "cohort", "outcome")
        if role is Role.TIME:
            outcome["unit"] = self.time_unit.chooser.currentData()
            outcome["kind"] = "time_to_event"
        elif role is Role.STATUS:
            said = {"event": self.happened, "censored": self.censored, "competing": self.competing}
            outcome |= {"kind": "time_to_event", **{name: list(read_cells(field.text)) for name, field in said.items()}}
            outcome.pop("no_event", None)
        elif role is Role.OUTCOME:
            said = {"event": self.happened, "no_event": self.no_event}
            outcome |= {"kind": "binary", **{name: list(read_cells(field.text)) for name, field in said.items()}}
            for name in ("time", "unit", "status", "entry", "start", "end", "born", "censored", "competing"):
                outcome.pop(name, None)
        else:
            return draft
        return with_outcome(draft, {name: value for name, value in outcome.items() if value not in ([], "")})

    def _fill(self, entry: ColumnEntry) -> None:
        predictor = self._predictor
        _point(self.role.chooser, entry.role.value)
        self.id.edit.setText(entry.predictor or make_id(self._column))
        self.label.edit.setText(str(predictor.get("label", "")))
        _point(self.kind.chooser, str(predictor.get("kind", NUMBER)))
        _point(self.quantity.chooser, str(predictor.get("quantity", "number")))
        self._offer_units()
        _point(self.unit.chooser, entry.unit or str(predictor.get("unit", "")))
        choices = predictor.get("choices")
        own = tuple((str(one["id"]), str(one["id"])) for one in choices) if isinstance(choices, list) else ()
        self.answers.edit.setText(spell_answers(entry.levels or own))
        self.missing.edit.setText(", ".join(entry.missing))

    def _offer_units(self) -> None:
        self.unit.chooser.offer(units_of(str(self.quantity.chooser.currentData())), 0)

    def _arrange(self) -> None:
        """Show the fields that the role and the kind have."""
        shown = fields_of(Role(self.role.chooser.currentData()), str(self.kind.chooser.currentData()))
        fields = {
            "id": self.id,
            "label": self.label,
            "kind": self.kind,
            "quantity": self.quantity,
            "unit": self.unit,
            "answers": self.answers,
            "missing": self.missing,
            "time_unit": self.time_unit,
            "event": self.happened,
            "censored": self.censored,
            "competing": self.competing,
            "no_event": self.no_event,
        }
        for name, field in fields.items():
            self.form.show_field(field, name in shown)


_MADE = ("id", "label", "kind", "quantity", "unit", "possible", "choices")
"""What the form itself says of a predictor; everything else of it stays."""


def _offered(role: Role) -> bool:
    return role is not Role.CLUSTER  # said where the fit is


def _predictor_of(draft: StudyDraft, entry: ColumnEntry) -> Tree:
    found = draft.tree.get("predictors")
    listed = [one for one in found if isinstance(one, dict)] if isinstance(found, list) else []
    return next((one for one in listed if one.get("id") == entry.predictor), {})


def _point(chooser: Chooser, data: str) -> None:
    place = chooser.findData(data)
    if place >= 0:
        chooser.show_place(place)

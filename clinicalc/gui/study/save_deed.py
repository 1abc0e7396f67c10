"""The study file that was written here is saved, whole or not at all, and then read like any other."""

from pathlib import Path

from PySide6.QtWidgets import QWidget

from clinicalc.errors import UsageError
from clinicalc.gui.errands import Errands
from clinicalc.gui.file_choosing import ChooseSave, Wanted
from clinicalc.gui.form import Form
from clinicalc.gui.form_deed import FormDeed, read_field, refuse_at
from clinicalc.gui.study.draft_sheets import say_lost_comments
from clinicalc.operations.course import Course
from clinicalc.operations.study_draft import StudyDraft, save_draft


class SaveDeed(FormDeed):
    """`done` has the StudyDraft as it was saved. One that is there is replaced where it is the one that was changed."""

    def __init__(self, draft: StudyDraft, errands: Errands, choose: ChooseSave) -> None:
        form = Form(
            "Save the study file",
            f"It stands beside {draft.file}, which it names. It is put in place whole or not at all, and then read.",
            "&Save",
        )
        if draft.lost_comments:
            form.add_words(say_lost_comments(draft), semibold=True)
        self._draft, self._choose = draft, choose
        self._confirmed = draft.path
        self.place = form.add_place("Study &file", self._ask_where)
        self.place.edit.setText(str(draft.path or draft.folder / f"{Path(draft.file).stem}.toml"))
        super().__init__(form, errands)

    def begin(self) -> None:
        """Write the file."""
        path = read_field(self.place.path, self.place.edit)
        draft, replace = self._draft, path == self._confirmed
        if path.parent.resolve() != draft.folder.resolve():
            folder = UsageError(
                f"the study file names {draft.file} as a file beside it, and that is in {draft.folder}.",
                do="Save it in that folder.",
            )
            refuse_at(folder, self.place.edit)

        def work(course: Course) -> StudyDraft:
            course.go_on()
            return save_draft(draft, path, replace_file=replace)

        self.work("Saving", work, self.done.emit, lambda _: self.place.edit)

    def _ask_where(self, parent: QWidget) -> Path | None:
        name = (self._draft.path or Path(f"{Path(self._draft.file).stem}.toml")).name
        self._confirmed = self._choose(parent, Wanted.NEW_STUDY, name)
        return self._confirmed

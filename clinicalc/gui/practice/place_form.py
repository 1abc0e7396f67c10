"""Founding, step 1: what the practice is called, and in which folder its library is to lie."""

from PySide6.QtCore import Signal

from clinicalc.gui.errands import Errands
from clinicalc.gui.file_choosing import ChooseFolder
from clinicalc.gui.form import Form
from clinicalc.gui.form_deed import FormDeed, read_field
from clinicalc.operations.founding_steps import LONGEST_PRACTICE, FoundingPlan, check_new_place, check_practice


class PlaceForm(FormDeed):
    """Nothing is made yet: the folder is only looked at."""

    settled = Signal(str, str)
    """The practice's name, and the folder that can become its library."""

    def __init__(self, errands: Errands, choose_folder: ChooseFolder, plan: FoundingPlan) -> None:
        form = Form(
            "Practice and folder",
            "Step 1 of 4. The library is a folder that holds the practice’s coefficient files and all that was decided "
            "about them. On a share every machine of the practice can use it. Nothing is made before the last step.",
            "&Continue",
        )
        super().__init__(form, errands)
        self.practice = form.add_text(
            "&Practice", says="Its name, as other machines and prints show it.", longest=LONGEST_PRACTICE
        )
        self.place = form.add_place(
            "&Folder of the library", choose_folder, says="A new folder inside one that is there, or an empty one."
        )
        self.practice.edit.setText(plan.practice)
        self.place.edit.setText("" if plan.place is None else str(plan.place))

    def begin(self) -> None:
        """Check both; the folder is tried for writing, and nothing stays of that."""
        practice = read_field(lambda: check_practice(self.practice.text), self.practice.edit)
        place = read_field(self.place.path, self.place.edit)
        self.work(
            "Looking at the folder",
            lambda _: check_new_place(place),
            lambda _: self.settled.emit(practice, str(place)),
            lambda _: self.place.edit,
        )

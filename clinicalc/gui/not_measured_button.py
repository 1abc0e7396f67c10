"""The button that says of one value that it was not measured, and takes that back when it is pressed again."""

from clinicalc.gui.staying_button import StayingButton

WORDS = "Not measured"


class NotMeasuredButton(StayingButton):
    """Stays down while the value stands open; a screen reader says whose value, and whether it is pressed."""

    def __init__(self, label: str) -> None:
        super().__init__(WORDS)
        self.setAccessibleName(f"{label.rstrip('?')}: not measured")
        self.setAccessibleDescription("The number is then an average over what is known of such people.")

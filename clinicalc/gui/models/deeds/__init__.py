"""The deeds of the practice: forms in the place of the right side of the Models page."""

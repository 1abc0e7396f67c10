"""The print: one assessment as pages for the clinician and one for the patient, with its record attached.

Everything the assessment says goes onto the pages, and nothing else: this room works out no number, asks nobody and
keeps nothing. It refuses a text that it could only print wrongly (a character the print's typefaces lack, a hidden
control character) instead of printing a box, and it leaves no half-written file behind.

Nothing is gathered here: the window uses the figures of this room at every start and its pages only when it prints.
"""

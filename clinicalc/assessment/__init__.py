"""One patient: what was typed, what is to be said about it, and the number if there is one.

`assess` never raises on what a person typed: a refusal is a finding. This room knows no window, no print and no file
place; it never guesses an answer, takes nothing as "no", and lets nobody override a stop.
"""

"""From a fit made elsewhere to one complete, proved coefficient file.

A researcher describes the model in TOML and hands over the fit's own tables; this room completes the square, moves the
baseline to where every term is zero, works the examples and reads the result back before it is put in place. It fits
nothing itself, guesses no reference point, and writes nothing when anything is wrong.
"""

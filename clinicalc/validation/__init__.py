"""How a model does in people it was not made from: measures with intervals, groups, decisions, what is wrong by name.

Knows no files and makes none; a model comes in made ready, people come in checked.
"""

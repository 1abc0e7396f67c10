"""The coefficient file: its shape, its rules, reading, writing and its fingerprint.

This room turns bytes into a checked, immutable `CoefficientFile`, or refuses them with every problem at once. It does
not compute a probability, does not know what is in a patient's record, and never repairs a file it is given: what is
wrong is said, with its place, and left to the author.
"""

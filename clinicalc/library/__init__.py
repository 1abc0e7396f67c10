"""The model library: which coefficient files a practice has approved, by whom, until when, provably.

A folder of content-addressed files and signed records in one chain. It refuses whatever is not signed by a key in
force, does not follow from the founding record, or lacks what this machine has seen before; it never repairs silently.
"""

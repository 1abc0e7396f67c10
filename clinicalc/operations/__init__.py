"""The verbs that window and command line share: open, assess, summarise, inspect, save, demonstrate.

No widgets, no printing to a terminal, no exit codes. Nothing here decides what a number is; that is `assessment`.
"""

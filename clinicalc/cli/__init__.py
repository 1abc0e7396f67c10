"""The command line: a thin skin over `operations`.

It reads words, calls a verb, prints a text and picks an exit status. No sums, no files of its own, no window.
"""

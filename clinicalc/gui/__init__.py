"""The window: pages, fields and painting; everything that is known here comes from one `Assessment`.

This room computes no probability, converts no value by itself and writes no file: it turns keystrokes into a
`PatientEntry`, asks `operations`, and shows the answer. It shows no number that belongs to other values than those on
screen, takes nothing as "no", and renders nothing that comes from a file or a person as markup.
"""

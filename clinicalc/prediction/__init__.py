"""From design columns to a probability and its band: one line on a link scale for every model family.

Knows no patients, units or findings. Everything is done column by column in a fixed order, so that one patient and a
million rows get the same bits on one machine.
"""

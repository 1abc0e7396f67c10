"""Sums over the people a model was made from: what development and validation share.

Nothing here reads a file or knows a coefficient file; numbers go in, numbers come out.
"""

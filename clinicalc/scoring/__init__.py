"""A table of rows in, the same rows with probability, band and findings out: streamed, and the bits of one patient."""

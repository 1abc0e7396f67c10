"""From a patient's values to design terms: transforms, splines, derived values, design columns.

Works on whole columns (one patient is a column of one), in file units. Refuses nothing and knows no ranges: what may
be computed was settled when the file was loaded (`find_nonfinite`) and when the values were checked.
"""

"""From a patient's values to design terms: transforms, splines, derived values, design columns.

Works on whole columns (one patient is a column of one), in file units, and refuses nothing about a patient: a column
that has no value somewhere is not a number there. The one check that lives here, `find_nonfinite`, is asked when a file
is loaded: given the ranges of values that will be let in, it names each step without a finite value and each term that
grows beyond use. It knows no ranges itself; whoever calls keeps to those it was asked about. Where a derived value does
not exist (a ratio to nought, triglycerides too high for Friedewald) the caller must look before it uses it.
"""

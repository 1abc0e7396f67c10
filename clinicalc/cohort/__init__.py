"""A table of people read, its columns explained by a dictionary, and checked: what a model is fitted to.

Knows files and people, and nothing of fits: `table` reads, `proposing` suggests what the columns are, `checking` says
everything that is wrong with them at once and hands over arrays in the predictors' own units. pandas reads what is not
plain text (Parquet, Excel, Stata), inside functions.
"""

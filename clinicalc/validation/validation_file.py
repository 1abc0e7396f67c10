"""A validation file in TOML: which model, which people, what to look at, and what an update should be.

read_validation_file -> settle_validation (with the model) -> read_table, check_cohort -> make_plan
"""

from clinicalc.validation.planning import make_plan
from clinicalc.validation.settled import ExclusionColumn, SettledValidation, UpdateRequest
from clinicalc.validation.settling import settle_validation
from clinicalc.validation.written_file import ValidationFile, read_validation_file, take_validation

__all__ = [
    "ExclusionColumn",
    "SettledValidation",
    "UpdateRequest",
    "ValidationFile",
    "make_plan",
    "read_validation_file",
    "settle_validation",
    "take_validation",
]

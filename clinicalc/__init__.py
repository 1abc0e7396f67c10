"""Clinical risk models, offline: one coefficient file, one patient, one probability with its band."""

from importlib import import_module

__version__ = "0.1.0"

_OFFERED = {"load_model": "clinicalc.assessment.proof", "score_frame": "clinicalc.scoring.score_frame"}
"""What a program that uses the package finds here, and the module where it lies: loaded when first asked for."""


def __getattr__(name: str) -> object:
    """One of the verbs offered to programs: `load_model`, `score_frame`."""
    if name in _OFFERED:
        return getattr(import_module(_OFFERED[name]), name)
    raise AttributeError(f"module {__name__!r} has no attribute {name!r}")

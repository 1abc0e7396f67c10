"""Clinical risk models, offline: one coefficient file, one patient, one probability with its band."""

__version__ = "0.1.0"

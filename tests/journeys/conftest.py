"""Journeys go through the real window, without a screen."""

from tests.gui.conftest import _dressed

__all__ = ["_dressed"]

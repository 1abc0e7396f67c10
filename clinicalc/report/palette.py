"""The colours of paper: a colour for every ink, dark on white, and told apart in grey as well."""

from collections.abc import Mapping
from types import MappingProxyType

from clinicalc.report.shapes import Tone

PAPER: Mapping[Tone, str] = MappingProxyType(
    {
        Tone.GROUND: "#EDEFF2",
        Tone.SHEET: "#FFFFFF",
        Tone.FIELD: "#FFFFFF",
        Tone.INK: "#171B2B",
        Tone.SOFT: "#505869",
        Tone.RULE: "#D3D7DE",
        Tone.EDGE: "#7E8696",
        Tone.ACCENT: "#47378F",
        Tone.ON_ACCENT: "#FFFFFF",
        Tone.TINT: "#CDC5EC",
        Tone.WASH: "#F3F1FA",
        Tone.SEL: "#E7E3F6",
        Tone.HATCH: "#8D93A3",
    }
)
"""sRGB by ink; the light theme of the window has the same."""

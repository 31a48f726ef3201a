"""Figures by kind: a record of dimensions -> a drawn `Box`, origin top left.

Everything is to scale from the figures' own values; labels are printed as given.
"""

from __future__ import annotations

from calcreport.layout.envelope_figure import draw_envelope
from calcreport.layout.mathbox import Formulas
from calcreport.layout.model import Box
from calcreport.layout.section_figure import draw_section
from calcreport.layout.span_figure import draw_span
from calcreport.layout.strength_figure import draw_strength
from calcreport.report.model import EnvelopeFigure, Figure, SectionFigure, StrengthFigure


def draw(formulas: Formulas, figure: Figure, width: float) -> Box:
    """Draw a figure no wider than `width` points where its labels allow."""
    if isinstance(figure, SectionFigure):
        return draw_section(formulas, figure, width)
    if isinstance(figure, StrengthFigure):
        return draw_strength(formulas, figure, width)
    if isinstance(figure, EnvelopeFigure):
        return draw_envelope(formulas, figure, width)
    return draw_span(formulas, figure, width)

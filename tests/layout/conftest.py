"""What the layout tests share: the fonts, tools made of them, and the specimen laid out once."""

from __future__ import annotations

import sys
from pathlib import Path

import pytest

sys.path.insert(0, str(Path(__file__).parent))

import specimen

from calcreport.layout.fonts import Fonts, installed_fonts
from calcreport.layout.kit import Kit
from calcreport.layout.marks import Marks
from calcreport.layout.mathbox import Formulas
from calcreport.layout.model import Pages
from calcreport.layout.paginate import lay_out
from calcreport.layout.sheet import sheet_of
from calcreport.layout.words import Lettering


@pytest.fixture(scope="session")
def fonts() -> Fonts:
    """Load the four faces once."""
    return installed_fonts()


@pytest.fixture(scope="session")
def lettering(fonts: Fonts) -> Lettering:
    """Make the setter of words."""
    return Lettering(fonts, Formulas(fonts))


@pytest.fixture(scope="session")
def kit(lettering: Lettering) -> Kit:
    """Make the tools of a letter sheet with lanes and a symbol column of 24 pt."""
    sheet = sheet_of("letter")
    return Kit(sheet, lettering, Marks(sheet, lettering), 24.0)


@pytest.fixture(scope="session")
def wide_kit(lettering: Lettering) -> Kit:
    """Make the tools of a letter sheet without lanes."""
    sheet = sheet_of("letter", lanes=False)
    return Kit(sheet, lettering, Marks(sheet, lettering), 24.0)


@pytest.fixture(scope="session", params=["letter", "a4"])
def package(request: pytest.FixtureRequest, fonts: Fonts) -> Pages:
    """Lay out the specimen on either paper."""
    return lay_out(specimen.report(request.param), fonts)


@pytest.fixture(scope="session")
def letter(fonts: Fonts) -> Pages:
    """Lay out the specimen on letter paper."""
    return lay_out(specimen.report(), fonts)

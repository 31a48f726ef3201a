"""Running text: line widths, breaks, link areas, nothing lost."""

from __future__ import annotations

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from inked import inked, texts
from specimen import over

from calcreport.layout.fonts import Fonts
from calcreport.layout.model import Link
from calcreport.layout.pieces import flat
from calcreport.layout.words import PLAIN, Lettering
from calcreport.report.model import Reference, Strong, Words


def set_in(lettering: Lettering, words: Words, width: float) -> tuple[str, ...]:
    return tuple("".join(texts((item,)) for item in box.items) for box in lettering.set(words, PLAIN, width))


def test_short_words_stay_on_one_line(lettering: Lettering) -> None:
    (line,) = lettering.set(("Effective depth, one layer",), PLAIN, 300.0)
    assert line.width == pytest.approx(lettering.fonts.width("Effective depth, one layer", "regular", 9), abs=0.3)


def test_no_words_make_no_lines(lettering: Lettering) -> None:
    assert lettering.set((), PLAIN, 100.0) == ()
    assert lettering.set(("",), PLAIN, 100.0) == ()


def test_lines_break_at_spaces_only(lettering: Lettering) -> None:
    lines = set_in(lettering, ("alpha beta gamma delta",), 50.0)
    assert len(lines) > 1
    assert "".join(lines) == "alphabetagammadelta"
    assert all(part in ("alpha", "beta", "gamma", "delta", "alphabeta", "gammadelta") for part in lines)


def test_what_touches_does_not_part(lettering: Lettering) -> None:
    words = ("see (", Reference("line 12", "B1.12"), "), ", Strong("then"), ".")
    for width in (40.0, 50.0, 60.0, 80.0):
        lines = set_in(lettering, words, width)
        assert not any(line.startswith((")", ".", ",")) for line in lines)


def test_a_word_wider_than_the_line_parts_after_a_soft_sign(lettering: Lettering) -> None:
    lines = set_in(lettering, ("calculations.B14.given.very_long_name",), 90.0)
    assert len(lines) > 1
    assert all(line[-1] in "._" for line in lines[:-1])


def test_references_become_link_areas_over_their_letters(lettering: Lettering, fonts: Fonts) -> None:
    (line,) = lettering.set(("see ", Reference("line 12", "B1.12"), " for this"), PLAIN, 300.0)
    (link,) = [item for item in flat(line.items) if isinstance(item, Link)]
    inks = [ink for ink in inked(line.items, fonts) if ink.text.startswith("line 12")]
    assert link.target == "B1.12"
    assert link.x == pytest.approx(inks[0].left)
    assert link.width == pytest.approx(fonts.width("line 12", "regular", 9), abs=0.5)
    assert link.y < -5 and link.y + link.height > 0  # from above the x-height to below the baseline


def test_a_tall_formula_raises_its_line(lettering: Lettering) -> None:
    plain = lettering.set(("words",), PLAIN, 200.0)[0]
    high = lettering.set(("with ", over("V_u", "φV_n")), PLAIN, 200.0)[0]
    assert high.ascent + high.descent > plain.ascent + plain.descent


@settings(max_examples=60, deadline=None)
@given(
    st.lists(st.text("abc é/_-≤φ%", min_size=0, max_size=40), min_size=1, max_size=6),
    st.floats(25.0, 400.0),
)
def test_no_line_is_wider_than_asked_and_no_letter_is_lost(
    lettering: Lettering, parts: list[str], width: float
) -> None:
    words: Words = tuple(Strong(part) if place % 2 else part for place, part in enumerate(parts))
    lines = lettering.set(words, PLAIN, width)
    assert all(line.width <= width + 0.1 for line in lines)
    assert "".join(texts(line.items) for line in lines) == "".join(parts).replace(" ", "")

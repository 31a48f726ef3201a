"""Page content as operators; lengths in hundredths, y turned upwards on a sheet 100 pt high."""

from __future__ import annotations

import pytest

from calcreport.layout.model import Anchor, Box, Circle, Item, Link, Placed, Run, Stroke
from calcreport.output.content import Content, ContentWriter


def run(x: float, y: float, glyph: int, text: str, size: float = 10) -> Run:
    return Run(x, y, "math", size, (glyph,), text)


def write(*items: Item) -> Content:
    return ContentWriter().write(items, 100)


def test_a_run_is_placed_from_the_bottom_left() -> None:
    item = Run(12.5, 30.25, "regular", 9, (1, 258), "ab")
    assert write(item).data == b"BT 12.5 69.75 Td/F0 9 Tf<00010102>Tj ET\n"


def test_shifts_are_taken_off_as_pdf_counts_them() -> None:
    item = Run(0, 100, "regular", 9, (1, 2, 3), "abc", (-20, 0, 0))
    # ISO 32000-1, 9.4.3: a number in the array is subtracted from the advance
    assert write(item).data == b"BT 0 0 Td/F0 9 Tf[<0001>20<00020003>]TJ ET\n"
    last = Run(0, 100, "regular", 9, (1, 2), "ab", (0, 15))
    assert write(last).data == b"BT 0 0 Td/F0 9 Tf[<00010002>-15]TJ ET\n"


def test_strings_of_a_box_move_on_from_one_another() -> None:
    inner = Box(5, 5, 0, (run(0, 0, 1, "a"), run(4.5, 2.1, 2, "n", 7)))
    outer = Box(20, 5, 0, (Placed(0, 0, inner), Placed(10, 0, inner)))
    # after n the line begins at (4.5, -2.1); the next a stands at (10, 0)
    expected = b"BT 1 98 Td/F3 10 Tf<0001>Tj 4.5 -2.1 Td/F3 7 Tf<0002>Tj 5.5 2.1 Td/F3 10 Tf<0001>Tj"
    expected += b" 4.5 -2.1 Td/F3 7 Tf<0002>Tj ET\n"
    assert write(Placed(1, 2, outer)).data == expected


def test_a_font_already_set_is_not_set_again() -> None:
    data = write(run(0, 0, 1, "a"), run(5, 0, 2, "b"), run(9, 0, 2, "b", 7)).data
    assert data.count(b"/F3 10 Tf") == 1 and data.count(b"/F3 7 Tf") == 1


def test_a_box_gives_the_same_marks_wherever_it_stands() -> None:
    rule = Stroke(((0, -2.58), (6, -2.58)), 0.68)
    box = Box(6, 5, 0, (run(1, 0, 1, "a"), rule))
    first, second = (write(Placed(x, 50, box)).data for x in (0, 10))
    assert first == b"0.68 w 0 52.58 m 6 52.58 l S\nBT 1 50 Td/F3 10 Tf<0001>Tj ET\n".replace(b"0.68", b".68")
    assert second == b".68 w 10 52.58 m 16 52.58 l S\nBT 11 50 Td/F3 10 Tf<0001>Tj ET\n"


@pytest.mark.parametrize(
    ("shape", "expected"),
    [
        (Stroke(((0, 0), (9, 0), (9, 9)), 1, closed=True), b"1 w 0 100 m 9 100 l 9 91 l s\n"),
        (Stroke(((0, 0), (9, 0), (9, 9)), 0, closed=True, fill=0.9), b".9 g 0 100 m 9 100 l 9 91 l f 0 g\n"),
        (Stroke(((0, 0), (9, 0), (9, 9)), 1, closed=True, fill=0.0), b"1 w 0 100 m 9 100 l 9 91 l b\n"),
        (Stroke(((0, 0), (9, 0)), 0.35, dash=(3, 1.5)), b"[3 1.5]0 d .35 w 0 100 m 9 100 l S\n[]0 d\n"),
    ],
)
def test_strokes(shape: Stroke, expected: bytes) -> None:
    assert write(shape).data.replace(b"0.9", b".9") == expected


def test_a_circle_is_four_curves_about_its_centre() -> None:
    data = write(Circle(20, 30, 2, 0.35)).data
    assert data.startswith(b"q 1 0 0 1 20 70 cm .35 w 2 0 m ") and data.endswith(b" s\nQ\n")
    # control points at 0.5523 of the radius draw a circle (4 (sqrt 2 - 1) / 3)
    assert data.count(b" c ") == 4 and b"2 1.105 1.105 2 0 2 c" in data


def test_links_and_anchors_inside_boxes_come_out_at_their_places() -> None:
    box = Box(9, 5, 2, (Link(1, -5, 8, 7, "B1.14"), Anchor("B1.2", 0, -5)))
    content = write(Placed(40, 60, box))
    assert content.data == b""
    (area,) = content.links
    # top: 100 - (60 - 5); bottom: 7 lower
    assert (area.left, area.bottom, area.right, area.top, area.target) == (41, 38, 49, 45, "B1.14")
    assert content.anchors == (("B1.2", 40, 45),)


def test_glyphs_stand_for_the_text_of_their_runs() -> None:
    writer = ContentWriter()
    items = (
        Run(0, 0, "math", 9, (5, 6), "Mn"),
        Run(0, 0, "math", 9, (7,), "fi"),
        Run(0, 0, "math", 9, (5,), "M"),
    )
    writer.write(items, 100)
    assert writer.used["math"] == {5: "M", 6: "n", 7: "fi"}


def test_of_two_characters_of_one_glyph_the_lower_is_kept_in_any_order() -> None:
    # U+0394 Greek capital delta and U+2206 increment
    one, other = (Run(0, 0, "regular", 9, (5,), c) for c in "\u0394\u2206")
    for items in ((one, other), (other, one)):
        writer = ContentWriter()
        writer.write(items, 100)
        assert writer.used["regular"] == {5: "\u0394"}


def test_a_run_whose_text_does_not_match_its_glyphs_is_a_fault() -> None:
    with pytest.raises(ValueError):
        write(Run(0, 0, "math", 9, (5, 6), "M"))


def test_further_pieces_of_a_sign_are_ink_without_text() -> None:
    assert b"/Span<</ActualText()>>BDC<0005>Tj EMC" in write(run(0, 0, 5, "\u200b")).data

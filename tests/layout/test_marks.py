"""Marks: kept boxes, citations and references, delta and cloud."""

from __future__ import annotations

from inked import inked
from specimen import lane

from calcreport.layout.fonts import Fonts
from calcreport.layout.kit import Kit
from calcreport.layout.marks import cloud, edges
from calcreport.layout.model import Link
from calcreport.layout.sheet import MM, Lane
from calcreport.report.model import Reference, SourceLane


def test_the_same_number_is_the_same_box(kit: Kit) -> None:
    assert kit.marks.number(14) is kit.marks.number(14)


def test_citation_and_references_share_a_row_only_on_a_low_line(kit: Kit) -> None:
    low, low_foot = kit.marks.source(lane("21.2.2", 14), 9.0, 12.0)
    high, high_foot = kit.marks.source(lane("21.2.2", 14), 9.0, 30.0)
    assert len(low) == len(high) == 3  # citation, reference, link area
    assert low[0].y == low[1].y  # type: ignore[union-attr]
    assert high[1].y - high[0].y == 9.0  # type: ignore[union-attr]  # one source row of 9 pt
    assert high_foot - low_foot == 9.0


def test_every_reference_is_a_link_inside_the_source_lane(kit: Kit) -> None:
    many = SourceLane("22.2", tuple(Reference(f"B12-{n}", f"B12.{n}") for n in range(20)))
    items, foot = kit.marks.source(many, 9.0, 12.0)
    links = [item for item in items if isinstance(item, Link)]
    assert [link.target for link in links] == [f"B12.{n}" for n in range(20)]
    assert all(kit.sheet.source < link.x and link.x + link.width < kit.sheet.right for link in links)
    assert all(link.y + link.height <= foot + 1.0 for link in links)


def test_the_delta_stands_outside_the_frame_and_the_cloud_round_the_lane(kit: Kit, fonts: Fonts) -> None:
    mark = kit.marks.cloud("2", kit.sheet.text, (0.5, 0.5))
    assert mark is not None and mark.revision == "2" and kit.marks.cloud("", kit.sheet.text, (0.5, 0.5)) is None
    drawn = cloud(mark.left, mark.inside[0], mark.right, 40.0 - mark.inside[1])
    triangle, number, round_it = inked((*kit.marks.delta("2", 40.0), drawn), fonts)
    assert triangle.left > 0 and triangle.right < kit.sheet.left
    assert triangle.left < number.left and number.right < triangle.right
    assert triangle.top < number.top and number.foot < triangle.foot
    assert kit.sheet.work < round_it.left and round_it.right < kit.sheet.source
    assert round_it.top < 0 and round_it.foot > 40.0


def test_a_cloud_bulges_outwards_by_its_bow(kit: Kit) -> None:
    points = cloud(100.0, 10.0, 300.0, 50.0).points
    assert min(x for x, _ in points) == 100.0 - 1.24 and max(x for x, _ in points) == 300.0 + 1.24
    assert min(y for _, y in points) == 10.0 - 1.24 and max(y for _, y in points) == 50.0 + 1.24
    # 200 pt along the top in bows of about 4 mm: 200 / 11.34 = 17.6, so 18 bows of 5 points
    assert sum(y <= 10.0 for _, y in points) >= 18 * 5
    assert 4 * MM > 200 / 18


def test_edges_are_the_rules_or_the_clear_side_of_a_figure(kit: Kit, wide_kit: Kit) -> None:
    text = kit.sheet.text
    assert edges(kit.sheet, text) == (kit.sheet.work, kit.sheet.source)
    assert edges(kit.sheet, Lane(text.left, text.left + 150.0)) == (kit.sheet.work, text.left + 156.0)
    assert edges(wide_kit.sheet, wide_kit.sheet.text) == (
        wide_kit.sheet.text.left - 5.0,
        wide_kit.sheet.text.right + 5.0,
    )

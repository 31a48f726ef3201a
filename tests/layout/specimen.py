"""A small invented package made by hand, with every kind of block and sheet, for looking and for tests.

Formula trees and blocks -> `Report`. The numbers of B1 follow from its given values by hand (rectangular
stress block, statics); the others are plausible fillings. No person, firm or place in it is real.
"""

from __future__ import annotations

import re

from calcreport.report.model import (
    Bar,
    BeamLoad,
    Block,
    CheckLine,
    Column,
    CoverFacts,
    Fence,
    FigureBlock,
    Formula,
    Fraction,
    GivenRow,
    Givens,
    Heading,
    Index,
    IndexEntry,
    Letters,
    Line,
    Operator,
    Paragraph,
    Part,
    Reference,
    Report,
    ResultBox,
    Root,
    Row,
    Script,
    SectionFigure,
    SourceLane,
    Space,
    SpanFigure,
    Statement,
    Strong,
    Table,
    TableRow,
    TitleFacts,
    Words,
)

_SIGNS = {
    "+": "binary", "−": "binary", "·": "binary", "×": "binary",
    "=": "relation", "≤": "relation", "≥": "relation", "<": "relation", ">": "relation",
    ",": "punctuation",
}  # fmt: skip
_TOKEN = re.compile(r"\s*(in\.|[A-Za-zα-ω′]+_\{[^}]*\}|[A-Za-zα-ω′]+_\w+|[A-Za-zα-ω]+|[0-9][0-9,.]*|[^\s])")


def symbol(text: str) -> Formula:
    """Make a symbol: `A_s`, `M_u`, `φM_n`."""
    if text == "f′_c":
        return Script(Letters("f", "italic"), Letters("c"), Letters("′"))
    base, _, below = text.partition("_")
    if base.startswith("φ") and len(base) > 1:
        return Row((Letters("φ", "italic"), symbol(text[1:])))
    style = "italic" if len(base) == 1 else "upright"
    letters = Letters(base, "italic" if style == "italic" else "upright")
    return Script(letters, Letters(below.strip("{}"))) if below else letters


def unit(text: str) -> tuple[Formula, ...]:
    """Make the gap and the letters of a unit; a trailing figure is a power."""
    if text[-1] in "23" and len(text) > 1:
        return Space("unit"), Script(Letters(text[:-1]), None, Letters(text[-1]))
    return Space("unit"), Letters(text)


def m(text: str, of: str = "") -> Formula:
    """Make a formula from flat text with fences: `A_s f_y (d − a)`; `of` is a unit at the end."""
    items, rest = _items(text)
    assert not rest
    return Row((*items, *(unit(of) if of else ())))


def _items(text: str) -> tuple[list[Formula], str]:
    items: list[Formula] = []
    while text.strip():
        found = _TOKEN.match(text)
        assert found is not None
        token, text = found[1], text[found.end() :]
        if token == "(":
            body, text = _items(text)
            items.append(Fence("(", Row(tuple(body)), ")"))
        elif token == ")":
            return items, text
        elif token == "−" and not items:
            items.append(Operator("−", "prefix"))
        elif token in _SIGNS:
            items.append(Operator(token, _SIGNS[token]))  # type: ignore[arg-type]
        elif token == "in.":
            items.extend((Space("unit"), Letters(token)))
        elif token[0].isdigit() or token in "/|″′":
            items.append(Letters(token))
        else:
            if items and not isinstance(items[-1], Operator):
                items.append(Space("thin"))
            items.append(symbol(token))
    return items, ""


def over(above: str, below: str) -> Formula:
    """Make a fraction of two flat texts."""
    return Fraction(m(above), m(below))


def value(number: str, of: str = "") -> Formula:
    """Make a number with its unit."""
    return Row((Letters(number), *(unit(of) if of else ())))


def lane(citation: str, *lines: int, mark: str = "B1") -> SourceLane:
    """Make a source lane that names lines of the same calculation."""
    return SourceLane(citation, tuple(Reference(str(line), f"{mark}.{line}") for line in lines))


def given(number: int, name: str, says: str, shown: Formula, source: str, mark: str, delta: str = "") -> GivenRow:
    """Make one row of given values."""
    return GivenRow(number, f"{mark}.{number}", symbol(name), (says,), shown, (source,), delta)


def line(
    number: int,
    says: Words,
    name: str,
    formula: Formula | None,
    substitution: Formula | None,
    result: Formula,
    source: SourceLane,
    *,
    coherent: Formula | None = None,
    because: Formula | None = None,
    delta: str = "",
    mark: str = "B1",
) -> Line:
    """Make one numbered line."""
    return Line(
        number, f"{mark}.{number}", says, symbol(name), formula, substitution, coherent, result, source, because, delta
    )


def section() -> SectionFigure:
    """Make the section of B1: 16 x 28 in., 4-#9 at the bottom, 2-#5 at the top; lengths in mm."""
    inch = 25.4
    return SectionFigure(
        width=16 * inch,
        depth=28 * inch,
        cover=1.5 * inch,
        stirrup_diameter=0.5 * inch,
        bars=(
            Bar(4, 1.128 * inch, 25.436 * inch, "4-#9"),
            Bar(2, 0.625 * inch, (2.0 + 0.3125) * inch, "2-#5"),
        ),
        tension_face="bottom",
        neutral_axis=4.754 * inch,
        block_depth=3.922 * inch,
        labels=(
            ("b", value("16", "in.")),
            ("h", value("28", "in.")),
            ("d", m("d = 25.436")),
            ("c", m("c = 4.754")),
            ("a", m("a = 3.922")),
            ("strain_top", value("0.003")),
            ("strain_steel", m("ε_t = 0.01305")),
            ("stress", m("0.85 f′_c")),
            ("steel", m("A_s f_y")),
        ),
        alternative="Section 16 by 28 in. with 4 No. 9 bars at the bottom; strain and stress diagrams.",
    )


def span() -> SpanFigure:
    """Make the span of B1: 24 ft, a uniform and a point load, parabola and triangle added."""
    length, w, p = 7.315, 20.0, 60.0
    reach = [length * i / 24 for i in range(25)]
    moments = tuple((x, w * x * (length - x) / 2 + (p / 2) * min(x, length - x) - 90.0 * (x / length)) for x in reach)
    return SpanFigure(
        span=length,
        supports=((0.0, "pinned"), (length, "roller")),
        loads=(
            BeamLoad(0.0, length, 1.0, m("w_u = 1.37", "kip/ft")),
            BeamLoad(length / 2, length / 2, 1.0, m("P_u = 13.5", "kip")),
        ),
        moments=moments,
        moment_labels=(
            (length / 2, value("356", "kip·ft")),
            (length, value("−66.4", "kip·ft")),
        ),
        span_label=value("24", "ft"),
        alternative="Simple span of 24 ft with uniform load and a point load at the middle.",
    )


def flexure() -> tuple[Block, ...]:
    """Make the lines of B1: flexure at one place."""
    rows = (
        given(1, "b", "width of the section", value("16", "in."), "project file", "B1"),
        given(2, "h", "overall depth", value("28", "in."), "project file", "B1"),
        given(3, "c_c", "clear cover to the stirrup", value("1.5", "in."), "criteria", "B1"),
        given(4, "d_s", "stirrup diameter, #4", value("0.5", "in."), "bar table", "B1"),
        given(5, "d_b", "bar diameter, 4-#9", value("1.128", "in."), "bar table", "B1"),
        given(6, "A_s", "area of tension steel, 4-#9", value("4.00", "in.2"), "bar table", "B1", "1"),
        given(7, "f′_c", "specified strength of concrete", value("4500", "psi"), "material C4.5", "B1"),
        given(8, "f_y", "specified yield strength of steel", value("60", "ksi"), "material G60", "B1"),
        given(9, "M_u", "moment from factored loads, midspan", value("356", "kip·ft"), "FL2, line 14", "B1"),
    )
    return (
        Heading("Bottom steel at midspan", 1),
        Paragraph(("Sagging moment, tension at the bottom. Moments are positive when sagging.",), "note"),
        Givens(rows),
        FigureBlock(section()),
        line(10, ("Effective depth, one layer",), "d", m("h − c_c − d_s − d_b/2"),
             m("28 − 1.5 − 0.5 − 1.128/2"), value("25.436", "in."), lane("geometry", 2, 3, 4, 5)),
        line(11, ("Depth of the stress block",), "a",
             Fraction(m("A_s f_y"), m("0.85 f′_c b")), Fraction(m("4.00(60)"), m("0.85(4.5)(16)")),
             value("3.922", "in."), lane("22.2.2.4.1", 1, 6, 7, 8)),
        line(12, ("Factor for the depth of the block",), "β_1",
             m("0.85 − 0.05(f′_c − 4)"), m("0.85 − 0.05(4.5 − 4)"), value("0.825"),
             lane("Table 22.2.2.4.3", 7), because=m("4 < f′_c = 4.5 < 8", "ksi")),
        line(13, ("Neutral axis",), "c", m("a/β_1"), m("3.922/0.825"), value("4.754", "in."),
             lane("22.2.2.4.1", 11, 12)),
        line(14, ("Strain in the extreme tension steel; one layer, so d",), "ε_t",
             Row((Letters("0.003"), Fraction(m("d − c"), m("c")))),
             Row((Letters("0.003"), Fraction(m("25.436 − 4.754"), Letters("4.754")))),
             value("0.01305"), lane("22.2.1.2", 10, 13)),
        Statement(15, "B1.15", ("Tension-controlled:",), m("ε_t = 0.01305 ≥ 0.00507"), lane("21.2.2", 14)),
        line(16, ("Strength reduction factor",), "φ", None, None, value("0.90"), lane("Table 21.2.2", 15)),
        line(17, ("Nominal strength",), "M_n", m("A_s f_y (d − a/2)"),
             m("4.00(60)(25.436 − 3.922/2) × 1 ft / 12 in."), value("469.5", "kip·ft"),
             lane("22.3.1.1", 6, 8, 10, 11), delta="1"),
        line(18, ("Design strength",), "φM_n", None, m("0.90(469.5)"), value("423", "kip·ft"),
             lane("9.5.1.1", 16, 17)),
        line(19, ("Minimum steel, the greater of two",), "A_{s,min}",
             Row((Letters("max"), Fence("(", Row((
                 Fraction(Row((Letters("3"), Root(symbol("f′_c")))), symbol("f_y")), Space("thin"), m("b d"),
                 Operator(",", "punctuation"), Fraction(Letters("200"), symbol("f_y")),
                 Space("thin"), m("b d"))), ")"))),
             Row((Letters("max"), Fence("(", Row((
                 Fraction(Row((Letters("3"), Root(Letters("4500")))), Letters("60,000")), m("(16)(25.436)"),
                 Operator(",", "punctuation"), Fraction(Letters("200"), Letters("60,000")), m("(16)(25.436)"))), ")"))),
             value("1.37", "in.2"), lane("9.6.1.2", 1, 7, 8, 10)),
        check(20, "flexure", over("M_u", "φM_n"), over("356", "423"), "0.842", "OK", lane("9.5.1.1", 9, 18)),
        check(21, "minimum steel", over("A_{s,min}", "A_s"), over("1.37", "4.00"), "0.343", "OK",
              lane("9.6.1.1", 19, 6)),
        check(22, "section is tension-controlled", m("ε_t ≥ 0.00507"), m("0.01305 ≥ 0.00507"), "", "OK",
              lane("9.3.3.1", 15)),
        Paragraph(("By another method: fibres, 400 strips, ", m("M_n = 469.5", "kip·ft"), ", difference 0.0 %.",),
                  "note"),
        ResultBox(23, "B1.23", ("Use 4-#9 at the bottom, #4 stirrups, 1.5 in. clear cover.",), lane("", 20, 21, 22)),
    )  # fmt: skip


def check(
    number: int, name: str, formula: Formula, substitution: Formula | None, ratio: str, verdict: str,
    source: SourceLane, reason: Words = (), mark: str = "B1", delta: str = "",
) -> CheckLine:  # fmt: skip
    """Make one check."""
    return CheckLine(
        number, f"{mark}.{number}", name, formula, substitution, ratio, verdict,  # type: ignore[arg-type]
        reason, source, delta,
    )  # fmt: skip


def shear() -> tuple[Block, ...]:
    """Make a longer calculation with a failing check, a table over two sheets and a span figure."""
    mark = "B14"
    rows = tuple(
        given(n, name, says, shown, source, mark)
        for n, name, says, shown, source in (
            (1, "b_w", "width of the web", value("16", "in."), "project file"),
            (2, "d", "effective depth", value("27.4", "in."), "B14 flexure, line 12"),
            (3, "f′_c", "specified strength of concrete, normal weight, from the criteria of this project",
             value("4500", "psi"), "material C4.5"),
            (4, "f_{yt}", "yield strength of stirrups", value("60", "ksi"), "material G60"),
            (5, "A_v", "stirrup area, 2 legs #4", value("0.40", "in.2"), "bar table"),
            (6, "s", "stirrup spacing at the support", value("9", "in."), "assembly areas, ASCE/SEI 7-22 Table 4.3-1"),
        )
    )  # fmt: skip
    stations = tuple(
        TableRow(
            (
                (f"{n * 0.5:.1f} ft",),
                (f"1.2D + 1.6L + 0.5({'Lr' if n % 3 else 'S'}), L on spans {n % 4 + 1} and {n % 4 + 2}",),
                (f"{118.4 - 2.1 * n:.1f}",),
                (f"{116.3:.1f}",),
                (f"{(118.4 - 2.1 * n) / 116.3:.3f}",),
            ),
            "loud" if n == 0 else "governing" if n == 1 else "",
            f"B14.row{n}",
        )
        for n in range(44)
    )
    return (
        Heading("Shear right of grid 2", 1),
        Paragraph(("This sheet covers ", Strong("one-way shear"), " only. Torsion is below its threshold, see ",
                   Reference("line 12", "B14.12"), "; the opening at ", m("x = 4", "ft"),
                   " is covered by calculation V1. Shear reinforcement is anchored as shown on the drawings, and ",
                   "nothing on this sheet decides anchorage.")),
        Givens(rows),
        FigureBlock(span()),
        line(7, ("Concrete contribution with at least minimum shear reinforcement",), "V_c",
             Row((Letters("2"), Space("thin"), symbol("λ"), Root(symbol("f′_c")), Space("thin"), m("b_w d"))),
             Row((Letters("2(1.0)"), Root(Letters("4500")), m("(16)(27.4) × 1 kip / 1000 lb"))),
             value("58.8", "kip"), lane("Table 22.5.5.1", 1, 2, 3, mark=mark), mark=mark),
        line(8, ("Steel contribution",), "V_s", Fraction(m("A_v f_{yt} d"), m("s")),
             Fraction(m("0.40(60)(27.4)"), m("9")), value("73.1", "kip"),
             lane("22.5.8.5.3", 2, 4, 5, 6, mark=mark), mark=mark),
        line(9, ("Nominal strength",), "V_n", m("V_c + V_s"), m("58.8 + 73.1"), value("131.9", "kip"),
             lane("22.5.1.1", 7, 8, mark=mark), mark=mark),
        line(10, ("Design strength",), "φV_n", None, m("0.75(131.9)"), value("98.9", "kip"),
             lane("9.5.1.1", 9, mark=mark), mark=mark, delta="2"),
        line(11, ("Required strength at the critical section, by load case, all of them written out because ",
                  "the sum is what the reader checks first"), "V_u",
             m("1.2 V_D + 1.6 V_L + 0.5 V_S + 1.2 V_{SDL} + 1.6 V_{corridor} + 0.5 V_{drift} + 1.2 V_{facade}"),
             m("1.2(31.46) + 1.6(22.08) + 0.5(6.125) + 1.2(9.75) + 1.6(11.2) + 0.5(3.11) + 1.2(8.6125)"),
             value("117.6", "kip"), SourceLane("ASCE/SEI 7-22: 2.3.1", (Reference("FL2-4", "B1.1"),)), mark=mark,
             coherent=value("117,650", "lb")),
        Statement(12, "B14.12", ("Torsion may be neglected where it is below the threshold",),
                  m("T_u = 2.1 ≤ φT_{th} = 9.4", "kip·ft"), lane("22.7.4.1", mark=mark)),
        Paragraph(("The wall load is taken from the architect's drawing and is to be verified.",), "assumption"),
        Paragraph(("Chapter 18 asks for more than this calculation covers where the member is part of the ",
                   "seismic force-resisting system."), "caution"),
        check(13, "shear", over("V_u", "φV_n"), over("117.6", "98.9"), "1.189", "NG",
              lane("9.5.1.1", 10, 11, mark=mark), ("Demand exceeds capacity by 18.9 %.",), mark),
        check(14, "stirrup spacing", m("s ≤ d/2"), m("9 ≤ 13.7", "in."), "0.657", "OK",
              lane("Table 9.7.6.2.2", 2, 6, mark=mark), (), mark),
        check(15, "minimum shear reinforcement over the whole length of the clear span",
              over("A_{v,min}", "A_v"), over("0.113", "0.40"), "0.282", "OK", lane("9.6.3.4", 5, mark=mark), (), mark),
        check(16, "torsion", m("T_u ≤ φT_n"), None, "", "not evaluated", lane("22.7", mark=mark),
              ("The opening at grid 2 is not covered by this calculation.",), mark),
        check(17, "crack control", m("s ≤ s_{max}"), None, "", "not applicable", lane("24.3", mark=mark), (), mark),
        Heading("Shear along the span"),
        Table(
            (
                Column(("from face of support",)),
                Column(("combination and pattern",), stretch=1.0),
                Column((symbol("V_u"), " kip"), "right"),
                Column((symbol("φV_n"), " kip"), "right"),
                Column(("ratio",), "right"),
            ),
            stations,
            ("Stations every 6 in.",),
            18,
            "B14.18",
            lane("9.4.3.2", 10, 11, mark=mark),
        ),
        FigureBlock(span(), beside=False, caption=("Loads and moments of span 2, factored.",)),
        ResultBox(19, "B14.19", ("#4 stirrups at 9 in. do not suffice; see ", Reference("line 13", "B14.13"), "."),
                  lane("", 13, mark=mark), "2"),
    )  # fmt: skip


def facts(subject: str, code: str = "ACI 318-19 (in.-lb)", fingerprint: str = "input 3fa2 81c0") -> TitleFacts:
    """Make title block facts."""
    return TitleFacts(
        project="Mill Lane Boathouse, Level 2 floor and roof terrace",
        project_number="Q-2604",
        subject=subject,
        code=code,
        status="FOR REVIEW",
        status_note="not for construction, not for permit",
        revision="rev 1",
        date="2 Nov 2026",
        fingerprint=fingerprint,
        program="calcreport 0.1.0",
    )


def summary() -> tuple[Block, ...]:
    """Make a check summary."""
    head = ("Mark", "Section", "Where it governs", "Demand", "Capacity", "Ratio", "")
    members = [
        ("B14", "16 × 30", "shear, right of grid 2", "117.6", "98.9 kip", "1.189", "NG"),
        ("B1", "16 × 28", "bottom steel, midspan", "356", "423 kip·ft", "0.842", "OK"),
        *((f"B{n}", "16 × 30", "top steel, face of grid 3", f"{300 + n}", "562 kip·ft", f"{(300 + n) / 562:.3f}", "OK")
          for n in range(20, 50)),
    ]  # fmt: skip
    return (
        Heading("Check summary", 1),
        Paragraph(("32 members, 141 checks. ", Strong("1 NG"), ", 1 not evaluated, 0 not covered.")),
        Table(
            (Column(("Mark",)), Column(("Check",)), Column(("What",), stretch=1.0), Column(("Line",))),
            (
                TableRow((("B14",), ("shear, right of grid 2",), ("117.6 > 98.9 kip, ratio 1.189 ", Strong("NG")),
                          (Reference("B14.13", "B14.13"),)), "loud"),
                TableRow((("B14",), ("torsion",), ("not evaluated: the opening at grid 2 is not covered",),
                          (Reference("B14.16", "B14.16"),))),
            ),
            ("Needs attention",),
        ),
        Table(
            tuple(Column((text,), "right" if text in ("Demand", "Ratio") else "left",
                         1.0 if text == "Where it governs" else 0.0) for text in head),
            tuple(TableRow(tuple((cell,) for cell in row), "loud" if row[-1] == "NG" else "") for row in members),
            ("Members by ratio",),
        ),
        Paragraph(("Computed demand does not exceed computed capacity for the checks listed, NG ones excepted.",)),
    )  # fmt: skip


def echo() -> tuple[Block, ...]:
    """Make an input echo with long texts."""
    path = "calculations.B14.given.V_u.value.combination_with_a_very_long_name_that_has_no_spaces"
    rows = tuple(
        TableRow(((f"mill-lane.yaml:{n + 12}",), (path if n % 7 == 0 else f"calculations.B{n}.given.b",),
                  ("16 in" if n % 5 else "assembly areas, ASCE/SEI 7-22 Table 4.3-1, reduced for tributary area",)))
        for n in range(70)
    )  # fmt: skip
    return (
        Heading("Input echo", 1),
        Paragraph(("Inputs are the user's and are not verified by the program.",), "caution"),
        Table((Column(("Place",)), Column(("Key",)), Column(("Value as written",), stretch=1.0)), rows),
    )


def cover(members: int = 6) -> CoverFacts:
    """Make the facts of a cover."""
    scope = (("S1 S2", "one-way slabs, Level 2"), ("B1 B12 B14 B15", "beams on grid B"), ("G3", "girder, grid 3"))
    more = tuple((f"B{n}", "beam, roof terrace") for n in range(20, 14 + members))
    return CoverFacts(
        title="Mill Lane Boathouse, Level 2 floor and roof terrace",
        header=("14 Mill Lane, lot 7", "Project Q-2604", "Permit no."),
        issue="ISSUE 2",
        date="16 November 2026",
        status="FOR REVIEW",
        status_note="not for construction, not for permit",
        scope=(*scope, *more),
        elsewhere=(
            ("columns, footings", "later package, not issued"),
            ("lateral system", "by the engineer of record"),
            ("fire rating, embedments", "by others, see drawings"),
        ),
        basis=(
            "Adopted code IBC 2024, no local amendments listed",
            "ACI 318-19 (in.-lb); loads and combinations ASCE/SEI 7-22; risk category II; seismic design category B",
        ),
        result=(
            ("1 check NG: ", Reference("B14 shear, line 13", "B14.13")),
            ("1 check not evaluated, 0 limit states not covered, 1 assumption open.",),
            ("Changed since issue 1: B1, B14. Unchanged in every printed value: S1 S2 B12 B15 G3.",),
        ),
        result_is_loud=True,
        cautions=(
            "Prepared with a program. Each number can be worked again from its own sheet; inputs are echoed in "
            "appendix A and are not verified by the program.",
            "Adequacy, choice of edition, loads and load path rest with the engineer who seals. Valid for this "
            "project only; local amendments apply only where listed.",
            "Not final unless sealed, signed and dated.",
        ),
        seal_words="Seal, signature and date of the engineer in responsible charge",
        office=("(office name from project file)", "(contact from project file)"),
        fingerprint="7c41 90de 2b6f 118a",
    )


def report(paper: str = "letter", members: int = 6) -> Report:
    """Make the whole package."""
    parts = (
        Part("COVER", "Cover", "cover", facts("COVER", "", ""), cover=cover(members)),
        Part("INDEX", "Index of sheets", "index", facts("INDEX", "", ""), index=Index((
            IndexEntry("SUMMARY", "Check summary", "SUMMARY", "NG", "1", "2 Nov 2026"),
            IndexEntry("B1", "Level 2 beam on grid B, 2 to 4, flexure at midspan", "B1", "", "1", "2 Nov 2026"),
            IndexEntry("B14", "Level 2 beam on grid B, 4 to 5, shear", "B14", "NG", "2", "16 Nov 2026"),
            IndexEntry("A", "Input echo", "A", "", "1", "2 Nov 2026"),
        ))),
        Part("SUMMARY", "Check summary", "front", facts("CHECK SUMMARY", "", ""), summary()),
        Part("B1", "B1  Level 2 beam on grid B, 2 to 4", "calculation",
             facts("B1  Level 2 beam on grid B, 2 to 4: flexure at midspan"), flexure()),
        Part("B14", "B14  Level 2 beam on grid B, 4 to 5", "calculation",
             facts("B14  Level 2 beam on grid B, 4 to 5: shear"), shear(),
             strip="1 CHECK NG IN THIS CALCULATION: LINE 13, SHEAR"),
        Part("A", "Input echo", "appendix", facts("APPENDIX A  Input echo", ""), echo()),
    )  # fmt: skip
    return Report(
        title="Mill Lane Boathouse, structural calculations",
        author="",
        subject="Structural calculations",
        language="en-US",
        date="2026-11-16",
        paper="a4" if paper == "a4" else "letter",
        parts=parts,
    )

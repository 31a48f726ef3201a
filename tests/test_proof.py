"""Claims proved from the finished PDF alone, over every sample and over random beams in both systems of units.

The reader in `tests/proof` shares no code with the program: it reads glyphs, strokes and fonts out of the PDF, puts the
printed mathematics together by geometry and works it again. A random run is repeated with PROOF_SEED.
"""

from __future__ import annotations

import ast
import os
import sys
from collections import Counter
from collections.abc import Iterator
from concurrent.futures import ProcessPoolExecutor
from dataclasses import replace
from pathlib import Path
from random import Random

import pytest
from pypdf import PdfReader

from tests.proof.account import Finding
from tests.proof.beams import SI, US, edges, project
from tests.proof.calculations import Calculation, assemble
from tests.proof.claims import examine
from tests.proof.frames import find_frame
from tests.proof.glyphs import PageInk, Reader
from tests.proof.marks import marks
from tests.proof.members import in_summary, results
from tests.proof.numbering import numbering
from tests.proof.order import out_of_order
from tests.proof.package import Package, read_package
from tests.proof.prove import ROOT, Proof, prove
from tests.proof.sampler import sampler
from tests.proof.sheets import SheetPage, read_sheet
from tests.proof.tables import Table

SAMPLES = sorted(path.parent.name for path in (ROOT / "samples").glob("*/project.yaml"))
SYSTEMS = {"random us": US, "random si": SI}
#: pairs of a loaded beam and its section, in each system
PAIRS = 40
#: pages of a random package whose text is also taken out by pypdf, which is slow
TEXT_PAGES = 12
SEED = int(os.environ.get("PROOF_SEED", "1"))
#: a share of lines that may stay unread
UNREAD = 0.05


@pytest.fixture(scope="session")
def proofs(tmp_path_factory: pytest.TempPathFactory) -> dict[str, Proof]:
    """Build and prove every project once."""
    folder = tmp_path_factory.mktemp("proof")
    jobs: list[tuple[str, Path, Path, int, tuple[str, ...]]] = [
        (name, ROOT / "samples" / name, folder / f"{name}.pdf", 1000, ("--sampler",)) for name in SAMPLES
    ]
    (folder / "edges.yaml").write_text(edges(), encoding="utf-8")
    jobs.append(("edges", folder / "edges.yaml", folder / "edges.pdf", 1000, ("--sampler",)))
    for name, system in SYSTEMS.items():
        source = folder / f"{system.name}.yaml"
        source.write_text(project(system, PAIRS, SEED), encoding="utf-8")
        jobs.insert(0, (name, source, source.with_suffix(".pdf"), TEXT_PAGES, ()))
    with ProcessPoolExecutor(2) as pool:
        return {proof.name: proof for proof in pool.map(prove, *zip(*jobs, strict=True))}


@pytest.fixture(params=[*SAMPLES, "edges", *SYSTEMS])
def proof(request: pytest.FixtureRequest, proofs: dict[str, Proof]) -> Proof:
    """One package that was built."""
    found = proofs[request.param]
    assert found.code in (0, 1), found.said[-2000:]
    return found


def none_of(findings: list[Finding], *claims: str) -> None:
    """Fail with the findings of some claims."""
    found = [str(finding) for finding in findings if finding.claim in claims]
    assert not found, f"{len(found)} findings:\n" + "\n".join(found[:60])


def told(findings: list[Finding], word: str) -> None:
    """Fail with the findings whose claim has a word."""
    none_of(findings, *{finding.claim for finding in findings if word in finding.claim})


# ---------------------------------------------------------------- lines


def test_lines_can_be_read(proof: Proof) -> None:
    account = proof.account
    listed = "\n".join(map(str, account.unread))
    assert account.worked > 0.3 * account.lines > 5, "next to nothing was read"
    assert account.unread_lines <= UNREAD * account.worked, f"{account.unread_lines} of {account.worked}:\n{listed}"
    none_of(account.findings, "readable ink")


def test_printed_inputs_give_the_printed_result(proof: Proof) -> None:
    none_of(proof.account.findings, "a substitution gives its result", "a formula gives its result")
    none_of(proof.account.findings, "two spellings of a given value agree", "bars are what they are called")
    assert proof.account.counts["substitutions"] > 10


def test_a_substitution_is_its_formula(proof: Proof) -> None:
    none_of(proof.account.findings, "a substitution is its formula")
    assert proof.account.counts["formulas with symbols"] > 10


def test_rows_of_tables_follow_their_formula(proof: Proof) -> None:
    none_of(proof.account.findings, "a row formula gives its cells", "the row shown in full is the worst")


def test_the_row_named_is_the_row_taken(proof: Proof) -> None:
    none_of(proof.account.findings, "the row named is the row taken")


def test_checks_and_comparisons_read_true(proof: Proof) -> None:
    none_of(proof.account.findings, "a ratio is its quotient", "a verdict follows from print")
    none_of(proof.account.findings, "printed comparisons are true")
    assert proof.account.counts["comparisons"] > 2


def test_a_method_closes(proof: Proof) -> None:
    none_of(proof.account.findings, "a method closes")


def test_a_condition_names_what_the_sheet_shows(proof: Proof) -> None:
    none_of(proof.account.findings, "a condition names what the sheet shows")


def test_a_value_has_one_printed_form(proof: Proof) -> None:
    none_of(proof.account.findings, "one printed form of a value")


def test_source_lane_names_what_a_formula_takes(proof: Proof) -> None:
    none_of(proof.account.findings, "the source lane names what a formula takes")
    assert proof.account.counts["sources"] > 20


@pytest.mark.parametrize("name", [*SAMPLES, *SYSTEMS])
def test_few_values_are_long(proofs: dict[str, Proof], name: str) -> None:
    # design, section 7: the plainest search ends 81 % at four digits or fewer, 95 % at five, 0.8 % at seven or more
    proof = proofs[name]
    digits = proof.account.digits
    total = sum(digits.values())
    shares = [sum(n for d, n in digits.items() if d <= most) / total for most in (4, 5, 6)]
    told = f"{dict(sorted(digits.items()))}\n" + "\n".join(proof.account.long)
    assert shares[0] >= 0.81, told
    assert shares[1] >= 0.95, told
    assert 1 - shares[2] <= 0.008 or total < 125, told
    assert max(digits) <= 8, told


# ---------------------------------------------------------------- package


def test_sheets_have_one_name_everywhere(proof: Proof) -> None:
    told([finding for finding in proof.numbering if "links" not in finding.claim], "")


def test_links_lead_where_they_say(proof: Proof) -> None:
    told(proof.numbering, "links")


def test_file_is_open_embedded_and_of_one_size(proof: Proof) -> None:
    none_of(proof.marks, "fonts are embedded", "no encryption", "links are the only annotations", "one page size")
    none_of(proof.marks, "under 10 MB for 200 sheets")


def test_seal_area_is_empty(proof: Proof) -> None:
    none_of(proof.marks, "the seal area is empty")


def test_words_for_persons_are_absent(proof: Proof) -> None:
    none_of(proof.marks, "forbidden words")


def test_failures_and_ratios_are_repeated(proof: Proof) -> None:
    told(proof.marks, "NG")
    told(proof.marks, "summary")
    none_of(proof.marks, "the strip names what fails", "the cover counts what fails")
    assert proof.code == (1 if proof.failed else 0)


def test_title_blocks_are_whole(proof: Proof) -> None:
    none_of(proof.marks, "title block")


def test_values_handed_on_keep_their_form(proof: Proof) -> None:
    none_of(proof.marks, "one printed form of a value", "sources are there")


def test_nothing_is_printed_over_print(proof: Proof) -> None:
    told(proof.overlaps, "")


@pytest.mark.parametrize("name", [*SAMPLES, "edges"])
def test_sampler_repeats_the_package(proofs: dict[str, Proof], name: str) -> None:
    proof = proofs[name]
    none_of(proof.sampler, "the sampler is one sheet", "a sampler line is the line it repeats")
    none_of(proof.sampler, "the sampler holds the highest ratios", "a margin follows from its numbers")
    none_of(proof.sampler, "one printed form of a value")
    assert proof.sampled > 2


@pytest.mark.parametrize("program", ["pypdf", "pdfium"])
def test_text_comes_out_in_reading_order(proof: Proof, program: str) -> None:
    found = proof.order[program]
    assert not found, f"{len(found)} findings:\n" + "\n".join(found[:40])


def test_random_beams_fail_and_pass(proofs: dict[str, Proof]) -> None:
    for name in SYSTEMS:
        checks = proofs[name].account.counts["ratios"]
        assert 0.02 < proofs[name].failed / checks < 0.6, "checks of random beams should come out both ways"


# ---------------------------------------------------------------- the reader itself


@pytest.fixture(scope="session")
def subject(proofs: dict[str, Proof]) -> Package:
    """A package to plant errors in."""
    return read_package(proofs["mill-lane"].path)


def _work_digits(pages: list[SheetPage], inks: dict[int, PageInk]) -> Iterator[tuple[SheetPage, int]]:
    """Yield each digit of numbers in formulas and tables, as the place of its glyph."""
    for page in pages:
        frame = find_frame(inks[page.index])
        assert frame is not None and frame.lanes is not None
        for at, glyph in enumerate(inks[page.index].glyphs):
            if glyph.text in "0123456789" and frame.lanes[0] < glyph.left < frame.lanes[1] and glyph.y > frame.block:
                yield page, at


def _told(calculation: Calculation) -> set[str]:
    account = examine(calculation)
    return {str(finding) for finding in (*account.findings, *account.unread)}


def test_planted_digits_are_found(subject: Package) -> None:
    """A digit changed anywhere in the work is noticed, but for words, limits that still hold and the like."""
    pages = subject.sheets
    inks = {page.index: subject.pages[page.index].ink for page in pages}
    places = Random(SEED).sample(list(_work_digits(pages, inks)), 120)
    before = {calculation.mark: _told(calculation) for calculation in subject.calculations}
    escaped = []
    for page, at in places:
        ink = inks[page.index]
        glyph = ink.glyphs[at]
        changed = glyph._replace(text=str((int(glyph.text) + 1) % 10))
        other = PageInk(ink.width, ink.height, [*ink.glyphs[:at], changed, *ink.glyphs[at + 1 :]], ink.lines, ink.areas)
        sheet = read_sheet(other, page.index)
        assert sheet is not None
        (calculation,) = assemble([sheet if p is page else p for p in pages if p.mark == page.mark])
        if not _told(calculation) - before[page.mark]:
            around = "".join(g.text for g in ink.glyphs[max(0, at - 12) : at + 10])
            escaped.append(f"{page.name} y {glyph.y:.0f}: {glyph.text} in {around}")
    assert len(escaped) <= 0.12 * len(places), "\n".join(escaped)


def test_planted_faults_of_the_package_are_found(subject: Package) -> None:
    def claims(pages: list[object], **other: object) -> Counter[str]:
        package = replace(subject, pages=pages, **other)  # type: ignore[arg-type]
        return Counter(finding.claim for finding in (*numbering(package), *marks(package)))

    clean = claims(list(subject.pages))
    first = subject.sheets[0].index

    def with_page(**changes: object) -> Counter[str]:
        pages = [replace(p, **changes) if p.index == first else p for p in subject.pages]  # type: ignore[arg-type]
        return claims(list(pages)) - clean

    page = subject.pages[first]
    assert with_page(name=subject.pages[first + 1].name)["sheet numbers are unique"]
    assert with_page(label="X-1")["sheet number is page label"]
    assert with_page(text=page.text + "\nThis design is safe.")["forbidden words"]
    assert not with_page(text=page.text + "\nCHECKER, unsafe, safety")["forbidden words"]
    astray = [replace(link, page=0) for subject_page in subject.pages for link in subject_page.links[:3]]
    assert with_page(links=[*page.links, *astray])["links lead to what they name"]
    other = (claims(list(subject.pages), fonts=[("Plain", False)]) - clean)["fonts are embedded"]
    assert other == 1


def test_planted_faults_of_the_sampler_are_found(subject: Package) -> None:
    def claims(page: SheetPage) -> set[str]:
        return {finding.claim for finding in sampler(replace(subject, sampler=[page]))}

    (page,) = subject.sampler
    assert claims(page) == set()
    first = next(line for line in page.lines if any(s.kind == "check" for s in line.statements))
    rest = [line for line in page.lines if line is not first]
    assert claims(replace(page, lines=rest)) == {"the sampler holds the highest ratios"}
    for changes in ({"number": first.number + 1}, {"source": ["9.9.9 1"]}, {"statements": first.statements[:-1]}):
        other = replace(first, **changes)  # type: ignore[arg-type]
        assert "a sampler line is the line it repeats" in claims(replace(page, lines=[other, *rest]))
    table = next(table for table in page.tables if table.columns[1].name == "Check")
    for column, text, claim in ((5, "+99.0", "a margin follows from its numbers"),
                                (4, "1,000 in.", "a margin follows from its numbers"),
                                (3, "31 in.", "one printed form of a value")):  # fmt: skip
        row = [text if place == column else cell for place, cell in enumerate(table.rows[0])]
        tables = [replace(table, rows=[row, *table.rows[1:]])]
        assert claim in claims(replace(page, tables=tables)), text
    assert {f.claim for f in sampler(replace(subject, sampler=[page, page]))} == {"the sampler is one sheet"}


def test_planted_faults_of_like_members_are_found(proofs: dict[str, Proof]) -> None:
    package = read_package(proofs["long-floor"].path)
    calculation = next(c for c in package.calculations if results(c))
    summary = [table for page in package.pages if page.name.startswith("SUMMARY") for table in page.tables]

    def claims(tables: list[Table]) -> set[str]:
        return {finding.claim for finding in in_summary(calculation, tables)}

    def with_cell(place: int, column: str, text: str) -> list[Table]:
        at = next(i for i, c in enumerate(summary[place].columns) if c.name == column)
        row = next(i for i, cells in enumerate(summary[place].rows) if cells[0] == "G6")
        rows = [
            [*cells[:at], text, *cells[at + 1 :]] if i == row else cells for i, cells in enumerate(summary[place].rows)
        ]
        return [*summary[:place], replace(summary[place], rows=rows), *summary[place + 1 :]]

    governing = next(i for i, table in enumerate(summary) if table.column("Governing check"))
    grid = next(i for i, table in enumerate(summary) if table.column("flexure"))
    assert claims(summary) == set()
    assert claims(with_cell(governing, "Ratio", "0.894")) == {"the summary shows the governing ratio"}
    assert claims(with_cell(grid, "flexure", "0.894")) == {"the summary repeats the ratios"}
    assert claims(summary[:governing]) == {"every member stands once in the summary"}
    for here in calculation.tables:
        if here.table.set_name == "member" and any(row[0] == "G9" for row in here.table.rows):
            # the governing member's exact limit and its fellow's: with both gone another row is the worst
            here.table.rows = [row for row in here.table.rows if row[0] != "G9"]
    assert "the member told in full is the worst" in claims(summary)


def test_order_is_judged(subject: Package) -> None:
    sheet = subject.sheets[0]
    text = subject.reader.pages[sheet.index].extract_text()
    assert not out_of_order(text, sheet.lines, sheet.index)
    rows = text.split("\n")
    assert out_of_order("\n".join(reversed(rows)), sheet.lines, sheet.index)
    middle = len(rows) // 2
    moved = [*rows[:middle], *rows[middle + 3 :], *rows[middle : middle + 3]]
    assert out_of_order("\n".join(moved), sheet.lines, sheet.index)


def test_every_page_was_read_whole(subject: Package) -> None:
    """The reader's glyphs hold the text that another reader takes out, letter for letter."""
    reader = PdfReader(subject.path)
    for page in reader.pages:
        own = Counter("".join(g.text for g in Reader().read(page).glyphs if g.text not in " \u200b"))
        others = Counter(c for c in page.extract_text() if not c.isspace() and c != "\u200b")
        assert own == others


def test_every_claim_of_the_reader_is_tested() -> None:
    """Each claim that the reader can report stands in a test above, by name or by a word of it."""
    source = Path(__file__).read_text(encoding="utf-8")
    claims = set()
    for module in Path(__file__).with_name("proof").glob("*.py"):
        for node in ast.walk(ast.parse(module.read_text(encoding="utf-8"))):
            if isinstance(node, ast.Call) and isinstance(node.args[0] if node.args else None, ast.Constant):
                name = node.func.attr if isinstance(node.func, ast.Attribute) else getattr(node.func, "id", "")
                if name == "found" or (name == "Finding" and module.name != "numbering.py"):
                    claims.add(node.args[0].value)  # type: ignore[attr-defined]
    by_word = {claim for claim in claims if "NG" in claim or "summary" in claim}
    by_word |= {"nothing is printed over print", "unread"}
    assert len(claims) > 25
    assert {claim for claim in claims - by_word if f'"{claim}"' not in source} == set()


def test_reader_shares_no_code_with_the_program() -> None:
    allowed = set(sys.stdlib_module_names) | {"pypdf", "pypdfium2"}
    modules = sorted(Path(__file__).with_name("proof").glob("*.py"))
    assert len(modules) > 10
    for module in modules:
        for node in ast.walk(ast.parse(module.read_text(encoding="utf-8"))):
            names = [alias.name for alias in node.names] if isinstance(node, ast.Import) else []
            if isinstance(node, ast.ImportFrom) and not node.level:
                names = [node.module or ""]
            assert {name.split(".")[0] for name in names} <= allowed, f"{module.name}: {names}"

"""The reviewer's sampler: one sheet, by a rule that is printed, in the package on request or alone.

That its lines repeat those of the package and that its ratios are the highest is proved in `tests/test_proof.py`.
"""

from __future__ import annotations

from pathlib import Path

import pypdf
import pytest

from calcreport.report.digits import Figure, number_text
from calcreport.report.sampler import flipping_figure
from tests.commands.desk import EARLIER, PROJECT, make, names, run

TEMPLATE = """\
template: trial
title: Trial
code: {name: OWN}
units: [us]
symbols: {b: {unit: in, says: width}, m: {unit: in, says: least width}, r: {unit: '1', says: ratio}}
given: {b: }
lines:
  - {gives: m, formula: '2 in', cite: geometry}
  - {gives: r, formula: 'b/4 in', cite: geometry}
  - {check: most, holds: 'r <= 1', cite: geometry}
  - {check: least, holds: 'b >= m', cite: geometry}
"""
MANY = "".join(f"  - {{mark: T{n}, title: Trial {n}, template: trial, given: {{b: 3.{n:03} in}}}}\n" for n in range(60))
WORDY = "assumptions:\n" + "".join(
    f"  - {{says: '{f'Premise {n} of many words. ' * 30}', to be verified: yes, by: owner}}\n" for n in range(40)
)


def pages(path: Path) -> list[str]:
    return [page.extract_text() for page in pypdf.PdfReader(path).pages]


def test_alone_on_one_sheet(tmp_path: Path) -> None:
    make(tmp_path, template=TEMPLATE)
    target = tmp_path / "s.pdf"
    ran = run("sampler", str(tmp_path), "-o", str(target))
    assert ran.code == 0, ran.err
    (text,) = pages(target)
    # by hand: 3/4 = 0.75 and 2/3 = 0.667; b changes the first verdict at 4 in, the second at 2 in: a third either way
    assert "The 2 highest ratios among 2 checks" in text and "0.750" in text and "0.667" in text
    assert "T1-1, line" in text and "+33.3" in text and "−33.3" in text
    for word in ("checked", "approved", "Changed values"):
        assert word not in text
    assert not any("/Annots" in page for page in pypdf.PdfReader(target).pages), "nothing to lead to in this file"
    before = target.read_bytes()
    assert run("sampler", str(tmp_path), "-o", str(target)).code == 0
    assert target.read_bytes() == before


def test_in_the_package_only_when_asked_for(tmp_path: Path) -> None:
    make(tmp_path, template=TEMPLATE)
    with_it, without = tmp_path / "with.pdf", tmp_path / "without.pdf"
    assert run("build", str(tmp_path), "--sampler", "-o", str(with_it)).code == 0
    assert run("build", str(tmp_path), "-o", str(without)).code == 0
    labels = [pypdf.PdfReader(path).page_labels for path in (with_it, without)]
    assert [label for label in labels[0] if label != "SAMPLER-1"] == labels[1]
    assert labels[0].index("SAMPLER-1") == labels[0].index("SUMMARY-1") + 1
    # no other sheet moves or changes but cover and index, which name it
    first, second = pages(with_it), pages(without)
    changed = [label for label in labels[1] if first[labels[0].index(label)] != second[labels[1].index(label)]]
    assert set(changed) <= {"COVER", "INDEX-1"}
    assert "SAMPLER" in first[labels[0].index("INDEX-1")]


@pytest.mark.parametrize("premises", ["", WORDY])
def test_always_one_sheet(tmp_path: Path, premises: str) -> None:
    project = PROJECT.partition("calculations:\n")[0] + premises + "calculations:\n" + MANY
    make(tmp_path, project, TEMPLATE)
    target = tmp_path / "s.pdf"
    assert run("sampler", str(tmp_path), "-o", str(target)).code == 0
    (text,) = pages(target)
    # by hand: the sixty widths run from 3.000 to 3.059 in; the widest has 3.059/4 = 0.765
    assert "among 120 checks" in text and "0.765" in text and "T59-1" in text
    assert ("further premises" in text) is bool(premises)


def test_ng_comes_before_a_higher_ratio_that_holds(tmp_path: Path) -> None:
    # by hand: 1.9 in is below the least of 2 in (2/1.9 = 1.053, NG); 1.9/4 = 0.475
    make(tmp_path, PROJECT.replace("3 in", "1.9 in"), TEMPLATE)
    target = tmp_path / "s.pdf"
    assert run("sampler", str(tmp_path), "-o", str(target)).code == 1
    (text,) = pages(target)
    assert text.index("1.053") < text.index("0.475")


def test_nothing_is_written_beside_problems(tmp_path: Path) -> None:
    make(tmp_path, PROJECT.replace("3 in", "3"), TEMPLATE)
    before = names(tmp_path)
    ran = run("sampler", str(tmp_path))
    assert ran.code == 2 and "error[bare-number]" in ran.err and names(tmp_path) == before
    assert (tmp_path / "project.pdf").read_bytes() == EARLIER


@pytest.mark.parametrize(
    ("given", "places", "nearest", "shown"),
    [
        # by hand: (28.2563 - 30)/30 = -5.812 %; 28.26 gives -5.8 %
        (30.0, 0, 28.2563, "28.26"),
        # (2.9996 - 3)/3 = -0.013 %, shown with two decimals; four digits, 3.000, give none: a fifth mends it
        (3.0, 0, 2.9996, "2.9996"),
    ],
)
def test_digits_until_the_share_follows(given: float, places: int, nearest: float, shown: str) -> None:
    figure = flipping_figure(Figure(given, 0, places, True, 1.0), nearest, given)
    assert number_text(figure) == shown

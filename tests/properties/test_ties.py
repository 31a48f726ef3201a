"""Ten thousand limits exactly met, in mixed units: all OK; missed by one part in a million: all NG.

The values are built here from fractions and the definitions of the units, by nothing of the program's.
"""

from __future__ import annotations

import random
from fractions import Fraction as F
from pathlib import Path

from calcreport.core.source import Source
from calcreport.driver import work
from calcreport.filesystem import Disk, library_folder

FOLDER = Path(__file__).parent / "ties"
ROWS, CALCULATIONS, CHECKS = 500, 5, 4
#: inch 25.4 mm, pound-force 4.4482216152605 N, both exact (NIST SP 811, App. B)
_MM, _NEWTON = F(254, 10), F(44_482_216_152_605, 10**13)
#: spellings by kind, with their size in inches, pounds and what is made of them
UNITS: dict[str, tuple[tuple[str, F], ...]] = {
    "length": (("in", F(1)), ("ft", F(12)), ("yd", F(36)), ("mm", 1 / _MM), ("cm", 10 / _MM), ("m", 1000 / _MM)),
    "area": (("in^2", F(1)), ("ft^2", F(144)), ("mm^2", 1 / _MM**2), ("cm^2", 100 / _MM**2)),
    "stress": (("psi", F(1)), ("ksi", F(1000)), ("psf", F(1, 144)), ("ksf", F(1000, 144)), ("tsf", F(2000, 144))),
    "force": (("lb", F(1)), ("kip", F(1000)), ("ton", F(2000)), ("N", 1 / _NEWTON), ("kN", 1000 / _NEWTON)),
    "load": (("lb/in", F(1)), ("plf", F(1, 12)), ("klf", F(1000, 12)), ("kip/ft", F(1000, 12)), ("lb/ft", F(1, 12))),
    "moment": (
        ("lb*in", F(1)),
        ("kip*ft", F(12_000)),
        ("lb*ft", F(12)),
        ("kip*in", F(1000)),
        ("N*mm", 1 / _NEWTON / _MM),
    ),
    "number": (("", F(1)), ("%", F(1, 100))),
}
HEAD = """\
project: {title: Ties, number: T-1, address: none}
office: {name: (office)}
status: preliminary
date: 2026-11-16
units: us
codes: {adopted: {name: TRIAL, year: 2024, amendments: none}, concrete: DEMO-20, loads: LOADS-22}
criteria: {risk category: II, seismic design category: B}
revisions: [{number: 1, date: 2026-11-16, why: trial}]
calculations:
"""


def _decimal(value: F) -> str:
    """Return a fraction as a decimal of at most 18 digits, or '' where it has none."""
    digits, rest = 0, value.denominator
    while rest % 10 == 0 or rest % 5 == 0 or rest % 2 == 0:
        rest //= 10 if rest % 10 == 0 else 5 if rest % 5 == 0 else 2
        digits += 1
    if rest != 1 or digits > 17:
        return ""
    text = str(int(value * 10**digits)).rjust(digits + 1, "0")
    if len(text) > 18:
        return ""
    return text if not digits else f"{text[:-digits]}.{text[-digits:]}"


def _typed(value: F, kind: str, dice: random.Random) -> str:
    """Return a value in a unit in which it has a short decimal."""
    units = list(UNITS[kind])
    dice.shuffle(units)
    found = ((_decimal(value / size), spelling) for spelling, size in units)
    number, spelling = next((number, spelling) for number, spelling in found if number)
    return f"{number} {spelling}".strip()


def _row(dice: random.Random, beyond: F) -> str:
    """Return one row: `beyond` is by how much the demand exceeds, 1 for a tie."""
    h, b = F(dice.randint(40, 800), 8), F(dice.randint(5, 50))
    f, k = F(dice.randint(5, 150) * 100), F(dice.choice([45, 60, 75, 85, 90]), 100)
    w, l = F(dice.randint(1, 400), 4), F(dice.randint(1, 80) * 12, 4)
    q = F(dice.randint(1, 4000), 16)
    values = {
        "h": (h, "length"),
        "b": (b, "length"),
        "f": (f, "stress"),
        "k": (k, "number"),
        "w": (w, "load"),
        "l": (l, "length"),
        "s": (h / 2 * beyond, "length"),
        "V": (k * b * h * f * beyond, "force"),
        "M": (w * l**2 / 8 * (2 - beyond), "moment"),
        "q": (q * beyond, "length"),
        "A": (q**2, "area"),
    }
    return "{" + ", ".join(f"{name}: {_typed(value, kind, dice)}" for name, (value, kind) in values.items()) + "}"


def _verdicts(beyond: F, seed: int) -> list[str]:
    dice = random.Random(seed)
    text = HEAD
    for number in range(CALCULATIONS):
        text += f"  - mark: T{number}\n    title: ties\n    template: tie\n    given:\n      row:\n"
        text += "".join(f"        - {_row(dice, beyond)}\n" for _ in range(ROWS))
    result = work(Disk(FOLDER, library_folder()), Source("project.yaml", text))
    assert not result.problems, result.problems[:3]
    assert result.worked is not None
    return [check.verdict for worked in result.worked.calculations for check in worked.checks]


def test_a_limit_exactly_met_is_ok() -> None:
    verdicts = _verdicts(F(1), seed=1)
    assert len(verdicts) == ROWS * CALCULATIONS * CHECKS == 10_000
    assert set(verdicts) == {"OK"}


def test_a_limit_missed_by_a_millionth_is_not() -> None:
    verdicts = _verdicts(1 + F(1, 10**6), seed=2)
    assert len(verdicts) == 10_000
    assert set(verdicts) == {"NG"}

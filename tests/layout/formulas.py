"""Formulas of the trade, written as trees, for tests of layout and output."""

from __future__ import annotations

from calcreport.report.model import (
    Accent,
    Big,
    Fence,
    Formula,
    Fraction,
    Letters,
    Operator,
    Root,
    Row,
    Script,
    Space,
    Stack,
)

EQUALS, AT_MOST, AT_LEAST = (Operator(sign, "relation") for sign in "=≤≥")
PLUS, MINUS, TIMES, SLASH = (Operator(sign, "binary") for sign in "+−×/")
NEGATIVE, COMMA = Operator("−", "prefix"), Operator(",", "punctuation")
THIN, UNIT = Space("thin"), Space("unit")


def row(*items: Formula | str) -> Row:
    """Put items side by side; text stands for upright letters."""
    return Row(tuple(Letters(item) if isinstance(item, str) else item for item in items))


def variable(letter: str) -> Letters:
    """Give a one-letter variable."""
    return Letters(letter, "italic")


def symbol(letter: str, below: str, above: str = "") -> Script:
    """Give a variable with an upright subscript and a mark above it."""
    return Script(variable(letter), Letters(below), Letters(above) if above else None)


def brackets(*items: Formula | str) -> Fence:
    """Put items in parentheses."""
    return Fence("(", row(*items), ")")


A, B, C, D, H, PHI, LAMBDA = (variable(letter) for letter in "abcdhφλ")
A_S, F_Y, M_N, B_W, D_T = (symbol(*pair) for pair in (("A", "s"), ("f", "y"), ("M", "n"), ("b", "w"), ("d", "t")))
F_C, EPS_T, V_C = symbol("f", "c", "′"), symbol("ε", "t"), symbol("V", "c")
HALF_A = Fraction(A, Letters("2"))

MOMENT = row(M_N, EQUALS, A_S, THIN, F_Y, THIN, brackets(D, MINUS, HALF_A))
BLOCK = row(A, EQUALS, Fraction(row(A_S, THIN, F_Y), row("0.85", THIN, F_C, THIN, B)), EQUALS, "4.902", UNIT, "in.")
SHEAR = row(V_C, EQUALS, "2", THIN, LAMBDA, THIN, Root(F_C), THIN, B_W, THIN, D)
STRAIN = row(EPS_T, EQUALS, Fraction(row("0.003", THIN, brackets(D_T, MINUS, C)), C), EQUALS, "0.01085")
CASES = row(
    symbol("β", "1"),
    EQUALS,
    Fence(
        "{",
        Stack(
            (
                row("0.85", THIN, "for", THIN, F_C, AT_MOST, "4,000", UNIT, "psi"),
                row(
                    "0.85",
                    MINUS,
                    Fraction(row("0.05", THIN, brackets(F_C, MINUS, "4,000")), Letters("1,000")),
                ),
                row("0.65", THIN, "for", THIN, F_C, AT_LEAST, "8,000", UNIT, "psi"),
            )
        ),
        "",
    ),
)
ROOTS = row(
    variable("x"),
    EQUALS,
    Root(row("1", PLUS, Root(row("1", PLUS, Fraction(Letters("1"), Root(Script(B, None, Letters("2")))))))),
    COMMA,
    Root(Letters("2"), Letters("3")),
    COMMA,
    Root(row(A, PLUS, B), variable("n")),
)
POWERS = row(
    Script(brackets(D, MINUS, C), None, Letters("2")),
    PLUS,
    Script(D, Letters("t"), Letters("3")),
    PLUS,
    Script(Fence("(", Fraction(A, B), ")"), None, Letters("3")),
    PLUS,
    Script(variable("ρ"), Letters("w"), row("1", SLASH, "3")),
)
SUM = row(
    symbol("P", "n"),
    EQUALS,
    symbol("C", "c"),
    PLUS,
    Big(Letters("∑"), Letters("layer"), variable("n")),
    symbol("F", "s"),
    THIN,
    brackets(Fraction(H, Letters("2")), MINUS, variable("y")),
)
LARGEST = row(
    symbol("A", "s,min"),
    EQUALS,
    "max",
    Fence(
        "(",
        Stack(
            (
                row(Fraction(row("3", THIN, Root(F_C)), F_Y), THIN, B_W, THIN, D),
                row(Fraction(Letters("200"), F_Y), THIN, B_W, THIN, D),
            )
        ),
        ")",
    ),
)
NUMBERS = row(
    NEGATIVE,
    "596.5",
    PLUS,
    "103.2",
    THIN,
    brackets("0.8333"),
    MINUS,
    Fraction(row("6.00", THIN, Script(brackets("0.8333"), None, Letters("2"))), Letters("2")),
    EQUALS,
    NEGATIVE,
    "2,512.6",
    UNIT,
    "kip·ft",
)
RATIO = row(
    Fence("|", symbol("M", "u"), "|"),
    SLASH,
    PHI,
    M_N,
    EQUALS,
    Fraction(Fence("|", symbol("M", "u"), "|"), row(PHI, M_N)),
)
LENGTH = row(
    symbol("ℓ", "d"),
    EQUALS,
    Fraction(
        row("3", THIN, F_Y, THIN, symbol("ψ", "t")),
        row(
            "40",
            THIN,
            LAMBDA,
            THIN,
            Root(F_C),
            THIN,
            Fence("(", Fraction(row(symbol("c", "b"), PLUS, symbol("K", "tr")), symbol("d", "b")), ")"),
        ),
    ),
    THIN,
    symbol("d", "b"),
)

MARKS = row(
    Script(Accent(variable("y"), "\u0304"), Letters("t")),
    EQUALS,
    Script(Accent(variable("ε"), "\u0302"), Letters("s"), Letters("′")),
    PLUS,
    Accent(variable("d"), "\u0303"),
    MINUS,
    Script(Accent(H, "\u0307"), None, Letters("2")),
)
RANGE = row("0.75", AT_MOST, LAMBDA, EQUALS, "0.85", AT_MOST, "1.0")

ALL: dict[str, Formula] = {
    "moment": MOMENT,
    "block": BLOCK,
    "shear": SHEAR,
    "strain": STRAIN,
    "cases": CASES,
    "roots": ROOTS,
    "powers": POWERS,
    "sum": SUM,
    "largest": LARGEST,
    "numbers": NUMBERS,
    "ratio": RATIO,
    "length": LENGTH,
    "marks": MARKS,
    "range": RANGE,
}

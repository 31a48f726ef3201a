"""What an equation in print says: the symbol before it, the printed number at its end, values after a bar callout.

In: tokens and statements. Out: names and `Printed` numbers.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence

from .expressions import Unread, as_printed, parse, split
from .letters import Token, plain
from .statements import Statement
from .units import Printed

#: words that begin or join formulas and conditions
_READ = {"min", "max", "exp", "ln", "sin", "cos", "tan", "atan", "round", "sqrt", "is", "and", "or", "not"}


def symbol_of(tokens: Sequence[Token]) -> str | None:
    """Return the symbol that a row of tokens is, if it is one."""
    if len(tokens) == 1 and tokens[0].kind == "word" and not tokens[0].raised:
        return tokens[0].text
    if len(tokens) == 1 and tokens[0].kind == "root":
        return "√" + plain(tokens[0].parts[0])
    words = [token.text for token in tokens if token.kind == "word"]
    if (
        len(words) > 1
        and all(word.isalpha() for word in words)
        and any(len(word) > 2 for word in words)
        and not set(words) & _READ
        and all((t.kind == "word" and not t.raised) or t.text == "-" for t in tokens)
    ):
        return plain(tokens)  # a name in words: `one-third excess`, `at d left`
    return None


def printed_of(tokens: Sequence[Token]) -> Printed | None:
    """Return the printed number that a row of tokens is, if it is one; `none (0 kip)` is worth 0 kip."""
    tokens = list(tokens)
    if len(tokens) > 1 and tokens[0].text == "none" and tokens[1].kind == "open":
        tokens = tokens[2:-1]
    if len(tokens) > 2 and tokens[0].kind == "number" and tokens[1].kind == "unit" and tokens[2].kind == "open":
        tokens = tokens[:2]
    try:
        return as_printed(parse(tokens)) if tokens else None
    except Unread:
        return None


def assignments(statement: Statement) -> Iterator[tuple[str, list[Token]]]:
    """Yield (symbol, tokens of its value) of an equation; bars give values after their callout."""
    parts, relations = split(statement.tokens, "relation")
    name = symbol_of(parts[0])
    if name is None or len(parts) < 2 or set(relations) != {"="}:
        return
    colon = next((i for i, token in enumerate(statement.tokens) if token.kind == "colon"), None)
    if colon is None:
        yield name, parts[-1]
        return
    yield name, list(statement.tokens[2:colon])
    for part in split(statement.tokens[colon + 1 :], "comma")[0]:
        inner, _ = split(part, "relation")
        inner_name = symbol_of(inner[0])
        if inner_name is not None and len(inner) == 2:
            yield inner_name, inner[1]

"""`calcreport explain`: what a problem means and how to mend it."""

from __future__ import annotations

from argparse import Namespace

from calcreport.commands.desk import one_problem, say_problems
from calcreport.core.explanations import EXPLANATIONS
from calcreport.core.problems import nearest


def run(arguments: Namespace) -> int:
    """Print one explanation, or the list of all slugs."""
    if arguments.slug is None:
        for slug, explained in sorted(EXPLANATIONS.items()):
            print(f"{slug:<20} {explained.splitlines()[0]}")
        return 0
    text = EXPLANATIONS.get(arguments.slug)
    if text is None:
        return say_problems(one_problem("unknown-name", f"there is no problem named `{arguments.slug}`",
                                        "a slug as printed in error[…]", arguments.slug,
                                        nearest(arguments.slug, EXPLANATIONS)))  # fmt: skip
    print(f"{arguments.slug}\n\n{text}")
    return 0

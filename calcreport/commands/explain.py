"""`calcreport explain`: what a problem means and how to mend it."""

from __future__ import annotations

from argparse import Namespace

from calcreport.commands.desk import say_problems
from calcreport.core.explanations import EXPLANATIONS
from calcreport.core.problems import Problems, nearest


def run(arguments: Namespace) -> int:
    """Print one explanation, or the list of all slugs."""
    if arguments.slug is None:
        for slug, text in sorted(EXPLANATIONS.items()):
            print(f"{slug:<20} {text.splitlines()[0]}")
        return 0
    text = EXPLANATIONS.get(arguments.slug)
    if text is None:
        problems = Problems()
        problems.add("unknown-name", None, f"there is no problem named `{arguments.slug}`", expected="a slug as printed in error[…]",
                     found=arguments.slug, hint=nearest(arguments.slug, EXPLANATIONS))  # fmt: skip
        return say_problems(problems.sorted())
    print(f"{arguments.slug}\n\n{text}")
    return 0

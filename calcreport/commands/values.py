"""`calcreport values`: every value and check, as text or as the versioned values file."""

from __future__ import annotations

from argparse import Namespace

from calcreport.commands.desk import ProgressLine, open_project, say_problems
from calcreport.driver import work
from calcreport.history.frozen import VALUES
from calcreport.publish import build
from calcreport.report.valuesfile import values_text


def run(arguments: Namespace) -> int:
    """Print values; `--json` prints one object with sheet counts, shown forms and origins."""
    opened = open_project(arguments.project)
    if isinstance(opened, tuple):
        return say_problems(opened, arguments.json)
    progress = ProgressLine()
    if not arguments.json:
        result = work(opened.world, opened.source, progress)
        progress.clear()
        if result.worked is not None:
            for line in values_text(result.worked):
                print(line)
        if result.problems:
            return say_problems(result.problems)
        assert result.worked is not None
        return 1 if any(w.verdict != "OK" for w in result.worked.calculations) else 0
    package = build(opened.world, opened.source, progress)
    progress.clear()
    if package.composed is None or package.pages is None or package.worked is None:
        return say_problems(package.problems, True)
    print(package.files[VALUES].decode(), end="")
    summary = package.composed.summary
    return 1 if summary.failed or summary.not_evaluated else 0

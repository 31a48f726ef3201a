"""The command line: arguments in, an exit code out. What each command does stands in `commands`."""

from __future__ import annotations

import argparse
import gc
import os
import sys
from collections.abc import Sequence
from io import TextIOWrapper

from calcreport.core.late import load_command
from calcreport.core.version import PROGRAM

_EPILOG = "exit codes: 0 done, every check OK; 1 done, a check is NG or something differs; 2 the input has problems"


def make_parser() -> argparse.ArgumentParser:
    """Return the parser of all commands."""
    parser = argparse.ArgumentParser(
        prog="calcreport", description="Calculation packages for structural concrete, from plain text.", epilog=_EPILOG
    )
    parser.add_argument("--version", action="version", version=PROGRAM)
    commands = parser.add_subparsers(dest="command", required=True, metavar="COMMAND")
    new = commands.add_parser("new", help="start a small project that builds, or a small template with its cases")
    started = new.add_mutually_exclusive_group(required=True)
    started.add_argument("folder", metavar="DIR", nargs="?", help="a new or empty folder for a project")
    started.add_argument("--template", metavar="FILE", help="a template to start instead, such as rules/footing.yaml")
    build = commands.add_parser("build", help="build the package as PDF")
    _project(build)
    build.add_argument("-o", "--output", metavar="PDF", help="where to write it; beside the project file if not told")
    build.add_argument(
        "--second-path",
        action="store_true",
        help="work every value again by other arithmetic and other unit factors, and say how they agree",
    )
    build.add_argument("--sampler", action="store_true", help="add the reviewer's sampler, which takes time")
    build.add_argument(
        "--marks",
        choices=("last", "all", "none"),
        help="triangles beside lines changed in the last revision (if not told), in all of them, or none",
    )
    build.add_argument("--no-attachments", action="store_true", help="leave input files and values out of the PDF")
    build.add_argument("--superseded", action="store_true", help="an issue again, marked superseded")
    issue = commands.add_parser("issue", help="freeze a project with its package as an issue beside the project file")
    _project(issue)
    issue.add_argument("--why", metavar="TEXT", help="what changed and why, for the revision record")
    issue.add_argument("--number", metavar="NUMBER", help="of the issue; the next one if not told")
    watch = commands.add_parser("watch", help="build again after every save, until interrupted")
    watch.add_argument("project", metavar="PROJECT", help="a project file, or a folder that holds project.yaml")
    watch.add_argument("-o", "--output", metavar="PDF", help="where to write it; beside the project file if not told")
    sampler = commands.add_parser("sampler", help="the most telling lines of a package on one sheet")
    _project(sampler)
    sampler.add_argument("-o", "--output", metavar="PDF", help="where to write it; beside the project file if not told")
    respond = commands.add_parser("respond", help="answer plan-review comments: letter and comment-response matrix")
    _project(respond)
    respond.add_argument("comments", metavar="COMMENTS", help="the comment log, a text file")
    respond.add_argument("-o", "--output", metavar="PDF", help="where to write it; beside the comment log if not told")
    lint = commands.add_parser("lint", help="report every problem of a project or a template with its place")
    lint.add_argument("file", metavar="FILE", help="a project file, a template file, or a template's name")
    lint.add_argument("--json", action="store_true", help="problems for machines")
    lint.add_argument(
        "--strict",
        action="store_true",
        help="exit with 1 where no case of a template reaches a rule and no reason is given",
    )
    values = commands.add_parser("values", help="print every value and check, no PDF")
    _project(values)
    trace = commands.add_parser("trace", help="print the tree of lines behind one number")
    trace.add_argument("project", metavar="PROJECT")
    trace.add_argument("value", metavar="MARK.SYMBOL", help="such as B1.phiM_n")
    margins = commands.add_parser("margins", help="how far each given value may move before a verdict flips")
    _project(margins)
    margins.add_argument("mark", nargs="?", metavar="MARK", help="one calculation only")
    editions = commands.add_parser("editions", help="hold the design against another edition of a code")
    _project(editions)
    editions.add_argument("mark", metavar="MARK|all", help="one calculation, or all")
    other = editions.add_mutually_exclusive_group(required=True)
    other.add_argument("--concrete", metavar="EDITION", help="the other edition of the concrete code")
    other.add_argument("--loads", metavar="EDITION", help="the other edition of the code of loads")
    editions.add_argument("-o", "--output", metavar="PDF", help="also write the comparison as sheets")
    _field(
        commands.add_parser("field", help="answer a question from the site: as designed against as built, one sheet")
    )
    verify = commands.add_parser("verify", help="hold a package against what the files inside it give")
    verify.add_argument("package", metavar="PACKAGE", help="a package as PDF")
    verify.add_argument("--json", action="store_true", help="for machines")
    compare = commands.add_parser("compare", help="what differs between two issues, and what does not")
    compare.add_argument("old", metavar="OLD", help="an issue's folder, a project, or a package as PDF")
    compare.add_argument("new", metavar="NEW", help="the later one, of any of these kinds")
    compare.add_argument("--json", action="store_true", help="for machines")
    templates = commands.add_parser("templates", help="list the templates, or tell what one needs and decides")
    templates.add_argument("name", nargs="?", metavar="NAME")
    schedule = commands.add_parser("schedule", help="a row a member, for the schedule on the drawings")
    schedule.add_argument("project", metavar="PROJECT", help="a project file, or a folder that holds project.yaml")
    schedule.add_argument("-o", "--output", metavar="FILE", help="a .csv or .xlsx; the terminal if not told")
    _reconcile(commands.add_parser("reconcile", help="hold a schedule from the drawings against the calculations"))
    schema = commands.add_parser("schema", help="print the JSON Schema of a kind of file, for editors")
    schema.add_argument("kind", choices=("project", "template", "cases", "values", "comments"))
    explain = commands.add_parser("explain", help="tell what a problem means and how to mend it")
    explain.add_argument("slug", nargs="?", metavar="SLUG")
    return parser


def _field(parser: argparse.ArgumentParser) -> None:
    _project(parser)
    parser.add_argument("mark", metavar="MARK", help="the calculation or member asked about")
    told = "what was built otherwise: b=15in, h-=1in, layer[first].steel=3-#9, FL1.l=28ft"
    parser.add_argument("change", metavar="CHANGE", nargs="+", help=told)
    parser.add_argument("--reply", metavar="RFI", required=True, help="what it answers, such as RFI-031")
    parser.add_argument("-o", "--output", metavar="PDF", help="a new file; named by the reply, beside the project file")


def _reconcile(parser: argparse.ArgumentParser) -> None:
    _project(parser)
    parser.add_argument("schedule", metavar="SCHEDULE", help="a .csv or .xlsx taken from the drawings")
    parser.add_argument("--sheet", metavar="NAME", help="the sheet of a workbook")
    parser.add_argument("--heading-row", metavar="ROW", help="the row of the headings, if not the first")
    parser.add_argument(
        "--columns",
        metavar="NAME=HEADING",
        nargs="+",
        action="extend",
        default=[],
        help="what columns hold: mark, size, bars, or a given value such as b or layer.first.steel",
    )
    parser.add_argument("--lengths", metavar="UNIT", help="the unit of lengths written without one")
    parser.add_argument("--hidden", choices=("skip", "read"), help="what becomes of hidden rows")
    parser.add_argument("--template", metavar="NAME", help="compare the calculations of one template only")


def _project(parser: argparse.ArgumentParser) -> None:
    parser.add_argument("project", metavar="PROJECT", help="a project file, or a folder that holds project.yaml")
    parser.add_argument("--json", action="store_true", help="for machines")


def main(arguments: Sequence[str] | None = None) -> int:
    """Run a command; returns its exit code."""
    parsed = make_parser().parse_args(arguments)
    for stream in (sys.stdout, sys.stderr):
        if isinstance(stream, TextIOWrapper):
            # a terminal that lacks a letter shows its code rather than stopping the work
            stream.reconfigure(errors="backslashreplace")
    # Values, report and sheets are trees, hundreds of thousands of records that all live to the end of the command:
    # looking through them for unreachable cycles frees nothing and takes a fifth of the time.
    gc.disable()
    try:
        code = load_command(parsed.command).run(parsed)
        sys.stdout.flush()
        return int(code)
    except BrokenPipeError:
        # a reader that went away, such as `head`, is no fault; keep the interpreter from saying otherwise
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
        return 1
    except KeyboardInterrupt:
        print("stopped; nothing was written", file=sys.stderr)
        return 2
    finally:
        gc.enable()


def leave() -> None:
    """Run a command and end the process at once, without giving back its records one by one first."""
    code = main()
    sys.stderr.flush()
    os._exit(code)


if __name__ == "__main__":
    leave()

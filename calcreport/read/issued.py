"""The record of a frozen issue, `issue.yaml`: what was issued, when and why, and the digest of every file of it.

Text in, a record out, and back. Selections stand in it as they were taken, pinned or not, so that a later build can say
that another candidate has taken their place.
"""

from __future__ import annotations

import re
from dataclasses import dataclass, field

from calcreport.core.problems import Problems
from calcreport.core.source import Source, Span
from calcreport.read.fields import Fields, as_mapping
from calcreport.read.model import Issue
from calcreport.read.nodes import Mapping, Scalar, read_tree, written

KEYS = ("number", "date", "why", "status", "program", "selections", "files")
_DIGEST = re.compile(r"[0-9a-f]{64}")
_HEAD = """\
# A frozen issue: what left the office, kept as it is. `calcreport build` with this folder makes the package again.
"""


@dataclass(frozen=True, slots=True)
class IssueRecord:
    """What `issue.yaml` says."""

    issue: Issue
    status: str
    #: 'calcreport 0.3.0'
    program: str
    #: by mark: given values of the candidate taken, as typed
    selections: dict[str, dict[str, str]]
    #: SHA-256 in hexadecimal by the name of the file
    files: dict[str, str]
    #: where each digest stands, in a record that was read
    places: dict[str, Span] = field(default_factory=dict)


def issue_text(record: IssueRecord) -> str:
    """Return a record as the text of its file."""
    issue = record.issue
    facts = (("number", issue.number), ("date", issue.date), ("why", issue.why), ("status", record.status))
    lines = [f"{key}: {written(text)}" for key, text in (*facts, ("program", record.program))]
    if record.selections:
        lines.append("selections:   # the candidate taken for each mark")
    for mark, values in record.selections.items():
        pairs = ", ".join(f"{written(name)}: {written(text)}" for name, text in values.items())
        lines.append(f"  {written(mark)}: {{{pairs}}}")
    lines.append("files:   # SHA-256")
    lines += [f"  {written(name)}: {digest}" for name, digest in sorted(record.files.items())]
    return _HEAD + "\n".join(lines) + "\n"


def read_issue(source: Source, problems: Problems) -> IssueRecord | None:
    """Return what a record says, or None after adding what is wrong with it."""
    before = problems.met
    root = read_tree(source, problems)
    tree = as_mapping(root, "the record of an issue", problems) if root is not None else None
    if tree is None:
        return None
    fields = Fields(tree, KEYS, "the record of an issue", problems)
    number, date, why, status, program = (fields.text(key, required=True) for key in KEYS[:5])
    files, places = _digests(fields.mapping("files", required=True), problems)
    selections = {mark: dict(_texts(node)) for mark, node in _mappings(fields.mapping("selections"))}
    if problems.met > before:
        return None
    return IssueRecord(Issue(number, date, why), status, program, selections, files, places)


def _digests(node: Mapping | None, problems: Problems) -> tuple[dict[str, str], dict[str, Span]]:
    files: dict[str, str] = {}
    places: dict[str, Span] = {}
    for key, value in node.entries if node else ():
        if isinstance(value, Scalar) and _DIGEST.fullmatch(value.text):
            files[key.text], places[key.text] = value.text, value.span
            continue
        problems.add("issue-altered", key.span, f"the digest of `{key.text[:60]}` is not one",
                     expected="the 64 hexadecimal digits that `calcreport issue` wrote",
                     found=value.text[:70] if isinstance(value, Scalar) else "no text")  # fmt: skip
    return files, places


def _mappings(node: Mapping | None) -> list[tuple[str, Mapping]]:
    return [(key.text, value) for key, value in node.entries if isinstance(value, Mapping)] if node else []


def _texts(node: Mapping) -> list[tuple[str, str]]:
    return [(key.text, value.text) for key, value in node.entries if isinstance(value, Scalar)]

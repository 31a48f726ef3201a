"""The layers of the program, held by reading its imports: nothing is executed.

Every module stands in `LAYERS`; a module that is missing there, or named there and missing, fails. A stage sees the
core, its own folder and the `model` of the stage before it. What the checker must catch is planted and caught.
"""

from __future__ import annotations

import ast
import re
from graphlib import TopologicalSorter
from pathlib import Path

import pytest

ROOT = Path(__file__).parents[1] / "calcreport"

#: layer and its modules, lowest first; nothing imports a layer above its own
LAYERS: tuple[tuple[str, tuple[str, ...]], ...] = (
    ("core", (
        "core", "core.explained_files", "core.explained_issues", "core.explained_projects", "core.explained_reviews",
        "core.explained_schedules",
        "core.explained_templates", "core.explanations", "core.expression", "core.figures", "core.fontfile",
        "core.grammar", "core.inputs", "core.kept", "core.late", "core.methods", "core.problems", "core.quantity", "core.record", "core.rows", "core.shows", "core.source",
        "core.tokens", "core.units", "core.version", "core.world",
    )),
    ("methods", (
        "methods", "methods.envelopes", "methods.fibres", "methods.members", "methods.results", "methods.roots",
        "methods.spans", "methods.stations", "methods.table",
    )),
    ("read", (
        "read", "read.as_built", "read.bars", "read.bodies", "read.calculations", "read.candidates", "read.chosen_cells", "read.cases",
        "read.changes", "read.codes", "read.criteria",
        "read.columns", "read.comments", "read.comments_schema", "read.editions", "read.fields", "read.filled", "read.formulas",
        "read.gathering", "read.given", "read.issued", "read.library", "read.lines", "read.links", "read.lost",
        "read.made_rows", "read.malformed", "read.method_lines", "read.model", "read.nodes", "read.project",
        "read.project_model", "read.project_schema", "read.review_model", "read.revision_record", "read.row_tables",
        "read.roles", "read.schedules", "read.shapes",
        "read.sheets", "read.single_values", "read.symbols", "read.tables", "read.template_model",
        "read.template_schema", "read.template_tables", "read.together", "read.values", "read.variants", "read.words",
        "read.workbook",
    )),
    ("plan", (
        "plan", "plan.below", "plan.checks", "plan.closed", "plan.dimensions", "plan.equations", "plan.figures",
        "plan.formula_dimensions", "plan.handed", "plan.link", "plan.links", "plan.made", "plan.methods", "plan.model", "plan.names", "plan.parts",
        "plan.placing", "plan.promised", "plan.proofs", "plan.space",
    )),
    ("calculate", (
        "calculate", "calculate.analysed", "calculate.answer_model", "calculate.answered", "calculate.basis", "calculate.cases", "calculate.compile", "calculate.evaluate",
        "calculate.exact", "calculate.handing", "calculate.judging", "calculate.linking", "calculate.margins",
        "calculate.model", "calculate.project", "calculate.reachable", "calculate.reached", "calculate.release",
        "calculate.selection",
    )),
    ("second", (
        "second", "second.agreement", "second.closing", "second.closures", "second.continuous", "second.quantities",
        "second.rework",
    )),
    ("history", (
        "history", "history.accounts", "history.alterations", "history.comparison", "history.differences", "history.frozen", "history.issued",
        "history.model", "history.package", "history.revisions",
    )),
    ("report", (
        "report", "report.alike", "report.answer", "report.answer_sheet", "report.answer_text", "report.answers", "report.below", "report.calculation",
        "report.candidates", "report.changes", "report.changes_text", "report.chains", "report.check_blocks", "report.compared",
        "report.compose", "report.confirmations", "report.deltas", "report.digits", "report.display", "report.drawings",
        "report.editions", "report.editions_text", "report.families", "report.forms", "report.formula_model",
        "report.fronts", "report.given_blocks", "report.governing", "report.items", "report.joining", "report.limit_states", "report.members", "report.method_blocks", "report.model",
        "report.moved", "report.notation", "report.plain", "report.premises", "report.response", "report.row_blocks", "report.sampler", "report.script", "report.spaced", "report.statuses",
        "report.substitution", "report.summary", "report.taken", "report.told", "report.traced", "report.value_lines",
        "report.valuesfile", "report.writer", "report.envelope", "report.figure_inputs",
    )),
    ("layout", (
        "layout", "layout.banner", "layout.blocks", "layout.checks", "layout.cover", "layout.delimiters", "layout.drawing", "layout.envelope_figure",
        "layout.figures", "layout.filling", "layout.flow", "layout.fonts", "layout.grid", "layout.givens", "layout.index",
        "layout.kit", "layout.lines", "layout.long_rows", "layout.marks", "layout.mathatoms", "layout.mathbox", "layout.mathbreak",
        "layout.mathforms", "layout.mathscripts", "layout.mathstyle", "layout.mathtable", "layout.model",
        "layout.opentype", "layout.paginate", "layout.pieces", "layout.places", "layout.section_figure", "layout.sharing", "layout.sheet",
        "layout.span_figure", "layout.strength_figure", "layout.tables", "layout.titleblock", "layout.words",
    )),
    ("output", (
        "output", "output.content", "output.embed", "output.file", "output.metadata", "output.outline", "output.pdf",
        "output.spreadsheet", "output.syntax",
    )),
    ("filesystem", ("filesystem",)),
    ("driver", ("driver",)),
    ("reissue", ("reissue",)),
    ("publish", ("publish",)),
    ("session", ("session",)),
    ("commands", (
        "commands", "commands.build", "commands.compare", "commands.desk", "commands.editions", "commands.explain",
        "commands.issue", "commands.field",
        "commands.lint",
        "commands.margins", "commands.new", "commands.reconcile", "commands.reconciling", "commands.record_row",
        "commands.respond", "commands.responding", "commands.sampler", "commands.schedule", "commands.schema",
        "commands.sides", "commands.since", "commands.templates",
        "commands.trace", "commands.values", "commands.verify", "commands.watch",
    )),
    ("__main__", ("__main__", "__init__")),
)  # fmt: skip
RANK = {layer: rank for rank, (layer, _) in enumerate(LAYERS)}
LISTED = {module for _, modules in LAYERS for module in modules}

#: what a stage sees beside the core and its own folder; the layers that are no stages see all below them
SEES: dict[str, frozenset[str]] = {
    "core": frozenset(),
    "methods": frozenset(),
    "read": frozenset(),
    "plan": frozenset({"read.model"}),
    # numerical analysis knows nothing of the program: what works values may call it
    # a comment log answers from finished values and sheets, and passes the plan by
    "calculate": frozenset({"plan.model", "methods", "read.review_model"}),
    # the second path works from the plan by itself, and is then held against what calculate made
    "second": frozenset({"plan.model", "calculate.model"}),
    "history": frozenset({"calculate.model"}),
    "report": frozenset({"calculate.model", "calculate.answer_model", "history.model", "read.review_model"}),
    "layout": frozenset({"report.model"}),
    "output": frozenset({"layout.model"}),
    "filesystem": frozenset(),
}
#: libraries, each behind its one address
LIBRARIES = {"yaml": "read.nodes"}
#: libraries that core.late loads by name when they are needed, and those the program does without
LATE = ("numpy", "sympy", "pint", "mpmath", "scipy", "reportlab", "fontTools", "openpyxl", "xlsxwriter", "pypdf")
#: names that must not be called, with the modules where one may be and why
BANNED: dict[str, tuple[str, ...]] = {
    "eval": (), "compile": (), "__import__": (), "sympify": (), "parse_expr": (), "lambdify": (), "breakpoint": (),
    "input": (), "globals": (), "system": (), "popen": (), "exec": (),

    "import_module": ("core.late",),
    # the clock
    "now": (), "today": (), "time": (), "localtime": (), "gmtime": (), "perf_counter": (),
    # seconds that pass between saves, on the terminal alone
    "monotonic": ("commands.watch",), "sleep": ("commands.watch",),
    # files
    "open": ("filesystem", "__main__"), "read_bytes": ("filesystem",), "write_bytes": (), "write_text": (),
    "NamedTemporaryFile": (), "mkstemp": (), "urlopen": (), "socket": (),
}  # fmt: skip
#: a clause, or a design code's name: data of templates, never code
_CLAUSE = re.compile(r"\b\d+\.\d+\.\d+|\b(?:ACI|ASCE|IBC|AISC|Eurocode)\b")
#: the version has the form of a clause
_NO_CLAUSE = ("core.version",)


def layer_of(module: str) -> str:
    """Return the layer a module stands in."""
    return next((layer for layer, modules in LAYERS if module in modules), "")


def imports(tree: ast.Module) -> list[tuple[int, str]]:
    """Return line and module of every import, own ones without the package's name."""
    found: list[tuple[int, str]] = []
    for node in ast.walk(tree):
        if isinstance(node, ast.Import):
            found += [(node.lineno, alias.name.removeprefix("calcreport.")) for alias in node.names]
        elif isinstance(node, ast.ImportFrom):
            module = (node.module or "").removeprefix("calcreport").lstrip(".")
            names = [f"{module}.{alias.name}".lstrip(".") for alias in node.names]
            own = [name for name in names if name in LISTED]
            found += [(node.lineno, name) for name in own] or [(node.lineno, "." * node.level + (module or "__init__"))]
    return found


def faults(module: str, text: str) -> list[str]:
    """Return what is wrong with a module's imports, calls and literals."""
    if module not in LISTED:
        return [f"{module} stands in no layer"]
    tree = ast.parse(text)
    said = [*_import_faults(module, tree), *_call_faults(module, tree), *_literal_faults(module, tree)]
    return [f"{module}:{line}: {words}" for line, words in said]


def _import_faults(module: str, tree: ast.Module) -> list[tuple[int, str]]:
    said: list[tuple[int, str]] = []
    own, shown = layer_of(module), {id(node) for node in tree.body}
    for node in ast.walk(tree):
        if isinstance(node, ast.Import | ast.ImportFrom) and id(node) not in shown:
            said.append((node.lineno, "an import hides inside a block"))
        if isinstance(node, ast.ImportFrom) and node.level:
            said.append((node.lineno, "a relative import"))
    for line, name in imports(tree):
        if name in LISTED:
            other = layer_of(name)
            sees = SEES.get(own)
            if RANK[other] > RANK[own]:
                said.append((line, f"{own} imports {name}, which stands above it"))
            elif sees is not None and other not in ("core", own) and not {name, other} & sees:
                said.append((line, f"{own} sees {name}, which is no model of the stage before it"))
        elif name == "importlib" or name.partition(".")[0] in LATE:
            if module != "core.late":
                said.append((line, f"{name} is loaded by core.late alone"))
        elif LIBRARIES.get(name.partition(".")[0], module) != module:
            said.append((line, f"{name} belongs to {LIBRARIES[name.partition('.')[0]]}"))
    return said


def _call_faults(module: str, tree: ast.Module) -> list[tuple[int, str]]:
    said: list[tuple[int, str]] = []
    for node in ast.walk(tree):
        if isinstance(node, ast.Call):
            name = node.func.attr if isinstance(node.func, ast.Attribute) else getattr(node.func, "id", "")
            owner = node.func.value if isinstance(node.func, ast.Attribute) else None
            if name == "compile" and isinstance(owner, ast.Name) and owner.id == "re":
                continue
            if name in BANNED and module not in BANNED[name]:
                said.append((node.lineno, f"{name} is called"))
        if isinstance(node, ast.ExceptHandler):
            caught = node.type
            if caught is None or (isinstance(caught, ast.Name) and caught.id == "Exception"):
                said.append((node.lineno, "every exception is caught"))
    return said


def _literal_faults(module: str, tree: ast.Module) -> list[tuple[int, str]]:
    docs = {id(node.body[0].value) for node in ast.walk(tree) if _has_doc(node)}  # type: ignore[attr-defined]
    return [
        (node.lineno, f"a clause or code in {node.value[:60]!r}")
        for node in ast.walk(tree)
        if isinstance(node, ast.Constant) and isinstance(node.value, str) and id(node) not in docs
        and module not in _NO_CLAUSE and _CLAUSE.search(node.value)
    ]  # fmt: skip


def _has_doc(node: ast.AST) -> bool:
    return isinstance(node, ast.Module | ast.ClassDef | ast.FunctionDef) and ast.get_docstring(node) is not None


def modules() -> dict[str, str]:
    """Return the text of every module by its name inside the package."""
    found: dict[str, str] = {}
    for path in sorted(ROOT.rglob("*.py")):
        name = ".".join(path.relative_to(ROOT).with_suffix("").parts)
        found[name.removesuffix(".__init__")] = path.read_text(encoding="utf-8")
    return found


def test_every_module_is_listed_and_every_listed_module_exists() -> None:
    assert modules().keys() - LISTED == set(), "not listed in LAYERS"
    assert LISTED - modules().keys() == set(), "listed in LAYERS and not there"


def test_layers_calls_and_literals() -> None:
    assert [fault for module, text in modules().items() for fault in faults(module, text)] == []


def test_the_checker_saw_the_program() -> None:
    seen = [name for text in modules().values() for _, name in imports(ast.parse(text)) if name in LISTED]
    assert len(seen) > 50
    assert len(modules()) > 60


def test_imports_go_in_no_circle() -> None:
    graph = {
        module: {n for _, n in imports(ast.parse(text)) if n in LISTED} - {module} for module, text in modules().items()
    }
    list(TopologicalSorter(graph).static_order())


#: lines a module may have unless its docstring says why it is kept in one
LONGEST = 300


@pytest.mark.parametrize("module", sorted(modules()))
def test_every_module_is_small_and_says_what_it_knows(module: str) -> None:
    text = modules()[module]
    said = ast.get_docstring(ast.parse(text)) or ""
    assert said or not ast.parse(text).body
    assert module.rpartition(".")[2] not in ("utils", "helpers", "common", "manager", "process")
    assert text.count("\n") <= LONGEST or "kept in one" in said.lower()


PLANTED = {
    "upwards": ("read.bars", "from calcreport.plan.model import Plan"),
    "sideways": ("calculate.exact", "from calcreport.plan.link import link"),
    "two stages back": ("report.forms", "from calcreport.read.model import Symbol"),
    "past the driver": ("driver", "from calcreport.publish import build"),
    "module as a name": ("core.units", "from calcreport.read import nodes"),
    "plain import": ("core.units", "import calcreport.read.nodes"),
    "library": ("report.forms", "import yaml"),
    "part of a library": ("plan.proofs", "from sympy import simplify"),
    "paper library": ("layout.model", "from reportlab.pdfgen import canvas"),
    "relative": ("read.bars", "from .nodes import Mapping"),
    "hidden": ("read.bars", "def f():\n    import yaml"),
    "for types alone": ("read.bars", "if TYPE_CHECKING:\n    from calcreport.read.nodes import Mapping"),
    "eval": ("core.grammar", "eval('1')"),
    "exec": ("core.grammar", "exec('1')"),
    "lambdify": ("plan.proofs", "sympy.lambdify(x, y)"),
    "clock": ("report.compose", "datetime.now()"),
    "seconds": ("report.compose", "time.time()"),
    "file": ("read.library", "open('x')"),
    "bytes": ("read.library", "Path('x').read_bytes()"),
    "any exception": ("read.library", "try:\n    f()\nexcept Exception:\n    pass"),
    "bare except": ("read.library", "try:\n    f()\nexcept:\n    pass"),
    "clause": ("calculate.evaluate", "x = '22.2.2.4.1'"),
    "code": ("report.compose", "x = f'{y} of ACI 318'"),
}


@pytest.mark.parametrize("name", PLANTED)
def test_planted_faults_are_caught(name: str) -> None:
    module, text = PLANTED[name]
    assert faults(module, "from __future__ import annotations\n" + text)


def test_what_is_allowed_is_not_called_a_fault() -> None:
    text = '"""Clause 22.2.2.4.1 in a docstring."""\nimport re\n'
    text += 'from calcreport.read.model import Symbol\nX = re.compile("a")'
    assert faults("plan.link", text) == []

"""Who may import whom: read from every file of core and app, without running them.

Each rule is a function from parsed modules to complaints. It is run on the repository,
where it must find nothing, and on a small offender, where it must find something.
"""

import ast
import subprocess
import sys
from dataclasses import dataclass
from functools import cache
from graphlib import CycleError, TopologicalSorter
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parents[1]

# A room may import the rooms before it.
ROOMS = [
    *("errors", "constants", "units", "findings", "progress"),
    *("shapes", "materials", "design", "lines", "layout", "response", "live", "fullwave"),
    *("engines", "tolerance", "sizing", "measured", "fabrication", "drawing", "formats", "storage"),
]
STRANGERS = {frozenset({"live", "fullwave"})}  # never import each other, whatever the order
QT = {"PySide6", "PySide2", "PyQt6", "PyQt5", "shiboken6", "sip", "qtpy", "AnyQt", "pyqtgraph"}
FORMAT_LIBRARIES = {"ezdxf", "svgwrite", "reportlab", "fontTools"}


@dataclass(frozen=True)
class Import:
    """One imported module, or name in a module."""

    module: str
    name: str  # empty for "import module"
    line: int
    runs_on_import: bool  # neither in a function nor for the type checker only


@dataclass(frozen=True)
class Module:
    """One parsed source file."""

    name: str
    path: str
    tree: ast.Module

    @property
    def room(self):
        return self.name.split(".")[1] if self.name.startswith("core.") else ""

    @property
    def imports(self):
        return tuple(_imports(self.tree, runs=True))


def _imports(node, runs):
    for child in ast.iter_child_nodes(node):
        if isinstance(child, ast.Import):
            for alias in child.names:
                yield Import(alias.name, "", child.lineno, runs)
        elif isinstance(child, ast.ImportFrom):
            for alias in child.names:
                yield Import(
                    "." * child.level + (child.module or ""), alias.name, child.lineno, runs
                )
        else:
            deferred = isinstance(child, ast.FunctionDef | ast.AsyncFunctionDef | ast.Lambda)
            for_types = isinstance(child, ast.If) and "TYPE_CHECKING" in ast.unparse(child.test)
            yield from _imports(child, runs and not deferred and not for_types)


def parse(sources):
    """Modules by name, from {path: source}."""
    modules = {}
    for path, source in sources.items():
        name = path.removesuffix(".py").removesuffix("/__init__").replace("/", ".")
        modules[name] = Module(name, path, ast.parse(source, path))
    return modules


@cache
def repository():
    files = [path for room in ("core", "app") for path in sorted((ROOT / room).rglob("*.py"))]
    return parse({f.relative_to(ROOT).as_posix(): f.read_text(encoding="utf-8") for f in files})


def targets(module, modules, *, only_on_import=False):
    """Modules of ours that this one imports, with the line."""
    for item in module.imports:
        if only_on_import and not item.runs_on_import:
            continue
        inner = f"{item.module}.{item.name}"
        target = inner if inner in modules else item.module
        if target in modules and target != module.name:
            yield target, item.line


def roots(module):
    """Top-level packages that this module imports, with the line."""
    return [(item.module.split(".")[0], item.line) for item in module.imports]


def core_modules(modules):
    return [module for name, module in modules.items() if name.split(".")[0] == "core"]


def qt_or_app_in_core(modules):
    return [
        f"{module.path}:{line} imports {root}"
        for module in core_modules(modules)
        for root, line in roots(module)
        if root in QT | {"app", "tests"}
    ]


def imports_by_name(modules):
    """Dynamic imports in core, which would hide from the other rules."""
    return [
        f"{module.path}:{node.lineno} imports by a name in a string"
        for module in core_modules(modules)
        for node in ast.walk(module.tree)
        if isinstance(node, ast.Name | ast.Attribute)
        and (getattr(node, "id", "") or getattr(node, "attr", ""))
        in {"__import__", "import_module"}
    ]


def noise_in_core(modules):
    """Output, warnings and rebinding of globals."""
    complaints = []
    for module in core_modules(modules):
        for node in ast.walk(module.tree):
            if isinstance(node, ast.Global):
                complaints.append(f"{module.path}:{node.lineno} rebinds a global")
            elif isinstance(node, ast.Call) and ast.unparse(node.func) in {
                "print",
                "warnings.warn",
            }:
                complaints.append(f"{module.path}:{node.lineno} prints or warns")
    return complaints


def rooms_out_of_order(modules):
    complaints = []
    for module in core_modules(modules):
        if module.name == "core":
            continue
        if module.room not in ROOMS:
            complaints.append(f"{module.path} is in no known room")
            continue
        for target, line in targets(module, modules):
            other = modules[target].room
            if other in {"", module.room} or other not in ROOMS:
                continue
            late = ROOMS.index(other) > ROOMS.index(module.room)
            if late or frozenset({other, module.room}) in STRANGERS:
                complaints.append(f"{module.path}:{line} {module.room} imports {other}")
    return complaints


def cycles(modules):
    graph = {
        name: [target for target, _ in targets(module, modules)] for name, module in modules.items()
    }
    try:
        TopologicalSorter(graph).prepare()
    except CycleError as error:
        return [" -> ".join(error.args[1])]
    return []


def relative_or_star_imports(modules):
    return [
        f"{module.path}:{item.line} from {item.module} import {item.name}"
        for module in modules.values()
        for item in module.imports
        if item.module.startswith(".") or item.name == "*"
    ]


def full_inits(modules):
    """Package files that hold more than one line of docstring."""
    return [
        module.path
        for module in modules.values()
        if module.path.endswith("__init__.py")
        and (len(module.tree.body) != 1 or "\n" in (ast.get_docstring(module.tree) or "\n"))
    ]


def format_libraries_elsewhere(modules):
    return [
        f"{module.path}:{line} imports {root}"
        for module in modules.values()
        for root, line in roots(module)
        if root in FORMAT_LIBRARIES and module.room != "formats"
    ]


def reached(starts, modules):
    """Modules that are loaded when these are imported, themselves included."""
    found, waiting = set(), list(starts)
    while waiting:
        name = waiting.pop()
        if name not in found:
            found.add(name)
            waiting += [t for t, _ in targets(modules[name], modules, only_on_import=True)]
    return found


def is_verb(name):
    return name.startswith("app.command") or name.split(".")[:2] == ["app", "verbs"]


def qt_behind_the_verbs(modules):
    return [
        f"{modules[name].path}:{item.line} imports {item.module}, and a verb loads it"
        for name in sorted(reached(filter(is_verb, modules), modules))
        for item in modules[name].imports
        if item.runs_on_import and item.module.split(".")[0] in QT
    ]


def out_of_reach(modules):
    """Modules of core that nothing in app leads to."""
    graph = {name: [t for t, _ in targets(m, modules)] for name, m in modules.items()}
    found, waiting = set(), [name for name in modules if name.split(".")[0] == "app"]
    while waiting:
        name = waiting.pop()
        if name not in found:
            found.add(name)
            waiting += graph[name]
    return [
        m.path
        for m in core_modules(modules)
        if m.name not in found and m.path[-11:] != "__init__.py"
    ]


RULES = {
    qt_or_app_in_core: {"core/units.py": "def f():\n    import PySide6.QtCore"},
    imports_by_name: {"core/units.py": "import importlib\nimportlib.import_module('x')"},
    noise_in_core: {"core/units.py": "print('x')"},
    rooms_out_of_order: {"core/units.py": "import core.layout.ports", "core/layout/ports.py": ""},
    cycles: {"core/units.py": "from core import errors", "core/errors.py": "import core.units"},
    relative_or_star_imports: {"core/units.py": "from . import errors"},
    full_inits: {"core/__init__.py": '"""Core."""\nfrom core import units'},
    format_libraries_elsewhere: {"core/drawing/sheet.py": "import ezdxf.path"},
    qt_behind_the_verbs: {
        "app/verbs/show.py": "from app import text",
        "app/text.py": "from PySide6 import QtGui",
    },
    out_of_reach: {"core/units.py": "", "app/command.py": ""},
}
MORE_OFFENDERS = [
    (rooms_out_of_order, {"core/hall.py": ""}),
    (rooms_out_of_order, {"core/fullwave/a.py": "from core.live import b", "core/live/b.py": ""}),
    (
        rooms_out_of_order,
        {"core/live/b.py": "from core.fullwave import a", "core/fullwave/a.py": ""},
    ),
    (relative_or_star_imports, {"app/a.py": "from core.units import *"}),
    (qt_or_app_in_core, {"core/units.py": "from app import command"}),
    (noise_in_core, {"core/units.py": "import warnings\nwarnings.warn('x')"}),
    (qt_behind_the_verbs, {"app/command.py": "import PySide6"}),
    (full_inits, {"core/__init__.py": ""}),
]
INNOCENT = {
    "core/__init__.py": '"""Core."""',
    "core/errors.py": "class CoreError(Exception): ...",
    "core/layout/__init__.py": '"""Layout."""',
    "core/layout/ports.py": "import numpy\nfrom core.errors import CoreError",
    "core/formats/dxf.py": "import ezdxf\nfrom core.layout import ports",
    "app/command.py": "from core.formats import dxf\ndef window():\n    import PySide6.QtCore",
}


@pytest.mark.parametrize("rule", RULES)
def test_the_repository_keeps_the_rule(rule):
    complaints = rule(repository())
    assert not complaints, "\n".join(complaints)


@pytest.mark.parametrize(("rule", "offender"), [*RULES.items(), *MORE_OFFENDERS])
def test_the_rule_finds_an_offender(rule, offender):
    assert rule(parse(offender))


@pytest.mark.parametrize("rule", RULES)
def test_the_rule_leaves_the_innocent_alone(rule):
    assert rule(parse(INNOCENT)) == []


def test_the_verbs_load_no_qt_when_run():
    names = sorted(filter(is_verb, repository()))
    code = (
        f"import sys, importlib\nfor n in {names}: importlib.import_module(n)\nprint(*sys.modules)"
    )
    verbs = [sys.executable, "-c", code]
    run = subprocess.run(verbs, cwd=ROOT, capture_output=True, text=True, check=False)
    assert run.returncode == 0, run.stderr
    assert not QT & {name.split(".")[0] for name in run.stdout.split()}

"""Public names of core: used by the program, documented, annotated, and of readable size."""

import ast
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parents[1]
FUNCTION = ast.FunctionDef | ast.AsyncFunctionDef

LONGEST_FILE = 500
LONGEST_FUNCTION = 50  # lines, docstring left out
MOST_METHODS = 15


def read(*folders):
    """{path: tree} of all sources in these folders."""
    files = [path for folder in folders for path in sorted((ROOT / folder).rglob("*.py"))]
    return {f.relative_to(ROOT).as_posix(): ast.parse(f.read_text(encoding="utf-8")) for f in files}


def parsed(sources):
    return {path: ast.parse(source) for path, source in sources.items()}


def module_name(path):
    return path.removesuffix(".py").removesuffix("/__init__").replace("/", ".")


def is_core(path):
    return path.startswith("core/")


def public(nodes):
    kinds = FUNCTION | ast.ClassDef
    return [node for node in nodes if isinstance(node, kinds) and not node.name.startswith("_")]


def names_in(node):
    """Every name that is read in this part of a tree, text annotations included."""
    found = set()
    for part in ast.walk(node):
        if isinstance(part, ast.Name):
            found.add(part.id)
        elif isinstance(part, ast.Attribute):
            found.add(part.attr)
    return found


def names_used_from_elsewhere(trees):
    """(module, name) pairs that some other module imports or reaches through a module."""
    used = set()
    for tree in trees.values():
        aliases = {}
        for node in ast.walk(tree):
            if isinstance(node, ast.ImportFrom):
                for alias in node.names:
                    used.add((node.module, alias.name))
                    aliases[alias.asname or alias.name] = f"{node.module}.{alias.name}"
            elif isinstance(node, ast.Import):
                for alias in node.names:
                    aliases[alias.asname or alias.name] = alias.name
        for node in ast.walk(tree):
            if isinstance(node, ast.Attribute) and ast.unparse(node.value) in aliases:
                used.add((aliases[ast.unparse(node.value)], node.attr))
    return used


def interface_of(node):
    """Names in the signature of a function, or in the bases, fields and methods of a class."""
    if isinstance(node, FUNCTION):
        parts = [node.args, node.returns]
    else:
        fields = [item.annotation for item in node.body if isinstance(item, ast.AnnAssign)]
        methods = [item for item in node.body if isinstance(item, FUNCTION)]
        parts = [*node.bases, *fields]
        return set().union(*map(names_in, parts), *map(interface_of, methods))
    return set().union(*(names_in(part) for part in parts if part is not None))


def unused_public_names(trees):
    """Public functions and classes of core that no other module of core or app names.

    A class counts as used where it is part of the interface of a used name beside it.
    """
    used = names_used_from_elsewhere(trees)
    complaints = []
    for path, tree in trees.items():
        if not is_core(path):
            continue
        nodes = {node.name: node for node in public(tree.body)}
        alive = {name for name in nodes if (module_name(path), name) in used}
        waiting = list(alive)
        while waiting:
            shown = interface_of(nodes[waiting.pop()])
            fresh = {n for n in shown & nodes.keys() - alive if isinstance(nodes[n], ast.ClassDef)}
            alive |= fresh
            waiting += fresh
        complaints += [f"{path}: {name}" for name in nodes if name not in alive]
    return complaints


def unused_methods_and_constants(trees):
    """Public methods and module constants of core that nothing in core or app reads."""
    read_names = set()
    for tree in trees.values():
        for node in ast.walk(tree):
            if isinstance(node, ast.Attribute):
                read_names.add(node.attr)
            elif isinstance(node, ast.Name) and isinstance(node.ctx, ast.Load):
                read_names.add(node.id)
            elif isinstance(node, ast.ImportFrom):
                read_names |= {alias.name for alias in node.names}
    complaints = []
    for path, tree in trees.items():
        if is_core(path):
            declared = [
                m.name for c in tree.body if isinstance(c, ast.ClassDef) for m in public(c.body)
            ]
            for node in tree.body:
                if isinstance(node, ast.Assign | ast.AnnAssign):
                    goals = node.targets if isinstance(node, ast.Assign) else [node.target]
                    declared += [goal.id for goal in goals if isinstance(goal, ast.Name)]
            complaints += [f"{path}: {name}" for name in declared if name not in read_names]
    return complaints


def undocumented(trees):
    """Public functions, classes and methods of core without docstring or full annotation."""
    complaints = []
    for path, tree in trees.items():
        if not is_core(path):
            continue
        if not ast.get_docstring(tree):
            complaints.append(f"{path}: module has no docstring")
        for owner in [tree, *(c for c in public(tree.body) if isinstance(c, ast.ClassDef))]:
            for node in public(owner.body):
                where = f"{path}:{node.lineno} {node.name}"
                if not ast.get_docstring(node):
                    complaints.append(f"{where} has no docstring")
                if isinstance(node, FUNCTION) and not is_annotated(node):
                    complaints.append(f"{where} is not fully annotated")
    return complaints


def is_annotated(function):
    arguments = function.args
    named = [*arguments.posonlyargs, *arguments.args, *arguments.kwonlyargs]
    named += filter(None, [arguments.vararg, arguments.kwarg])
    bare = [a.arg for a in named if a.annotation is None and a.arg not in {"self", "cls"}]
    return not bare and function.returns is not None


def too_large(trees):
    complaints = []
    for path, tree in trees.items():
        lines = max((node.end_lineno or 0 for node in tree.body), default=0)
        if lines > LONGEST_FILE:
            complaints.append(f"{path} has {lines} lines")
        if path.startswith("tests/"):
            continue
        for node in ast.walk(tree):
            if isinstance(node, FUNCTION) and length(node) > LONGEST_FUNCTION:
                complaints.append(f"{path}:{node.lineno} {node.name} has {length(node)} lines")
            if isinstance(node, ast.ClassDef):
                methods = sum(isinstance(item, FUNCTION) for item in node.body)
                if methods > MOST_METHODS:
                    complaints.append(f"{path}:{node.lineno} {node.name} has {methods} methods")
    return complaints


def length(function):
    lines = function.end_lineno - function.lineno + 1
    if ast.get_docstring(function) is None:
        return lines
    docstring = function.body[0]
    return lines - (docstring.end_lineno - docstring.lineno + 1)


ANNOTATED = "def f(a: int) -> int:\n    '''Doc.'''\n    return a\n"
OFFENDERS = [
    (unused_public_names, {"core/a.py": ANNOTATED}),
    (unused_public_names, {"core/a.py": ANNOTATED + "X = f(1)\n"}),
    (unused_public_names, {"core/a.py": ANNOTATED, "core/b.py": "def g(): return f(1)"}),
    (unused_methods_and_constants, {"core/a.py": "class A:\n    def turn(self): ...\n"}),
    (unused_methods_and_constants, {"core/a.py": "SIZE = 3\n"}),
    (undocumented, {"core/a.py": "'''Doc.'''\ndef f(a: int) -> int: return a\n"}),
    (undocumented, {"core/a.py": "'''Doc.'''\ndef f(a) -> int:\n    '''Doc.'''\n"}),
    (undocumented, {"core/a.py": "'''Doc.'''\ndef f(a: int):\n    '''Doc.'''\n"}),
    (undocumented, {"core/a.py": ANNOTATED}),
    (too_large, {"app/a.py": "\n" * 500 + "a = 1\n"}),
    (too_large, {"app/a.py": "def f():\n" + "    a = 1\n" * 50}),
    (
        too_large,
        {"app/a.py": "class A:\n" + "".join(f"    def f{i}(self): ...\n" for i in range(16))},
    ),
]
INNOCENT = {
    "core/a.py": (
        "'''Doc.'''\nclass Base:\n    '''Doc.'''\n\nclass Result(Base):\n    '''Doc.'''\n\n"
        "def f(a: int) -> Result:\n    '''Doc.'''\n    return _g(a)\n\ndef _g(a): return Result()\n"
    ),
    "app/b.py": "from core import a\na.f(1)\n" + "def f():\n    '''\n" + "\n" * 60 + "    '''\n",
}
RULES = [unused_public_names, unused_methods_and_constants, undocumented]


@pytest.mark.parametrize("rule", RULES)
def test_core_keeps_the_rule(rule):
    complaints = rule(read("core", "app"))
    assert not complaints, "\n".join(complaints)


def test_sizes_stay_readable():
    complaints = too_large(read("core", "app", "tests"))
    assert not complaints, "\n".join(complaints)


@pytest.mark.parametrize(("rule", "offender"), OFFENDERS)
def test_the_rule_finds_an_offender(rule, offender):
    assert rule(parsed(offender))


@pytest.mark.parametrize("rule", [*RULES, too_large])
def test_the_rule_leaves_the_innocent_alone(rule):
    assert rule(parsed(INNOCENT)) == []

"""What lies in the repository, and whether its documents tell the truth about that."""

import re
import subprocess
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parents[1]
TOP_LEVEL = {
    "README.md",
    "DEVELOPERS.md",
    "pyproject.toml",
    "app",
    "core",
    "tests",
    "assets",
    "docs",
}
REPOSITORY_PATH = re.compile(r"(?:app|core|tests|assets|docs|\.ci)/[\w./-]*|[\w.-]+\.(?:toml|md)")
FENCE = re.compile(r"^(```|~~~).*?^\1", re.MULTILINE | re.DOTALL)


def kept_files():
    """Paths under version control, or what lies at the top level where there is none."""
    if (ROOT / ".git").exists():
        listing = ["git", "-c", f"safe.directory={ROOT}", "ls-files", "-z"]
        out = subprocess.run(listing, cwd=ROOT, capture_output=True, text=True, check=True).stdout
        return [path for path in out.split("\0") if path]
    return [path.name for path in ROOT.iterdir()]


def documents():
    return [ROOT / "README.md", ROOT / "DEVELOPERS.md", *sorted((ROOT / "docs").rglob("*.md"))]


def named_paths(text):
    """Paths of this repository that stand in backticks, placeholders left out."""
    spans = re.findall(r"`([^`\n]+)`", FENCE.sub("", text))
    plain = [span.split("::")[0] for span in spans]
    return [span for span in plain if REPOSITORY_PATH.fullmatch(span)]


def linked_files(text):
    """Targets of links and pictures that are files."""
    goals = re.findall(r"\]\(([^)\s]+)\)", FENCE.sub("", text))
    return [goal.split("#")[0] for goal in goals if "://" not in goal and goal[0] != "#"]


def test_the_top_level_holds_only_what_it_should():
    names = {path.split("/")[0] for path in kept_files()}
    assert {name for name in names if not name.startswith(".")} == TOP_LEVEL


@pytest.mark.parametrize("document", documents(), ids=lambda path: path.name)
def test_paths_named_in_documents_exist(document):
    text = document.read_text(encoding="utf-8")
    missing = [path for path in named_paths(text) if not (ROOT / path).exists()]
    missing += [path for path in linked_files(text) if not (document.parent / path).exists()]
    assert missing == []


def test_documents_named_in_code_exist():
    code = [path for folder in ("core", "app") for path in (ROOT / folder).rglob("*.py")]
    named = {
        name for path in code for name in re.findall(r"docs/[\w./-]+\.md", path.read_text("utf-8"))
    }
    assert sorted(name for name in named if not (ROOT / name).exists()) == []


def test_the_path_reader_sees_paths_and_only_those():
    fenced = "\n```\n`core/x`\n```"
    text = "`core/units.py`, `docs/`, `tests/core/a.py::test_b`, `core/<room>/`, `m/s`" + fenced
    assert named_paths(text) == ["core/units.py", "docs/", "tests/core/a.py"]
    assert linked_files("[a](docs/b.md#c) ![d](e.png) [f](https://g) [h](#i)") == [
        "docs/b.md",
        "e.png",
    ]


def test_the_developers_guide_lists_the_rooms_of_core():
    rows = re.findall(r"^\| (`.*?) \|", (ROOT / "DEVELOPERS.md").read_text("utf-8"), re.MULTILINE)
    listed = {room for row in rows for room in re.findall(r"`(\w+)`", row)}
    rooms = {
        path.stem for path in (ROOT / "core").iterdir() if path.suffix == ".py" or path.is_dir()
    }
    assert listed == {room for room in rooms if not room.startswith("__")}

"""The wheel holds what stands in the packages, no more and no less."""

import configparser
import subprocess
import sys
import zipfile
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parents[1]
PACKAGES = ("app", "core", "assets")


@pytest.fixture(scope="module")
def wheel(tmp_path_factory):
    folder = tmp_path_factory.mktemp("wheel")
    build = [sys.executable, "-m", "hatchling", "build", "-t", "wheel", "-d", str(folder)]
    subprocess.run(build, cwd=ROOT, check=True, capture_output=True, timeout=120)
    (path,) = folder.iterdir()
    with zipfile.ZipFile(path) as archive:
        yield archive


def text_of(archive, ending):
    (name,) = [name for name in archive.namelist() if name.endswith(ending)]
    return archive.read(name).decode()


def test_the_wheel_holds_every_file_of_the_packages_and_no_other(wheel):
    on_disk = {
        path.relative_to(ROOT).as_posix()
        for package in PACKAGES
        for path in (ROOT / package).rglob("*")
        if path.is_file() and "__pycache__" not in path.parts
    }
    packed = {name for name in wheel.namelist() if ".dist-info/" not in name}
    assert packed == on_disk


def test_the_wheel_brings_the_command(wheel):
    scripts = configparser.ConfigParser()
    scripts.read_string(text_of(wheel, ".dist-info/entry_points.txt"))
    assert dict(scripts["console_scripts"]) == {"kerfwave": "app.command:main"}


def test_the_wheel_brings_its_licence(wheel):
    licence = (ROOT / "docs/LICENSE").read_text(encoding="utf-8")
    assert text_of(wheel, ".dist-info/licenses/docs/LICENSE") == licence
    assert "License-Expression: MIT" in text_of(wheel, ".dist-info/METADATA")

"""Golden files: `pytest tests/golden --regen-golden` writes them anew, then fails the run."""

from pathlib import Path

import pytest

FILES = Path(__file__).parent / "files"


def pytest_addoption(parser):
    parser.addoption("--regen-golden", action="store_true", help="write the golden files anew")


@pytest.fixture
def golden(request):
    """Bytes of a golden file, by name; with --regen-golden it is written first."""

    def read(name, data):
        path = FILES / name
        if request.config.getoption("--regen-golden", default=False):
            FILES.mkdir(exist_ok=True)
            path.write_bytes(data)
            pytest.fail(f"{name} is written anew: look at the difference before you keep it")
        return path.read_bytes()

    return read

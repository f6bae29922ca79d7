"""The process beside the window: it answers, refuses, is dropped, dies and starts again."""

import multiprocessing
import os
import signal
import subprocess
import sys
import time
from dataclasses import replace
from pathlib import Path

import pytest
from board_shapes import board_dual_edge

from app.jobs.solver_process import SolverProcess
from core.design import edit
from core.design.defaults import default_design
from core.errors import Cancelled, ModelError
from core.layout.build import build_layout
from core.layout.tail import coax_tail
from core.response.bands import frequency_grid

SMALL = edit.with_texts(
    default_design(),
    {"feed": "probe", "brief.polarisation": "linear", "stock.ground": "rect:80mmx80mm"}.items(),
)
LAYOUT = build_layout(SMALL)
FREQUENCIES = frequency_grid(SMALL.brief.frequency)
CUT_OFF = replace(LAYOUT, ports=(replace(LAYOUT.ports[0], x=0.2),))


class Listener:
    """Counts steps, and does something at the first."""

    def __init__(self, at_first=lambda: None):
        self.steps, self._at_first = [], at_first

    def step(self, done, total):
        self.steps.append((done, total))
        if len(self.steps) == 1:
            self._at_first()


def cancel():
    raise Cancelled


def the_process():
    (process,) = multiprocessing.active_children()
    return process


def answered(solver):
    response = solver.solve(LAYOUT, FREQUENCIES, Listener(), "quick")
    return response.engine == "field" and len(response.sweep.s11) == len(FREQUENCIES)


def wait_until(is_so, seconds=30.0):
    end = time.monotonic() + seconds
    while not is_so() and time.monotonic() < end:
        time.sleep(0.01)
    return is_so()


@pytest.fixture(scope="module")
def solver():
    found = SolverProcess()
    yield found
    found.close()


def test_it_answers_and_tells_each_step(solver):
    listener = Listener()
    response = solver.solve(LAYOUT, FREQUENCIES, listener, "quick")
    assert response.engine == "field"
    assert listener.steps == [(0, 3), (1, 3), (2, 3)]


def test_what_it_refuses_is_told_and_it_goes_on(solver):
    assert answered(solver)
    before = the_process().pid
    with pytest.raises(ModelError, match=r"the probe does not meet .*; accepted: on the copper"):
        solver.solve(CUT_OFF, FREQUENCIES, Listener(), "quick")
    assert answered(solver)
    assert the_process().pid == before


def test_a_dropped_question_is_left_and_the_next_one_answered(solver):
    listener = Listener(cancel)
    with pytest.raises(Cancelled):
        solver.solve(LAYOUT, FREQUENCIES, listener, "normal")
    assert len(listener.steps) == 1
    assert answered(solver)


def test_a_cable_goes_through_the_pipe_and_can_be_dropped(solver):
    tail = coax_tail(LAYOUT)
    with pytest.raises(Cancelled):
        solver.solve(LAYOUT, FREQUENCIES, Listener(cancel), "coarse", tail)
    bare, hung = (
        solver.solve(LAYOUT, FREQUENCIES, Listener(), "quick", one) for one in (None, tail)
    )
    sheets = [[sheet.name for sheet in one.mesh.sheets] for one in (bare, hung)]
    assert sheets[1] == [*sheets[0], "coax tail"]
    with pytest.raises(ModelError, match="a board's ground plane is solved as endless"):
        solver.solve(board_dual_edge(), FREQUENCIES, Listener(), "quick", tail)
    assert answered(solver)


def test_dropping_where_nothing_is_asked_harms_nothing(solver):
    solver.drop()
    assert answered(solver)


def test_a_bug_in_it_is_carried_to_the_window(solver):
    with pytest.raises(RuntimeError, match="no such level"):
        solver.solve(LAYOUT, FREQUENCIES, Listener(), "no such level")
    assert answered(solver)


def test_a_killed_process_is_one_line_and_starts_again():
    solver = SolverProcess()
    others = set(multiprocessing.active_children())

    def own():
        return (set(multiprocessing.active_children()) - others).pop()

    with pytest.raises(ModelError, match="its process has ended; it starts again") as error:
        solver.solve(LAYOUT, FREQUENCIES, Listener(lambda: own().kill()), "normal")
    assert "\n" not in str(error.value)
    assert answered(solver)
    process = own()
    solver.close()
    assert not set(multiprocessing.active_children()) - others
    with pytest.raises(ValueError, match="closed"):
        process.is_alive()
    with pytest.raises(Cancelled):
        solver.solve(LAYOUT, FREQUENCIES, Listener(), "quick")


PARENT = """
import os
import threading
from tests_layout import LAYOUT, FREQUENCIES, Listener
from app.jobs.solver_process import SolverProcess
import multiprocessing

def tell():
    (process,) = multiprocessing.active_children()
    print(process.pid, flush=True)
    os._exit(1)

if __name__ == "__main__":
    SolverProcess().solve(LAYOUT, FREQUENCIES, Listener(tell), "normal")
"""


@pytest.mark.skipif(not hasattr(signal, "SIGKILL"), reason="signals as on POSIX")
def test_it_does_not_outlive_a_window_that_crashes(tmp_path):
    script = tmp_path / "parent.py"
    script.write_text(PARENT.replace("tests_layout", "test_solver_process"))
    paths = os.pathsep.join([str(Path(__file__).parent), *sys.path])
    done = subprocess.run(
        [sys.executable, script],
        env={**os.environ, "PYTHONPATH": paths},
        capture_output=True,
        text=True,
        timeout=240,
        check=False,
    )
    assert done.stdout.strip(), done.stderr
    pid = int(done.stdout)

    def is_gone():
        try:
            os.kill(pid, 0)
        except ProcessLookupError:
            return True
        # Where nobody collects it, what is left of an ended process is a line in a table.
        status = Path(f"/proc/{pid}/stat")
        return status.exists() and status.read_text().rpartition(")")[2].split()[0] == "Z"

    assert wait_until(is_gone, 60.0)

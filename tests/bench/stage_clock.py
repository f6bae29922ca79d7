"""Tell how long each stage of a field solution takes, by wrapping the functions it is made of."""

from __future__ import annotations

import time
from collections.abc import Callable, Iterator
from contextlib import ExitStack, contextmanager
from functools import wraps
from importlib import import_module
from typing import Any
from unittest.mock import patch

STAGES = ("mesh", "near terms", "tables", "fill", "solve", "sweep", "far field")
REST = "rest"
_PARTS = {
    "mesh": (
        "core.fullwave.solvers.build_mesh",
        "core.fullwave.solvers.build_board_mesh",
    ),
    "near terms": (
        "core.fullwave.solvers.build_system",
        "core.fullwave.solvers.build_layered_system",
    ),
    "tables": (
        "core.fullwave.board_kernels.plan_tables",
        "core.fullwave.layered_system.build_probe_moments",
        "core.fullwave.layered_system.add_probe",
        "core.fullwave.layered_system.port_voltages",
        "core.fullwave.kernel_table.TablePlan.tables",
    ),
    "fill": (
        "core.fullwave.system.impedance_matrix",
        "core.fullwave.system.add_upright_coupling",
        "core.fullwave.layered_system.layered_matrix",
    ),
    "solve": (
        "core.fullwave.system.currents",
        "core.fullwave.layered_system.currents",
        "core.fullwave.equations.currents",
    ),
    "sweep": ("core.fullwave.respond.adaptive_sweep", "core.fullwave.respond.natural_modes"),
    "far field": (
        "core.fullwave.solvers.radiated_field",
        "core.fullwave.solvers.space_field",
        "core.fullwave.solvers.power_into_waves",
        "core.fullwave.solvers.sphere_power",
        "core.fullwave.solvers.full_sphere",
        "core.fullwave.solvers.half_sphere",
        "core.fullwave.respond.pattern_cut",
        "core.fullwave.system.radiated_field",
        "core.fullwave.layered_system.boresight_of_moments",
        "core.fullwave.layered_system.power_into_space",
        "core.fullwave.board_kernels.power_into_space",
        "core.fullwave.board_kernels.power_into_waves",
    ),
}


class StageClock:
    """Processor time of all threads by stage, and time elapsed in all, s.

    Processor time is what another program on the machine changes least. What one stage calls of
    another counts for the other alone.
    """

    def __init__(self) -> None:
        self.seconds = dict.fromkeys((*STAGES, REST), 0.0)
        self.calls = dict.fromkeys(STAGES, 0)
        self.elapsed = 0.0
        self.unknowns = 0
        self._stack = [REST]
        self._since = time.process_time()

    def _turn(self) -> None:
        now = time.process_time()
        self.seconds[self._stack[-1]] += now - self._since
        self._since = now

    def wrapped(self, stage: str, work: Callable[..., Any]) -> Callable[..., Any]:
        """The same function, its time told."""

        @wraps(work)
        def timed(*args: Any, **options: Any) -> Any:
            self._turn()
            self.calls[stage] += 1
            self._stack.append(stage)
            try:
                if stage == "solve":
                    self.unknowns = len(args[0])
                return work(*args, **options)
            finally:
                self._turn()
                self._stack.pop()

        return timed

    @contextmanager
    def running(self) -> Iterator[None]:
        """Tell the time of what is done inside."""
        with ExitStack() as stack:
            for stage, names in _PARTS.items():
                for name in names:
                    stack.enter_context(patch(name, self.wrapped(stage, _found(name))))
            self._since, begin = time.process_time(), time.perf_counter()
            yield
            self._turn()
            self.elapsed = time.perf_counter() - begin

    @property
    def total(self) -> float:
        """Processor time in all, s."""
        return sum(self.seconds.values())


def _found(name: str) -> Callable[..., Any]:
    """Function or method by its full name."""
    path, last = name.rsplit(".", 1)
    try:
        return getattr(import_module(path), last)
    except ModuleNotFoundError:
        module, owner = path.rsplit(".", 1)
        return getattr(getattr(import_module(module), owner), last)

"""Layouts of one stack solved one after another, each at one frequency."""

from __future__ import annotations

from typing import TYPE_CHECKING, Final

from core.fullwave.solvers import build_solver, kernels_of

if TYPE_CHECKING:
    from core.fullwave.board_kernels import BoardKernels
    from core.fullwave.mesh import Level
    from core.fullwave.system import Solution
    from core.layout.model import Layout

_BAND: Final = 1.2  # that the kernels reach, of the brief's frequency


class Solving:
    """Solves layouts of one stack one after another, each at one frequency.

    What they have in common is worked out once.
    """

    def __init__(self) -> None:
        self._kernels: BoardKernels | None = None

    def __call__(self, layout: Layout, frequency: float, level: Level) -> Solution:
        """Solve a layout.

        Parameters
        ----------
        layout : Layout
            Of the same stack, foil and brief's frequency as the first.
        frequency : float
            Hz, at most a fifth over the brief's.
        level : Level
            Fineness of the mesh.

        Returns
        -------
        Solution

        Raises
        ------
        ModelError
            If the copper cannot be meshed, or the stack is outside what the solver covers.
        """
        if self._kernels is None or self._kernels.layers != layout.stack:
            self._kernels = kernels_of(layout, _BAND * layout.frequency)
        return build_solver(layout, level, self._kernels).solve(frequency)

"""The equations of an antenna at one frequency, and what a few solutions say between them.

Shapes: n functions, k solved frequencies, v vectors.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

import numpy as np

from core.constants import FREE_SPACE_IMPEDANCE, TWO_PI
from core.fullwave.moments import currents

if TYPE_CHECKING:
    from collections.abc import Callable

    from numpy.typing import NDArray

    from core.progress import Progress

    Floats = NDArray[np.float64]
    Complexes = NDArray[np.complex128]

_ALIKE: Final = 1e-6  # of the largest singular value: vectors under it say nothing new


@dataclass(frozen=True, eq=False)
class Equations:
    """What is to be solved at one frequency, with 1 V (peak) at the port.

    Attributes
    ----------
    frequency : float
        Hz.
    matrix : (n, n) ndarray of complex
        Symmetric, ohm m².
    excitation : (n,) ndarray of complex
        V m.
    shunt : complex
        Admittance that the port has besides that of the currents, S.
    boresight : (2, n) ndarray of complex
        Far field r exp(jkr) E along x and y of each function's 1 A/m, V per A/m.
    """

    frequency: float
    matrix: Complexes
    excitation: Complexes
    shunt: complex
    boresight: Complexes

    def admittance(self, solved: Complexes) -> complex:
        """At the port, S, from (n,) currents."""
        return complex(self.excitation @ solved) + self.shunt

    def boresight_field(self, solved: Complexes) -> tuple[complex, complex]:
        """Far field at boresight along x and y in the scale of `Samples`, from (n,) currents."""
        accepted = self.admittance(solved).real / 2.0
        field = self.boresight @ solved * np.sqrt(TWO_PI / (FREE_SPACE_IMPEDANCE * accepted))
        return complex(field[0]), complex(field[1])


@dataclass(frozen=True, eq=False)
class Projection:
    """Equations at k frequencies, in v vectors that hold the currents there.

    Attributes
    ----------
    frequencies : (k,) ndarray of float
        Hz.
    matrices : (k, v, v) ndarray of complex
        Times the frequency.
    excitations : (k, v) ndarray of complex
    shunts : (k,) ndarray of complex
    boresights : (k, 2, v) ndarray of complex
        Over the frequency.
    """

    frequencies: Floats
    matrices: Complexes
    excitations: Complexes
    shunts: Complexes
    boresights: Complexes

    def quantities(self, frequency: float) -> Complexes:
        """Admittance (S) and far field at boresight along x and y (V), (3,)."""
        nodes = self.frequencies
        apart = nodes[:, None] - nodes + np.eye(len(nodes))
        steps = (frequency - nodes) / apart + np.eye(len(nodes)) * (1.0 - (frequency - nodes))
        share = np.prod(steps, axis=1)
        excitation = share @ self.excitations
        solved = np.linalg.solve(np.tensordot(share, self.matrices, 1) / frequency, excitation)
        admittance = excitation @ solved + share @ self.shunts
        field = np.tensordot(share, self.boresights, 1) @ solved * frequency
        return np.array([admittance, *field])


def project(
    pose: Callable[[float], Equations], frequencies: Floats, progress: Progress
) -> tuple[Projection, dict[float, tuple[Equations, Complexes]]]:
    """Solve at a few frequencies so that the equations can be solved in little between them.

    Parameters
    ----------
    pose : callable
        From a frequency (Hz) to its equations.
    frequencies : (k,) ndarray of float
        Hz, all different; three serve a fifth of an octave to a third.
    progress : Progress
        Told before each frequency; may cancel.

    Returns
    -------
    projection : Projection
    solved : dict of float to (Equations, (n,) ndarray of complex)
        Equations and currents by frequency.

    Notes
    -----
    The currents between are sought among combinations of those found at the solved
    frequencies, by the same Galerkin test [1]_, [2]_. With each frequency the currents that
    plane waves from boresight drive in the shorted antenna are found too, for another column
    on the right: admittance and far field then err by the product of what both miss. A matrix
    times its frequency is nearly a parabola in frequency, so that no more need be filled.

    References
    ----------
    .. [1] E. J. Grimme, *Krylov Projection Methods for Model Reduction*, PhD thesis, University
       of Illinois, 1997, ch. 3: two-sided rational interpolation (from memory).
    .. [2] E. H. Newman, "Generation of wide-band data from the method of moments by
       interpolating the impedance matrix", IEEE Trans. Antennas Propag. 36(12), 1988,
       1820-1824 (from memory).
    """
    solved: dict[float, tuple[Equations, Complexes]] = {}
    found: list[Complexes] = []
    for done, frequency in enumerate(frequencies.tolist()):
        progress.step(done, len(frequencies))
        posed = pose(frequency)
        columns = np.column_stack([posed.excitation, posed.boresight.T])
        answers = currents(posed.matrix.copy(), columns)
        solved[frequency] = posed, answers[:, 0]
        found.append(answers)
    vectors = _spanning(np.hstack(found))
    posed_all = [posed for posed, _ in solved.values()]
    projection = Projection(
        np.array(list(solved)),
        np.stack([one.frequency * (vectors.T @ one.matrix @ vectors) for one in posed_all]),
        np.stack([one.excitation @ vectors for one in posed_all]),
        np.array([one.shunt for one in posed_all]),
        np.stack([one.boresight @ vectors / one.frequency for one in posed_all]),
    )
    return projection, solved


def _spanning(columns: Complexes) -> Complexes:
    """Orthonormal vectors (n, v) that span what columns (n, c) do."""
    scaled = columns / np.linalg.norm(columns, axis=0)
    vectors, sizes, _ = np.linalg.svd(scaled, full_matrices=False)
    return np.asarray(vectors[:, sizes > _ALIKE * sizes[0]])

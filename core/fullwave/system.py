"""An antenna in free space as a system to solve: its mesh, its moments, its port, its foil."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from math import pi
from typing import TYPE_CHECKING

import numpy as np

from core.constants import TWO_PI, VACUUM_PERMEABILITY
from core.errors import ModelError
from core.fullwave.basis import build_basis
from core.fullwave.equations import Equations
from core.fullwave.far_field import boresight_weights
from core.fullwave.moments import Moments, build_moments, currents, impedance_matrix
from core.fullwave.ports import ring_capacitance, ring_excitation
from core.fullwave.upright import add_upright_coupling, spacer_field

if TYPE_CHECKING:
    from collections.abc import Callable

    from numpy.typing import NDArray

    from core.fullwave.mesh_model import Mesh
    from core.layout.model import Foil
    from core.lines.stack import Layer

    Floats = NDArray[np.float64]
    Complexes = NDArray[np.complex128]


@dataclass(frozen=True, eq=False)
class System:
    """An antenna ready to be solved at any frequency.

    Attributes
    ----------
    mesh : Mesh
    moments : Moments
    excitation : (n,) ndarray of float
        Of the port, at 1 V, V m.
    capacitance : float
        That the port adds by itself, F.
    foil : Foil
        Of every conductor.
    layers : tuple of Layer
        Spacer between ground plate and top copper, from the ground up; none for air.
    """

    mesh: Mesh
    moments: Moments
    excitation: Floats
    capacitance: float
    foil: Foil
    layers: tuple[Layer, ...]


@dataclass(frozen=True, eq=False)
class Solution:
    """An antenna solved at one frequency, 1 V (peak) at its port.

    Attributes
    ----------
    frequency : float
        Hz.
    currents : (n,) ndarray of complex
        Current density that leaves through each function's edge, A/m.
    admittance : complex
        At the port, S.
    e_x, e_y : complex
        Far field at boresight in the scale of `core.response.model.Samples`.
    losing : callable
        Works `lost` out.
    """

    frequency: float
    currents: Complexes
    admittance: complex
    e_x: complex
    e_y: complex
    losing: Callable[[], float]

    @cached_property
    def lost(self) -> float:
        """Power turned to heat in conductors and spacer over that accepted; of use to few."""
        return self.losing()


def build_system(mesh: Mesh, foil: Foil, layers: tuple[Layer, ...] = ()) -> System:
    """Work out all that does not change with frequency.

    Parameters
    ----------
    mesh : Mesh
        With a port.
    foil : Foil
    layers : tuple of Layer
        Spacer between ground plate and top copper, from the ground up; none for air.

    Returns
    -------
    System

    Raises
    ------
    ModelError
        If the mesh has no port.
    """
    if mesh.port is None:
        raise ModelError("field solver: the mesh has no port; accepted: one coax ring")
    basis = build_basis(mesh.vertices, mesh.triangles, mesh.sheet)
    return System(
        mesh,
        build_moments(basis, mesh.triangles, mesh.sheet, layers),
        ring_excitation(mesh, basis, mesh.port),
        ring_capacitance(mesh.port),
        foil,
        layers,
    )


def solve(system: System, frequency: float) -> Solution:
    """Solve for the currents at one frequency.

    Parameters
    ----------
    system : System
    frequency : float
        Hz, > 0.

    Returns
    -------
    Solution
    """
    posed = equations(system, frequency)
    return solution(system, posed, currents(posed.matrix, posed.excitation))


def equations(system: System, frequency: float) -> Equations:
    """Equations at one frequency.

    Parameters
    ----------
    system : System
    frequency : float
        Hz, > 0.

    Returns
    -------
    Equations
    """
    basis = system.moments.basis
    sheet = np.full(basis.triangles, sheet_impedance(system.foil, frequency))
    return Equations(
        frequency=frequency,
        matrix=_matrix(system, frequency, sheet, lossy=True),
        excitation=system.excitation.astype(np.complex128),
        shunt=1j * TWO_PI * frequency * system.capacitance,
        boresight=boresight_weights(basis, frequency),
    )


def solution(system: System, posed: Equations, solved: Complexes) -> Solution:
    """What currents that were found mean.

    Parameters
    ----------
    system : System
    posed : Equations
        That they solve; the matrix is not read.
    solved : (n,) ndarray of complex
        A/m.

    Returns
    -------
    Solution
    """
    frequency = posed.frequency  # alone: what is kept of this must not keep the matrix
    admittance = posed.admittance(solved)
    accepted = admittance.real / 2.0
    e_x, e_y = posed.boresight_field(solved)
    return Solution(
        frequency=frequency,
        currents=solved,
        admittance=admittance,
        e_x=e_x,
        e_y=e_y,
        losing=lambda: _heat(system, solved, frequency, accepted) / accepted,
    )


def radiated_field(
    system: System, solved: Complexes, frequency: float, directions: Floats
) -> Complexes:
    """Far field of currents and of what they polarise in the spacer.

    Parameters
    ----------
    system : System
    solved : (n,) ndarray of complex
        Currents, A/m.
    frequency : float
        Hz.
    directions : (d, 3) ndarray of float
        Unit vectors.

    Returns
    -------
    (d, 3) ndarray of complex
        x, y and z components of r exp(jkr) E, V.
    """
    return spacer_field(
        system.moments.basis, system.mesh.sheet, system.layers, solved, frequency, directions
    )


def _matrix(system: System, frequency: float, sheet: Complexes, lossy: bool) -> Complexes:
    matrix = impedance_matrix(system.moments, frequency, sheet, lossy)
    add_upright_coupling(matrix, system.moments.basis, system.mesh.sheet, system.layers, frequency)
    return matrix


def _heat(system: System, solved: Complexes, frequency: float, accepted: float) -> float:
    """Power lost, W: by the foil's resistance; with a lossy spacer by what is not radiated."""
    basis = system.moments.basis
    if any(layer.loss_tangent > 0.0 for layer in system.layers):
        nothing = np.zeros(basis.triangles, dtype=np.complex128)
        matrix = _matrix(system, frequency, nothing, lossy=False)
        return accepted - 0.5 * float(np.real(solved.conj() @ (matrix @ solved)))
    halves = basis.on_halves(solved)
    squares = np.einsum("at,tab,bt->", halves.conj(), system.moments.overlaps, halves).real
    return float(squares * sheet_impedance(system.foil, frequency).real / 2.0)


def sheet_impedance(foil: Foil, frequency: float) -> complex:
    """Impedance of foil that carries its current on one side.

    Parameters
    ----------
    foil : Foil
    frequency : float
        Hz, > 0.

    Returns
    -------
    complex
        Ohm.

    Notes
    -----
    (1 + j)/(sigma delta) coth((1 + j) t / delta) [1]_: over a ground plane the current runs
    on the side that faces it. Roughness raises the real part [2]_.

    References
    ----------
    .. [1] S. Ramo, J. R. Whinnery, T. Van Duzer, *Fields and Waves in Communication
       Electronics*, 3rd ed., Wiley, 1994, sec. 3.17 (from memory).
    .. [2] E. Hammerstad, O. Jensen, "Accurate models for microstrip computer-aided design",
       IEEE MTT-S Digest, 1980, 407-409.
    """
    depth = 1.0 / np.sqrt(pi * frequency * VACUUM_PERMEABILITY * foil.conductivity)
    turns = (1.0 + 1.0j) * foil.thickness / depth
    smooth = (1.0 + 1.0j) / (foil.conductivity * depth) / np.tanh(turns)
    rough = 1.0 + 2.0 / pi * np.arctan(1.4 * (foil.roughness / depth) ** 2)
    return complex(smooth.real * rough, smooth.imag)

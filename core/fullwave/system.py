"""An antenna in free space as a system to solve: its mesh, its moments, its port, its foil."""

from __future__ import annotations

from dataclasses import dataclass
from math import pi
from typing import TYPE_CHECKING

import numpy as np

from core.constants import FREE_SPACE_IMPEDANCE, TWO_PI, VACUUM_PERMEABILITY
from core.errors import ModelError
from core.fullwave.basis import build_basis
from core.fullwave.far_field import far_field
from core.fullwave.moments import Moments, build_moments, currents, impedance_matrix
from core.fullwave.ports import ring_capacitance, ring_excitation

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from core.fullwave.mesh_model import Mesh
    from core.layout.model import Foil

    Floats = NDArray[np.float64]
    Complexes = NDArray[np.complex128]

_BORESIGHT = np.array([[0.0, 0.0, 1.0]])


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
    """

    mesh: Mesh
    moments: Moments
    excitation: Floats
    capacitance: float
    foil: Foil


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
    lost : float
        Power turned to heat in the conductors, over the power accepted.
    e_x, e_y : complex
        Far field at boresight in the scale of `core.response.model.Samples`.
    """

    frequency: float
    currents: Complexes
    admittance: complex
    lost: float
    e_x: complex
    e_y: complex


def build_system(mesh: Mesh, foil: Foil) -> System:
    """Work out all that does not change with frequency.

    Parameters
    ----------
    mesh : Mesh
        With a port.
    foil : Foil

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
        build_moments(basis, mesh.triangles),
        ring_excitation(mesh, basis, mesh.port),
        ring_capacitance(mesh.port),
        foil,
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
    basis = system.moments.basis
    sheet = np.full(basis.triangles, sheet_impedance(system.foil, frequency))
    matrix = impedance_matrix(system.moments, frequency, sheet)
    solved = currents(matrix, system.excitation.astype(np.complex128))
    admittance = complex(system.excitation @ solved) + 1j * TWO_PI * frequency * system.capacitance
    accepted = admittance.real / 2.0
    halves = basis.on_halves(solved)
    heat = np.einsum("at,tab,bt->t", halves.conj(), system.moments.overlaps, halves).real
    field = far_field(basis, solved, frequency, _BORESIGHT)[0]
    field *= np.sqrt(4.0 * pi / (2.0 * FREE_SPACE_IMPEDANCE * accepted))
    return Solution(
        frequency=frequency,
        currents=solved,
        admittance=admittance,
        lost=float(heat @ sheet.real / 2.0 / accepted),
        e_x=complex(field[0]),
        e_y=complex(field[1]),
    )


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

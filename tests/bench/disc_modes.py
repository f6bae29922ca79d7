"""Natural modes of a disc on a grounded slab by finite elements, for comparison.

The field goes round as cos phi and sin phi, so the problem is flat: radius and height. With
w = r E_phi and E = r u - grad w in that plane, u in Nédélec's elements and w in Lagrange's, no
term is singular on the axis (M. Oh, "de Rham complexes arising from Fourier finite element
methods in axisymmetric domains", Comput. Math. Appl. 70, 2063-2073, 2015; from memory). Air and
slab run into perfectly matched layers, made by complex coordinates that do not depend on
frequency, so that poles are plain complex eigenvalues.
"""

from __future__ import annotations

from math import pi

import numpy as np
from scipy.sparse import block_array, csc_array
from scipy.sparse.linalg import LinearOperator, eigs, splu
from skfem import Basis, BilinearForm, ElementTriN2, ElementTriP2, MeshTri
from skfem.helpers import curl, grad

from core.constants import SPEED_OF_LIGHT

_AROUND = 0.4  # wavelengths of air round the disc before the matched layers
_LAYER = 0.3  # wavelengths, their thickness
_PULL = 6.0  # of complex coordinates at the far side


def disc_mode(
    radius: float, height: float, eps_r: float, near: float, fineness: float = 1.0
) -> tuple[float, float]:
    """Frequency (Hz) and Q of the lossless mode nearest to a frequency."""
    wavelength, wavenumber = SPEED_OF_LIGHT / near, 2.0 * pi * near / SPEED_OF_LIGHT
    ends = radius + _AROUND * wavelength, height + _AROUND * wavelength
    axes = [
        _graded(at, end, height / 20.0 / fineness, wavelength / 12.0 / fineness, fineness)
        for at, end in zip((radius, height), ends, strict=True)
    ]
    layer = np.linspace(0.0, _LAYER * wavelength, int(10 * fineness) + 1)[1:]
    mesh = MeshTri.init_tensor(
        *(np.append(axis, end + layer) for axis, end in zip(axes, ends, strict=True))
    )
    stiff, mass = _matrices(mesh, ends, _LAYER * wavelength, (radius, height, eps_r))
    target = wavenumber**2
    solver = splu(csc_array(stiff - target * mass))
    operator = LinearOperator(stiff.shape, lambda x: solver.solve(mass @ x), dtype=complex)
    inverse = eigs(operator, k=4, return_eigenvectors=False, tol=1e-9)
    found = np.sqrt(target + 1.0 / inverse)
    pole = found[np.argmin(abs(found - wavenumber))]
    return float(abs(pole) * SPEED_OF_LIGHT / (2.0 * pi)), float(abs(pole) / (2.0 * pole.imag))


def _graded(at: float, end: float, small: float, large: float, fineness: float) -> np.ndarray:
    """Coordinates from 0 to an end, close together at one place."""
    growth = 1.0 + 0.35 / fineness

    def steps(length: float) -> np.ndarray:
        places = [0.0]
        step = small
        while places[-1] < length:
            places.append(places[-1] + step)
            step = min(step * growth, large)
        return np.array(places) * length / places[-1]

    return np.concatenate([at - steps(at)[::-1], at + steps(end - at)[1:]])


def _matrices(mesh, ends, layer, disc):
    """Curl and mass matrices, what is held to zero left out."""
    radius, height, eps_r = disc

    def around(w):
        r, z = w.x
        pulls, places = zip(
            *(_pulled(x, end, layer) for x, end in zip((r, z), ends, strict=True)), strict=True
        )
        return *pulls, places[0], np.where(z < height, eps_r, 1.0)

    @BilinearForm(dtype=np.complex128)
    def curls(u, v, w):
        s_r, s_z, r, _ = around(w)
        one, other = (r * curl(f) + s_r * f[1] for f in (u, v))
        return r / (s_r * s_z) * one * other + r * (
            s_z / s_r * u[0] * v[0] + s_r / s_z * u[1] * v[1]
        )

    @BilinearForm(dtype=np.complex128)
    def plane(u, v, w):
        s_r, s_z, r, eps = around(w)
        return eps * r**3 * (s_z / s_r * u[0] * v[0] + s_r / s_z * u[1] * v[1])

    @BilinearForm(dtype=np.complex128)
    def mixed(p, v, w):
        s_r, s_z, r, eps = around(w)
        return -eps * r**2 * (s_z / s_r * grad(p)[0] * v[0] + s_r / s_z * grad(p)[1] * v[1])

    @BilinearForm(dtype=np.complex128)
    def turning(p, q, w):
        s_r, s_z, r, eps = around(w)
        slopes = s_z / s_r * grad(p)[0] * grad(q)[0] + s_r / s_z * grad(p)[1] * grad(q)[1]
        return eps * (r * slopes + s_r * s_z * p * q / r)

    along = Basis(mesh, ElementTriN2(), intorder=6)
    across = along.with_element(ElementTriP2())
    coupling = mixed.assemble(across, along)
    upright = turning.assemble(across)
    stiff = block_array([[curls.assemble(along), None], [None, 0.0 * upright]], format="csr")
    mass = block_array([[plane.assemble(along), coupling], [coupling.T, upright]], format="csr")
    free = _free(mesh, along, across, radius, height)
    return stiff[free][:, free], mass[free][:, free]


def _pulled(x, end, layer):
    """Slope and value of the complex coordinate."""
    depth = np.maximum((x - end) / layer, 0.0)
    return 1.0 + (1.0 - 1.0j) * _PULL * depth**2, x + (1.0 - 1.0j) * _PULL * layer * depth**3 / 3.0


def _free(mesh, along, across, radius, height):
    """Unknowns that are not held: by metal, by the outer walls, by the axis."""
    r, z = mesh.p[:, mesh.facets]
    flat = np.ptp(z, axis=0) < 1e-12
    walls = (flat & (z[0] < 1e-12)) | (flat & (z[0] > z.max() - 1e-12))
    walls |= (r > r.max() - 1e-12).all(axis=0)
    plate = flat & (abs(z[0] - height) < 1e-12) & (r.mean(axis=0) < radius)
    metal = np.flatnonzero(walls | plate)
    axis = np.flatnonzero((r < 1e-12).all(axis=0))
    held = along.get_dofs(facets=metal).all()
    turning = across.get_dofs(facets=np.concatenate([metal, axis])).all()
    return np.setdiff1d(np.arange(along.N + across.N), np.append(held, along.N + turning))

"""The coax ring source: its field, and an impedance that does not depend on the probe's mesh."""

from dataclasses import replace
from math import asinh, log, pi

import numpy as np
import pytest
from fullwave_shapes import grid, thick_air
from scipy.integrate import dblquad

from core.constants import VACUUM_PERMITTIVITY
from core.fullwave.basis import build_basis
from core.fullwave.mesh import FINENESS, Level, build_mesh
from core.fullwave.mesh_model import CoaxRing, Mesh, Sheet
from core.fullwave.ports import ring_capacitance, ring_excitation
from core.fullwave.system import build_system, solve
from core.layout.build import build_layout

RING = CoaxRing(0.0, 0.0, 0.6e-3, 2.0e-3)


def on_axis(z):
    """Potential at 1 V: integral of E_z on the axis of an annular magnetic current.

    E_z = V / (2 ln(b/a)) (1/sqrt(z² + a²) - 1/sqrt(z² + b²)) where kb is small: C. A. Balanis,
    *Antenna Theory*, 4th ed., Wiley, 2016, eq. 8-33 (from memory).
    """
    spread = log(RING.outer / RING.inner)
    return (spread - asinh(z / RING.inner) + asinh(z / RING.outer)) / (2.0 * spread)


def along_axis(heights):
    """Narrow strip on the axis of the ring, and the reactions of its functions."""
    flat, triangles = grid(heights, np.array([-1e-6, 1e-6]))
    vertices = flat[:, [2, 1, 0]]
    mesh = Mesh(vertices, triangles, np.full(len(triangles), int(Sheet.TOP)), RING)
    basis = build_basis(vertices, triangles, mesh.sheet)
    return basis, ring_excitation(mesh, basis, RING)


@pytest.mark.parametrize(("low", "high"), [(0.4e-3, 1e-3), (1e-3, 5e-3), (5e-3, 60e-3)])
def test_potential_on_the_axis(low, high):
    # The reaction of a function is the length of its edge times the step of the potential
    # between its two triangles; along the strip the steps add up to that from end to end.
    basis, reactions = along_axis(np.linspace(low, high, 400))
    heights = basis.corners.mean(axis=1)[:, 2]
    here, there = basis.plus % basis.triangles, basis.minus % basis.triangles
    steps = reactions / basis.lengths.reshape(-1)[basis.plus]
    total = np.sum(np.sign(heights[there] - heights[here]) * steps)
    expected = on_axis(heights.min()) - on_axis(heights.max())
    assert total == pytest.approx(expected, rel=2e-3)


def test_far_potential_is_that_of_a_dipole():
    moment = (RING.outer**2 - RING.inner**2) / (8.0 * log(RING.outer / RING.inner))
    assert on_axis(0.1) == pytest.approx(moment / 0.1**2, rel=1e-3)


def test_ring_capacitance_is_its_double_integral():
    # C = eps0 / (4 pi) times the integral of E.E'/R over the ring twice, E = 1/(r ln(b/a)).
    a, b = RING.inner, RING.outer
    capacitance = ring_capacitance(RING)
    turns = (np.arange(4000) + 0.5) * 2 * pi / 4000

    def loops(one, two):
        distance = np.sqrt(one**2 + two**2 - 2 * one * two * np.cos(turns) + (2e-6) ** 2)
        return 2 * pi * np.mean(np.cos(turns) / distance)

    total, _ = dblquad(loops, a, b, a, b, epsabs=1e-7, epsrel=1e-4)
    expected = VACUUM_PERMITTIVITY / (4 * pi) * 2 * pi * total / log(b / a) ** 2
    assert capacitance == pytest.approx(expected, rel=5e-3)


def test_capacitance_grows_with_the_ring():
    twice = replace(RING, inner=2 * RING.inner, outer=2 * RING.outer)
    assert ring_capacitance(twice) == pytest.approx(2 * ring_capacitance(RING))


def admittance(monkeypatch, **finer):
    fine = replace(FINENESS[Level.COARSE], **finer)
    monkeypatch.setitem(FINENESS, Level.COARSE, fine)
    layout = build_layout(thick_air())
    return solve(
        build_system(build_mesh(layout, Level.COARSE), layout.foil, layout.stack), 2.45e9
    ).admittance


def test_impedance_settles_as_the_probe_is_cut_finer(monkeypatch):
    coarse, middle, fine = (
        admittance(monkeypatch, probe_cell=cell) for cell in (1 / 10, 1 / 40, 1 / 160)
    )
    assert abs(middle - coarse) < 8e-3 * abs(fine)
    assert abs(fine - middle) < 1e-3 * abs(fine)


def test_impedance_hardly_depends_on_the_probes_sides(monkeypatch):
    four, eight = (admittance(monkeypatch, probe_sides=sides) for sides in (4, 8))
    assert abs(eight - four) < 0.015 * abs(eight)

"""Layered media worked out another way, to check `core.fullwave` against.

Lines by the tangent formula of input impedances and by fundamental solutions started at the
ground plane and in the air; fields of vertical currents by quadrature over source and observer;
Sommerfeld integrals by brute force on another path, their tails summed between zeros of J0 and
extrapolated (Wynn's epsilon algorithm). Scales: free space has impedance 1, c = 1.
"""

import numpy as np
from numpy.polynomial import legendre
from scipy.special import jv

_X, _W = legendre.leggauss(24)


def permittivity(layer):
    return layer.eps_r * (1.0 - 1j * layer.loss_tangent)


def vertical_wavenumber(eps, k0, k_rho):
    """sqrt(eps k0² - k_rho²) that decays or leaves upwards."""
    root = np.sqrt(np.asarray(eps * k0**2 - k_rho**2, dtype=complex))
    return np.where((root.imag > 0) | ((root.imag == 0) & (root.real < 0)), -root, root)


def impedance(eps, k0, kz, tm):
    return kz / (k0 * eps) if tm else k0 / kz


def top_voltage(layers, k0, k_rho, tm):
    """Voltage at the top for a unit shunt current there."""
    below = 0.0
    for layer in layers:
        eps = permittivity(layer)
        kz = vertical_wavenumber(eps, k0, k_rho)
        z, tan = impedance(eps, k0, kz, tm), np.tan(kz * layer.thickness)
        below = z * (below + 1j * z * tan) / (z + 1j * below * tan)
    above = impedance(1.0, k0, vertical_wavenumber(1.0, k0, k_rho), tm)
    return 1.0 / (1.0 / above + 1.0 / below)


def vector_spectrum(layers, k0, k_rho):
    """G_xx of formulation C (Michalski and Mosig 1997)."""
    return top_voltage(layers, k0, k_rho, False) / (1j * k0)


def scalar_spectrum(layers, k0, k_rho):
    """K_phi of formulation C (Michalski and Mosig 1997)."""
    tm, te = (top_voltage(layers, k0, k_rho, kind) for kind in (True, False))
    return 1j * k0 / k_rho**2 * (tm - te)


class Lines:
    """TM or TE line of a stack at one k0 and one k_rho."""

    def __init__(self, layers, k0, k_rho, tm):
        self.layers, self.k0, self.tm = layers, k0, tm
        self.eps = [permittivity(layer) for layer in layers]
        self.kz = [vertical_wavenumber(eps, k0, k_rho) for eps in self.eps]
        self.air = impedance(1.0, k0, vertical_wavenumber(1.0, k0, k_rho), tm)
        self.edges = np.cumsum([0.0, *(layer.thickness for layer in layers)])

    def _step(self, i, depth):
        z = impedance(self.eps[i], self.k0, self.kz[i], self.tm)
        turn = self.kz[i] * depth
        return np.array(
            [[np.cos(turn), -1j * z * np.sin(turn)], [-1j / z * np.sin(turn), np.cos(turn)]]
        )

    def from_ground(self, z):
        """(voltage, current) at z, started as (0, 1) at the ground plane."""
        state = np.array([0.0, 1.0 + 0j])
        for i, bottom in enumerate(self.edges[:-1]):
            if z > bottom:
                state = self._step(i, min(z, self.edges[i + 1]) - bottom) @ state
        return state

    def from_air(self, z):
        """(voltage, current) at z, of the wave that leaves the top with current 1."""
        state = np.array([complex(self.air), 1.0])
        for i in reversed(range(len(self.layers))):
            if z < self.edges[i + 1]:
                depth = self.edges[i + 1] - max(z, self.edges[i])
                state = self._step(i, -depth) @ state
        return state

    def current(self, z, source, series=False):
        """Current at z for a unit shunt current, or series voltage, at `source`."""
        (v1, i1), (v2, i2) = self.from_ground(source), self.from_air(source)
        # Both sides meet at the source but for a unit step of current, or of voltage.
        low, high = (i2, i1) if series else (v2, v1)
        step = v2 * i1 - v1 * i2 if series else v1 * i2 - v2 * i1
        if z < source:
            return low * self.from_ground(z)[1] / step
        return high * self.from_air(z)[1] / step


def points_across(layers, count=24):
    """Gauss points over z, their weights and permittivities."""
    x, w = legendre.leggauss(count)
    bottom, found = 0.0, []
    for layer in layers:
        half = 0.5 * layer.thickness
        found += [
            (bottom + half * (1.0 + a), half * b, permittivity(layer))
            for a, b in zip(x, w, strict=True)
        ]
        bottom += layer.thickness
    return found


def sommerfeld(spectrum, distance, k0, densest, height):
    """Integral of spectrum(k) J0(k distance) k dk/(2 pi), by brute force."""

    def part(start, stop):
        k = start + (stop - start) * 0.5 * (_X + 1.0)
        values = spectrum(k.astype(complex)) * jv(0, k * distance) * k
        return (_W * values).sum() * 0.5 * (stop - start)

    def stretch(start, stop):
        total = 0.0
        while stop > 1.6 * start:
            total += part(start, 1.6 * start)
            start *= 1.6
        cuts = np.linspace(start, stop, 1 + max(1, int((stop - start) * height / 6.0)))
        return total + sum(map(part, cuts[:-1], cuts[1:]))

    # Up beside the origin, along above all poles, down, then the real axis.
    end, lift = 1.3 * densest + 0.5 * k0, min(0.15 * k0, 1.0 / distance)
    count = max(8, int(end * distance / 3.0) + int(4.0 * end / lift))
    corners = np.concatenate([[0.0], 1j * lift + np.linspace(0.0, end, count), [end]])
    total = sum(map(part, corners[:-1], corners[1:]))
    zero = np.ceil(end * distance / np.pi + 0.25) * np.pi / distance
    sums = [total + stretch(end, zero)]
    while len(sums) < 20 or (zero * height < 60.0 and len(sums) < 60):
        sums.append(sums[-1] + stretch(zero, zero + np.pi / distance))
        zero += np.pi / distance
    return _extrapolated(np.array(sums[-17:])) / (2.0 * np.pi)


def _extrapolated(sums):
    before, now, best = np.zeros(len(sums) + 1, complex), sums, sums[-1]
    while len(now) > 2:
        steps = np.diff(now)
        if np.any(abs(steps) < 1e-300):
            break
        before, now = now, before[1:-1] + 1.0 / steps
        if len(now) % 2 == len(sums) % 2:
            best = now[-1]
    return best

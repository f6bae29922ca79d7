"""The instant model: element and branches joined, over frequency.

Shapes: n frequencies, p landings, k modes.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from core.constants import TWO_PI
from core.live.branches import build_branches
from core.live.cavity import X_MODE, Y_MODE, Cavity, build_cavity, contact_of
from core.live.element import broadside_directivity
from core.live.modes import element_modes
from core.live.pattern import plate_share, slot_cuts
from core.live.trust import judge_trust
from core.response.model import Mode, Response, Samples

if TYPE_CHECKING:
    from numpy.typing import ArrayLike, NDArray

    from core.layout.model import Layout
    from core.lines.stack import Layer
    from core.live.branches import Branches
    from core.live.modes import ElementModes, SideMode
    from core.progress import Progress

    Floats = NDArray[np.float64]
    Complexes = NDArray[np.complex128]

ENGINE = "live"
_LEAST_EFFICIENCY = 1e-12  # keeps an antenna that radiates nothing from dividing by it
_LEAST_POWER = 1e-30  # W for 1 V at the tee: keeps a dead short from dividing by nothing


def respond(layout: Layout, frequencies: ArrayLike, progress: Progress) -> Response:
    """Response of a layout by design equations, at once.

    Parameters
    ----------
    layout : Layout
    frequencies : (n,) array_like of float
        Hz, > 0, rising.
    progress : Progress
        Told once, at the end.

    Returns
    -------
    Response

    Raises
    ------
    OutOfRangeError
        If a strip or a frequency is outside what the line formulas take.

    Notes
    -----
    Ground plane infinite but for its share of the directivity; strips do not couple to the
    element or to each other and do not radiate. `trust` says where that fails.
    """
    sweep = np.asarray(frequencies, dtype=np.float64)
    element = element_modes(layout.element_width, layout.element_length, layout.stack, layout.foil)
    both = _sampled(layout, element, np.append(sweep, layout.frequency))
    spot = both.at(-1)
    e_x, e_y = complex(spot.e_x), complex(spot.e_y)
    response = Response(
        engine=ENGINE,
        reference_impedance=layout.ports[0].impedance,
        sweep=both.at(slice(0, -1)),
        spot=spot,
        modes=(
            Mode("along x", element.x.frequency, element.x.losses.total),
            Mode("along y", element.y.frequency, element.y.losses.total),
        ),
        directivity=(abs(e_x) ** 2 + abs(e_y) ** 2)
        / max(float(spot.efficiency), _LEAST_EFFICIENCY),
        cuts=slot_cuts(element, e_x, e_y, layout.frequency),
        front_to_back=None,
        trust=judge_trust(layout, element),
    )
    progress.step(1, 1)
    return response


def sample(layout: Layout, frequencies: Floats) -> Samples:
    """Match and boresight field at some frequencies, without patterns; for sizing too.

    Parameters
    ----------
    layout : Layout
        Its drawing is not read.
    frequencies : (n,) ndarray of float
        Hz, > 0.

    Returns
    -------
    Samples
        Shape (n,).

    Raises
    ------
    OutOfRangeError
        If a strip or a frequency is outside what the line formulas take.

    Notes
    -----
    Accepted power is what enters at the connector; all but the space wave of the element is
    lost: in strips, foil and substrate and to surface waves.
    """
    element = element_modes(layout.element_width, layout.element_length, layout.stack, layout.foil)
    return _sampled(layout, element, frequencies)


def _sampled(layout: Layout, element: ElementModes, frequencies: Floats) -> Samples:
    contacts = tuple(contact_of(landing, element) for landing in layout.feed.landings)
    cavity = build_cavity(contacts, element)
    extensions = tuple(
        (element.x if landing.side == "x" else element.y).extension
        for landing in layout.feed.landings
    )
    branches = build_branches(layout.feed, layout.stack, layout.foil, frequencies, extensions)
    reference = layout.ports[0].impedance
    omega = TWO_PI * frequencies
    voltage, current, currents = _joined(cavity, branches, omega)
    voltages = cavity.mode_voltages(omega, currents)
    radiated = cavity.space_powers(voltages)
    # Corner and tee formulas stretched far beyond their range can give back a trace of power;
    # what is accepted is never less than what is seen to be radiated.
    accepted = np.maximum(0.5 * np.real(voltage * np.conj(current)), np.sum(radiated, axis=0))
    accepted = np.maximum(accepted, _LEAST_POWER)
    z_in = 2.0 * accepted / np.abs(current) ** 2 + 1j * np.imag(voltage / current)
    powers = radiated / accepted
    beams = powers * plate_share(layout.ground_reach, element.substrate, frequencies)
    return Samples(
        frequency=frequencies,
        s11=(z_in - reference) / (z_in + reference),
        z_in=z_in,
        e_x=_field(element.x, element.substrate, frequencies, voltages[X_MODE], beams[X_MODE]),
        e_y=_field(element.y, element.substrate, frequencies, voltages[Y_MODE], beams[Y_MODE]),
        efficiency=np.sum(powers, axis=0),
    )


def _joined(
    cavity: Cavity, branches: Branches, omega: Floats
) -> tuple[Complexes, Complexes, Complexes]:
    """Voltage and current at the connector, and landing currents, for 1 V at the tee.

    An arm from the tee: V = a V_i + b I_i and I = c V_i + d I_i; the element: V_i = Z I_i.
    """
    impedance = cavity.impedance(omega)
    ports = range(len(branches.arms))
    system = np.empty_like(impedance)
    for i in ports:
        arm = branches.arms[i]
        system[:, i, :] = np.asarray(arm.a).reshape(-1, 1) * impedance[:, i, :]
        system[:, i, i] += arm.b
    ones = np.ones((*impedance.shape[:2], 1), dtype=np.complex128)
    currents = np.linalg.solve(system, ones)[..., 0]
    ends = np.einsum("nij,nj->ni", impedance, currents)
    into_tee = np.zeros(omega.size, dtype=np.complex128)
    for i in ports:
        into_tee += branches.arms[i].c * ends[:, i] + branches.arms[i].d * currents[:, i]
    voltage = branches.trunk.a + branches.trunk.b * into_tee
    current = branches.trunk.c + branches.trunk.d * into_tee
    return (
        np.asarray(voltage, dtype=np.complex128),
        np.asarray(current, dtype=np.complex128),
        np.asarray(currents, dtype=np.complex128),
    )


def _field(
    mode: SideMode, substrate: Layer, frequencies: Floats, voltage: Complexes, power: Floats
) -> Complexes:
    """Component at boresight: size by power and directivity, phase of the mode.

    A positive voltage in the corner x = y = 0 drives the field against the axis.
    """
    directivity = broadside_directivity(
        mode.width, mode.length, substrate.thickness, substrate.eps_r, frequencies
    )
    size = np.abs(voltage)
    return np.asarray(-voltage * np.sqrt(directivity * power) / np.where(size > 0.0, size, 1.0))

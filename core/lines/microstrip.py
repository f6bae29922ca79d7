"""One microstrip line: impedance, effective permittivity, loss, and the width for an impedance.

Shapes: n frequencies.
"""

from __future__ import annotations

from dataclasses import dataclass
from math import exp, inf, log, pi

import numpy as np
from numpy.typing import ArrayLike, NDArray

from core.constants import FREE_SPACE_IMPEDANCE, SPEED_OF_LIGHT, TWO_PI, VACUUM_PERMEABILITY
from core.errors import OutOfRangeError
from core.lines.dispersion import dispersed_impedance, dispersed_permittivity
from core.lines.multilayer import equivalent_layer
from core.lines.quasi_static import StaticLine, static_line
from core.lines.stack import Layer, total_thickness

_NARROWEST, _WIDEST = 0.01, 100.0  # width over height, where widths are sought


@dataclass(frozen=True, eq=False)
class LineProperties:
    """What one line does at each frequency; every array has the shape of the frequencies.

    Attributes
    ----------
    characteristic_impedance : (n,) ndarray of float
        Power-current definition, ohm.
    eps_eff : (n,) ndarray of float
        Effective relative permittivity.
    dielectric_attenuation, conductor_attenuation : (n,) ndarray of float
        Np/m.
    propagation_constant : (n,) ndarray of complex
        Attenuation plus j times phase constant, 1/m.
    guided_wavelength : (n,) ndarray of float
        m.
    """

    characteristic_impedance: NDArray[np.float64]
    eps_eff: NDArray[np.float64]
    dielectric_attenuation: NDArray[np.float64]
    conductor_attenuation: NDArray[np.float64]
    propagation_constant: NDArray[np.complex128]
    guided_wavelength: NDArray[np.float64]

    def __post_init__(self) -> None:
        for name in self.__dataclass_fields__:
            getattr(self, name).setflags(write=False)


def line_properties(
    width: float,
    layers: tuple[Layer, ...],
    frequency: ArrayLike,
    *,
    conductor_thickness: float = 0.0,
    conductivity: float = inf,
    roughness: float = 0.0,
) -> LineProperties:
    """Impedance, effective permittivity and loss of a strip over a wide ground plane.

    Parameters
    ----------
    width : float
        Strip width, m, 0.01 to 1000 times the height of the stack.
    layers : tuple of Layer
        Under the strip, from the ground up; air above.
    frequency : (n,) array_like of float
        Hz, > 0.
    conductor_thickness : float
        Of the strip, m, >= 0.
    conductivity : float
        Of strip and ground plane, S/m, > 0; infinite means no conductor loss.
    roughness : float
        Of the copper, root mean square, m, >= 0.

    Returns
    -------
    LineProperties

    Raises
    ------
    OutOfRangeError
        If an argument leaves its range.

    Notes
    -----
    Quasi-static values and thickness correction [1]_ (stated: effective permittivity 0.2 %
    for width 0.01 to 100 heights), several layers through
    `core.lines.multilayer.equivalent_layer`, frequency through `core.lines.dispersion`,
    dielectric loss by filling factor [2]_, conductor loss by current distribution factor
    with roughness [1]_. Conductor loss takes the foil as thicker than three skin depths.
    Measured errors: docs/models/lines.md.

    References
    ----------
    .. [1] E. Hammerstad and O. Jensen, "Accurate models for microstrip computer-aided
       design", IEEE MTT-S Int. Microwave Symp. Digest, pp. 407-409, 1980.
    .. [2] M. V. Schneider, "Microstrip lines for microwave integrated circuits", Bell System
       Technical Journal, vol. 48, pp. 1421-1444, 1969.
    """
    frequencies = np.asarray(frequency, dtype=np.float64)
    _require(0.0 < width < inf, "width", width, "above 0 m")
    _require(0.0 <= conductor_thickness < inf, "conductor_thickness", conductor_thickness, "0 m up")
    _require(conductivity > 0.0, "conductivity", conductivity, "above 0 S/m")
    _require(0.0 <= roughness < inf, "roughness", roughness, "0 m up")
    possible = bool(np.all((frequencies > 0.0) & (frequencies < inf)))
    _require(possible, "frequency", frequency, "above 0 Hz")
    substrate = equivalent_layer(width, layers)
    height = substrate.thickness
    line = static_line(width / height, substrate.eps_r, conductor_thickness / height)
    eps_eff = dispersed_permittivity(line, frequencies * height)
    impedance = dispersed_impedance(line, eps_eff, frequencies * height)
    phase_constant = TWO_PI / SPEED_OF_LIGHT * frequencies * np.sqrt(eps_eff)
    dielectric = _dielectric_attenuation(substrate, line, eps_eff, phase_constant)
    conductor = _conductor_attenuation(width, impedance, frequencies, conductivity, roughness)
    return LineProperties(
        characteristic_impedance=impedance,
        eps_eff=eps_eff,
        dielectric_attenuation=dielectric,
        conductor_attenuation=conductor,
        propagation_constant=dielectric + conductor + 1j * phase_constant,
        guided_wavelength=TWO_PI / phase_constant,
    )


def width_for_impedance(
    impedance: float,
    layers: tuple[Layer, ...],
    frequency: float,
    *,
    conductor_thickness: float = 0.0,
) -> float:
    """Strip width that gives a characteristic impedance at one frequency.

    Parameters
    ----------
    impedance : float
        Wanted, ohm, > 0.
    layers : tuple of Layer
        Under the strip, from the ground up; air above.
    frequency : float
        Hz, > 0.
    conductor_thickness : float
        Of the strip, m, >= 0.

    Returns
    -------
    float
        m; `line_properties` gives the wanted impedance there within 1e-9.

    Raises
    ------
    OutOfRangeError
        If no width between 0.01 and 100 heights has that impedance; the message gives what
        can be reached.
    """
    # Loaded here, because it takes longer than a whole evaluation of a design.
    from scipy.optimize import brentq  # noqa: PLC0415

    height = total_thickness(layers)

    def excess(log_ratio: float) -> float:
        line = line_properties(
            exp(log_ratio) * height, layers, frequency, conductor_thickness=conductor_thickness
        )
        return log(float(line.characteristic_impedance) / impedance)

    _require(0.0 < impedance < inf, "impedance", impedance, "above 0 ohm")
    narrow, wide = log(_NARROWEST) + 1e-12, log(_WIDEST)
    highest, lowest = impedance * exp(excess(narrow)), impedance * exp(excess(wide))
    if not lowest <= impedance <= highest:
        raise OutOfRangeError(
            f"no strip on this stack has {impedance:.4g} ohm: "
            f"{lowest:.3g} to {highest:.3g} ohm can be reached",
            field="impedance",
            value=impedance,
            allowed=f"{lowest:.3g} to {highest:.3g} ohm",
        )
    return height * exp(brentq(excess, narrow, wide, xtol=1e-13, rtol=1e-12))


def _dielectric_attenuation(
    substrate: Layer,
    line: StaticLine,
    eps_eff: NDArray[np.float64],
    phase_constant: NDArray[np.float64],
) -> NDArray[np.float64]:
    """Filling factor times loss tangent, Np/m.

    The filling factor follows the dispersion: (eps_eff - 1) / (eps_r - 1), written without
    the division that air would make 0/0.
    """
    if substrate.loss_tangent == 0.0:
        return np.zeros_like(phase_constant)
    if substrate.eps_r > 1.0 + 1e-6:
        fill = (eps_eff - 1.0) / (substrate.eps_r - 1.0)
    else:
        fill = np.full_like(eps_eff, line.filling_factor)
    lossy: NDArray[np.float64] = (
        0.5 * phase_constant * substrate.loss_tangent * substrate.eps_r * fill / eps_eff
    )
    return lossy


def _conductor_attenuation(
    width: float,
    impedance: NDArray[np.float64],
    frequencies: NDArray[np.float64],
    conductivity: float,
    roughness: float,
) -> NDArray[np.float64]:
    """Hammerstad and Jensen 1980: current crowding and roughness on the sheet resistance, Np/m."""
    if conductivity == inf:
        return np.zeros_like(frequencies)
    sheet = np.sqrt(pi * VACUUM_PERMEABILITY / conductivity * frequencies)
    skin_depth = 1.0 / (conductivity * sheet)
    current = np.exp(-1.2 * (impedance / FREE_SPACE_IMPEDANCE) ** 0.7)
    rough = 1.0 + 2.0 / pi * np.arctan(1.4 * (roughness / skin_depth) ** 2)
    attenuation: NDArray[np.float64] = sheet / (impedance * width) * current * rough
    return attenuation


def _require(fact: bool, field: str, value: object, allowed: str) -> None:
    """Refuse `value` of a line's `field` outside `allowed`."""
    if not fact:
        raise OutOfRangeError(
            f"line {field.replace('_', ' ')} is {value}: it must be {allowed}",
            field=field,
            value=value,
            allowed=allowed,
        )

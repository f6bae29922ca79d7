"""What a board gives to every antenna on it: kernel tables and the mouth of its coax."""

from __future__ import annotations

from math import ceil, floor, log, log2
from typing import TYPE_CHECKING, Final

import numpy as np

from core.constants import SPEED_OF_LIGHT, TWO_PI
from core.fullwave.coax_mouth import mouth_capacitance
from core.fullwave.kernel_table import plan_tables
from core.fullwave.layered_fields import BoardCurrents, power_into_space, power_into_waves
from core.fullwave.spectral import complex_permittivity
from core.fullwave.system import sheet_impedance

if TYPE_CHECKING:
    from core.fullwave.kernel_table import KernelTables, TablePlan
    from core.fullwave.mesh_model import CoaxRing
    from core.layout.model import Foil
    from core.lines.stack import Layer

_THIN: Final = 0.5  # height of the stack, rad, up to which few vertical currents will do
_FEW, _MORE = 3, 5  # vertical currents: the first two also for the charge near both ends
_SIZE_STEP: Final = 1.2  # ratio of the sizes that tables are made for
_KEPT: Final = 6  # tables


class BoardKernels:
    """Kernels of one board, worked out when they are first wanted and kept.

    Antennas solved one after another on the same board share them.

    Parameters
    ----------
    layers : tuple of Layer
        From the ground up.
    foil : Foil
        Of top copper, ground plane and probe.
    highest : float
        Frequency up to which antennas are to be solved, Hz.

    Attributes
    ----------
    layers : tuple of Layer
    foil : Foil
    wavenumber : float
        Of free space at the highest frequency, 1/m.
    profiles : int
        Vertical currents that a probe in this stack needs.
    """

    def __init__(self, layers: tuple[Layer, ...], foil: Foil, highest: float) -> None:
        self.layers, self.foil = layers, foil
        self.wavenumber = TWO_PI * highest / SPEED_OF_LIGHT
        self.profiles = _profiles(layers, self.wavenumber)
        self._plans: dict[tuple[int, float, float], TablePlan] = {}
        self._tables: dict[tuple[int, float, float, float], KernelTables] = {}
        self._mouths: dict[tuple[float, float, float], complex] = {}

    def plan(self, reach: float, near: float, octave: int = 0) -> TablePlan:
        """Plan of tables for antennas up to a size.

        Parameters
        ----------
        reach, near : float
            As `plan_tables` takes them, m; rounded up, so that antennas of nearly the same
            size get the same.
        octave : int
            Below the highest wavenumber.

        Returns
        -------
        TablePlan
        """
        key = octave, _rounded_up(reach), _rounded_up(near)
        if key not in self._plans:
            highest = self.wavenumber / 2.0**octave
            self._plans[key] = plan_tables(self.layers, highest, *key[1:], self.profiles)
        return self._plans[key]

    def tables(self, reach: float, near: float, frequency: float) -> KernelTables:
        """Kernels at one frequency (Hz), by the plan for some sizes."""
        wavenumber = TWO_PI * frequency / SPEED_OF_LIGHT
        octave = max(0, floor(log2(self.wavenumber / wavenumber)))
        plan = self.plan(reach, near, octave)
        key = octave, _rounded_up(reach), _rounded_up(near), frequency
        if key not in self._tables:
            if len(self._tables) == _KEPT:
                del self._tables[next(iter(self._tables))]
            sheet = sheet_impedance(self.foil, frequency)
            self._tables[key] = plan.tables(np.array([wavenumber]), sheet)
        return self._tables[key]

    def mouth_admittance(self, port: CoaxRing, frequency: float) -> complex:
        """Admittance (S) of a coax mouth by itself: what it sends, and its capacitance."""
        key = port.inner, port.outer, frequency
        if key not in self._mouths:
            sheet = sheet_impedance(self.foil, frequency)
            mouth = BoardCurrents.mouth_alone(self.layers, frequency, sheet, port, self.profiles)
            sent = power_into_space(mouth) + power_into_waves(mouth)
            capacitance = mouth_capacitance(self.layers, port.inner, port.outer)
            self._mouths[key] = 2.0 * sent + 1j * TWO_PI * frequency * capacitance
        return self._mouths[key]


def _rounded_up(size: float) -> float:
    """Next of a row of sizes in even ratios."""
    return float(_SIZE_STEP ** ceil(log(size) / log(_SIZE_STEP) - 1e-9))


def _profiles(layers: tuple[Layer, ...], wavenumber: float) -> int:
    """Vertical currents that a probe in this stack needs."""
    turns = sum(
        wavenumber * abs(complex_permittivity(layer)) ** 0.5 * layer.thickness for layer in layers
    )
    return _FEW if turns < _THIN else _MORE

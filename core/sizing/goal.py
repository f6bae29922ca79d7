"""What a design is asked to reach, and how far from it a match and a field are.

Shapes: m residuals, 4 for circular and 2 for linear polarisation.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from core.design.polarisation import Polarisation
from core.response.polarisation import circular_components

if TYPE_CHECKING:
    from numpy.typing import ArrayLike, NDArray

    Floats = NDArray[np.float64]
    Complexes = NDArray[np.complex128]


def cross_field(e_x: ArrayLike, e_y: ArrayLike, polarisation: Polarisation) -> Complexes:
    """Wrong-hand over right-hand field, for the sense asked for; bounded far from the goal.

    Parameters
    ----------
    e_x, e_y : (...,) array_like of complex
        Field along x and y, any common scale.
    polarisation : Polarisation
        RHCP or LHCP.

    Returns
    -------
    (...,) ndarray of complex
        The ratio itself up to 20, where the wanted field is about to vanish.
    """
    right, left = circular_components(e_x, e_y)
    wanted, wrong = (right, left) if polarisation is Polarisation.RHCP else (left, right)
    # |wrong/wanted| runs to infinity at the wrong sense; this runs to a finite value there.
    total = np.sqrt(np.abs(wanted) ** 2 + np.abs(wrong) ** 2) + 1e-30
    size = np.maximum(np.abs(wanted), 0.05 * total)
    return np.asarray(wrong * np.exp(-1j * np.angle(wanted)) / size)


@dataclass(frozen=True)
class Goal:
    """Match and axial ratio to reach at one frequency.

    Attributes
    ----------
    polarisation : Polarisation
    impedance : float
        Of the connector, ohm.
    vswr : float
        > 1.
    axial_ratio_db : float
        > 0; of no concern for a linear antenna.
    """

    polarisation: Polarisation
    impedance: float
    vswr: float
    axial_ratio_db: float

    @property
    def residuals(self) -> int:
        """How many residuals there are."""
        return 2 if self.polarisation is Polarisation.LINEAR else 4

    def missing(self, admittance: complex, e_x: complex, e_y: complex) -> Floats:
        """Reflection and wrong-hand field, in units of what the goal allows.

        Parameters
        ----------
        admittance : complex
            At the port, S.
        e_x, e_y : complex
            Field at boresight, any common scale.

        Returns
        -------
        (m,) ndarray of float
            Real parts, then imaginary ones.
        """
        normalised = admittance * self.impedance
        parts = [(1.0 - normalised) / (1.0 + normalised) / self._most_reflection]
        if self.polarisation is not Polarisation.LINEAR:
            parts.append(complex(cross_field(e_x, e_y, self.polarisation)) / self._most_cross)
        both = np.array(parts)
        return np.concatenate([both.real, both.imag])

    def worst(self, missing: Floats) -> float:
        """Largest of the two, in units of what the goal allows: at most 1 is met.

        Parameters
        ----------
        missing : (m,) ndarray of float

        Returns
        -------
        float
        """
        return float(np.abs(_complex(missing)).max())

    def reached(self, missing: Floats) -> tuple[float, float]:
        """VSWR and axial ratio (dB) that residuals stand for.

        Parameters
        ----------
        missing : (m,) ndarray of float

        Returns
        -------
        tuple of float
            The axial ratio is 0 for linear polarisation, where it is of no concern.
        """
        sizes = np.abs(_complex(missing))
        reflection = min(float(sizes[0]) * self._most_reflection, 1.0 - 1e-9)
        vswr = (1.0 + reflection) / (1.0 - reflection)
        if len(sizes) == 1:
            return vswr, 0.0
        cross = float(sizes[1]) * self._most_cross
        ratio = (1.0 + cross) / max(abs(1.0 - cross), 1e-9)
        return vswr, 20.0 * float(np.log10(ratio))

    @property
    def _most_reflection(self) -> float:
        return (self.vswr - 1.0) / (self.vswr + 1.0)

    @property
    def _most_cross(self) -> float:
        ratio = 10.0 ** (self.axial_ratio_db / 20.0)
        return float((ratio - 1.0) / (ratio + 1.0))


def _complex(missing: Floats) -> Complexes:
    half = len(missing) // 2
    return np.asarray(missing[:half] + 1j * missing[half:])

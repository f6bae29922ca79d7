"""Physical constants, SI (CODATA 2018; c exact since the 1983 definition of the metre)."""

from __future__ import annotations

from math import pi
from typing import Final

SPEED_OF_LIGHT: Final = 299_792_458.0  # m/s, exact
VACUUM_PERMEABILITY: Final = 1.256_637_062_12e-6  # H/m
VACUUM_PERMITTIVITY: Final = 1.0 / (VACUUM_PERMEABILITY * SPEED_OF_LIGHT**2)  # F/m
FREE_SPACE_IMPEDANCE: Final = VACUUM_PERMEABILITY * SPEED_OF_LIGHT  # ohm
TWO_PI: Final = 2.0 * pi

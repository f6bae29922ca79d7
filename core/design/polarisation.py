"""What the antenna is asked to radiate."""

from __future__ import annotations

from enum import Enum


class Polarisation(Enum):
    """Polarisation at boresight; the sense is that of IEEE Std 145."""

    LINEAR = "linear"
    RHCP = "rhcp"
    LHCP = "lhcp"

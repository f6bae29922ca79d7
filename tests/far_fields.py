"""Crossed dipoles as sources whose far field can be written down."""

from math import pi

import numpy as np

from core.fullwave.far_field import direction_frame
from core.fullwave.far_sphere import full_sphere

FREQUENCY = 2.4e9
WAVELENGTH = 299792458.0 / FREQUENCY


def turned(tilt, azimuth):
    """Rotation that takes boresight to a direction."""
    (c, s), (ca, sa) = (np.cos(tilt), np.sin(tilt)), (np.cos(azimuth), np.sin(azimuth))
    about_y = np.array([[c, 0, s], [0, 1, 0], [-s, 0, c]])
    about_z = np.array([[ca, -sa, 0], [sa, ca, 0], [0, 0, 1]])
    return about_z @ about_y


def crossed_dipoles(turn=None, places=((0.0, 0.0, 0.0),), moment=(1.0, -1.0j, 0.0)):
    """Far field of short dipoles along x and, a quarter period later, y: p - (p . r) r.

    Gain 3/4 (1 + cos²) in all, so scaled (C. A. Balanis, *Antenna Theory*, 4th ed., sec. 4.2;
    from memory).
    """
    p = np.asarray(moment) if turn is None else turn @ np.asarray(moment)

    def field(theta, phi):
        towards, along_theta, along_phi = direction_frame(theta, phi)
        phase = np.exp(2j * pi / WAVELENGTH * (towards @ np.transpose(places))).sum(axis=-1)
        scale = np.sqrt(0.75) * phase / len(places)
        return scale * (along_theta @ p), scale * (along_phi @ p)

    return field


def sphere_of(field, reach=0.02):
    return full_sphere(field, FREQUENCY, reach)

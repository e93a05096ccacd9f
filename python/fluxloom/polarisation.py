"""Polarisation vectors of laser beams.

The field is E(t) = Re(E u exp(-i w t)) with a complex unit vector u across the
direction k of the light, u = cos(chi) e1 + i sin(chi) e2 with e2 = k x e1. The
ellipticity angle chi lies between -45 and 45 deg: 0 is linear; at +45 the helicity
is +1, the angular momentum points along the direction, and for the direction z
the light is sigma+ about z, -i (u* x u)_z = +1.

Examples
--------
>>> import fluxloom as fl
>>> u = fl.polarisation.linear(direction=(1, 0, 0), along=(0, 0, 1))
>>> beam = fl.Beam(
...     wavelength_nm=769.0, power_mw=0.4, waist_um=250.0, direction=(1, 0, 0), polarisation=u
... )
>>> beam.polarisation
(0j, 0j, (1+0j))
"""

from collections.abc import Iterable
from typing import SupportsFloat, SupportsIndex

import numpy as np
from numpy.typing import NDArray

from fluxloom import _core

__all__ = ["circular", "elliptical", "linear"]


def linear(
    direction: Iterable[SupportsFloat | SupportsIndex],
    along: Iterable[SupportsFloat | SupportsIndex],
) -> NDArray[np.complex128]:
    """Linear light along a vector, as far as it lies across the direction.

    Parameters
    ----------
    direction : three floats
        Where the light goes; only the direction counts.
    along : three floats
        Where the field points; its part along ``direction`` is left out.

    Returns
    -------
    ndarray
        Three complex numbers, of unit length; read-only.

    Raises
    ------
    InputError
        ``polarisation.parallel`` if ``along`` is parallel to ``direction`` to
        1e-6, ``geometry.no_direction`` for a vector without one.

    Examples
    --------
    >>> import fluxloom as fl
    >>> fl.polarisation.linear((0, 0, 1), (1, 0, 5)).tolist()
    [(1+0j), 0j, 0j]
    """
    return _core.linear_polarisation(direction, along)


def circular(
    direction: Iterable[SupportsFloat | SupportsIndex],
    helicity: SupportsFloat | SupportsIndex,
) -> NDArray[np.complex128]:
    """Circular light.

    The first axis e1 is the laboratory's x across the direction, or y where the
    direction's unit vector has abs(x) above 0.9: for directions z and y it is x,
    for x it is y.

    Parameters
    ----------
    direction : three floats
        Where the light goes; only the direction counts.
    helicity : int
        1 for angular momentum along ``direction``, -1 against it. It is counted
        about the direction: light of helicity 1 going down z is sigma- about z.

    Returns
    -------
    ndarray
        Three complex numbers, of unit length; read-only.

    Raises
    ------
    InputError
        ``polarisation.bad_helicity`` for any other number,
        ``geometry.no_direction`` for a vector without one.

    Examples
    --------
    >>> import fluxloom as fl
    >>> fl.polarisation.circular((0, 0, 1), +1).round(6).tolist()
    [(0.707107+0j), 0.707107j, 0j]
    """
    return _core.circular_polarisation(direction, helicity)


def elliptical(
    direction: Iterable[SupportsFloat | SupportsIndex],
    along: Iterable[SupportsFloat | SupportsIndex],
    ellipticity_deg: SupportsFloat | SupportsIndex,
) -> NDArray[np.complex128]:
    """Elliptical light.

    Parameters
    ----------
    direction : three floats
        Where the light goes; only the direction counts.
    along : three floats
        The long axis of the ellipse; its part along ``direction`` is left out.
    ellipticity_deg : float
        The angle chi whose tangent is the ratio of the axes, -45 to 45 deg; its
        sign is that of the helicity.

    Returns
    -------
    ndarray
        Three complex numbers, of unit length; read-only.

    Raises
    ------
    InputError
        As ``linear``, and for an ellipticity outside its range.

    Examples
    --------
    >>> import fluxloom as fl
    >>> fl.polarisation.elliptical((0, 0, 1), (1, 0, 0), -30.0).round(6).tolist()
    [(0.866025+0j), -0.5j, 0j]
    """
    return _core.elliptical_polarisation(direction, along, ellipticity_deg)

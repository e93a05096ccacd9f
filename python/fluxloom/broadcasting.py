"""Functions of arrays that are broadcast against each other, as numpy does."""

import numpy as np
from numpy.typing import ArrayLike, NDArray

from fluxloom import _core

__all__ = ["flux"]


def flux(
    *,
    spacing_nm: ArrayLike,
    wavelength_nm: ArrayLike,
    angle_deg: ArrayLike = 180.0,
    tilt_deg: ArrayLike = 0.0,
) -> float | NDArray[np.float64]:
    """Flux per plaquette of beams crossing over a lattice, for maps.

    Phi = (2 spacing/wavelength) sin(angle/2) cos(tilt), unfolded, in flux quanta.

    Parameters
    ----------
    spacing_nm : array_like
        Distance between the sites of the lattice.
    wavelength_nm : array_like
        Raman vacuum wavelength.
    angle_deg : array_like
        Full crossing angle of the beams.
    tilt_deg : array_like
        Angle between momentum transfer and lattice.

    Returns
    -------
    float or ndarray
        A float for numbers, else an array of the common shape.

    Raises
    ------
    InputError
        For a number outside its range.
    TypeError
        For what is no real number.

    Examples
    --------
    >>> import fluxloom as fl
    >>> fl.flux(spacing_nm=532.0, wavelength_nm=1064.0)
    1.0
    >>> fl.flux(spacing_nm=532.0, wavelength_nm=[[769.0], [780.0]], angle_deg=[30.0, 60.0]).shape
    (2, 2)
    """
    settings = (spacing_nm, wavelength_nm, angle_deg, tilt_deg)
    if all(isinstance(value, (int, float)) for value in settings):
        return _core.flux_of_arrays(*settings)
    try:
        shape = np.broadcast_shapes(*(np.shape(value) for value in settings))
    except ValueError as problem:
        shapes = ", ".join(str(np.shape(value)) for value in settings)
        raise ValueError(
            "spacing_nm, wavelength_nm, angle_deg and tilt_deg of shapes "
            f"{shapes} do not fit together"
        ) from problem
    return _core.flux_of_arrays(*(np.broadcast_to(value, shape) for value in settings))

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
    settings = {
        "spacing_nm": spacing_nm,
        "wavelength_nm": wavelength_nm,
        "angle_deg": angle_deg,
        "tilt_deg": tilt_deg,
    }
    if all(type(value) in (int, float) for value in settings.values()):
        return _core.flux_of_arrays(*settings.values())
    arrays = {name: _array(name, value) for name, value in settings.items()}
    try:
        shape = np.broadcast_shapes(*(array.shape for array in arrays.values()))
    except ValueError as problem:
        shapes = ", ".join(f"{name} {array.shape}" for name, array in arrays.items())
        raise ValueError(f"these shapes do not fit together: {shapes}") from problem
    return _core.flux_of_arrays(*(np.broadcast_to(array, shape) for array in arrays.values()))


def _array(name: str, value: ArrayLike) -> NDArray[np.generic]:
    """Make an array of what may be one; texts and ragged lists are refused by name."""
    if value is not None and not isinstance(value, (str, bytes)):
        try:
            return np.asarray(value)
        except ValueError:
            pass
    kind = type(value).__name__
    raise TypeError(f"{name} must be a number or an array of numbers, not {kind}")

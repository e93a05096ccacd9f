"""Pictures of what light does to atoms.

Every function draws into the axes it is given, or into a new figure, and
returns the axes. Nothing is shown and no setting of matplotlib is changed.
"""

from typing import TYPE_CHECKING

import numpy as np

from fluxloom import Quality
from fluxloom.plots import BLUE, ORANGE, new_axes

if TYPE_CHECKING:
    from matplotlib.axes import Axes

__all__ = ["plot_quality"]


def plot_quality(quality: Quality, ax: "Axes | None" = None) -> "Axes":
    """Draw coupling over scattering against wavelength, with the best point.

    Ranges about the lines, in which nothing is computed, are shaded.

    Parameters
    ----------
    quality : Quality
    ax : matplotlib axes, optional
        Where to draw; a new figure if there are none.

    Returns
    -------
    matplotlib.axes.Axes

    Raises
    ------
    ImportError
        Without matplotlib.
    """
    axes = new_axes(ax, (7.0, 4.2))
    wavelengths, ratio = quality.wavelengths_nm, quality.ratio
    # A gap of the curve where a line stands between two points.
    cuts = [0.5 * (low + high) for low, high in quality.excluded_nm]
    places = np.searchsorted(wavelengths, cuts)
    x, y = np.insert(wavelengths, places, np.nan), np.insert(ratio, places, np.nan)
    axes.plot(x, y, color=BLUE)
    low, high = float(wavelengths[0]), float(wavelengths[-1])
    for start, end in quality.excluded_nm:
        axes.axvspan(max(start, low), min(end, high), color="0.85", linewidth=0)
        # Most windows are narrower than a pixel.
        if low <= 0.5 * (start + end) <= high:
            axes.axvline(0.5 * (start + end), color="0.6", linewidth=0.8, linestyle=":")
    axes.plot([quality.best_wavelength_nm], [quality.best_ratio], "o", color=ORANGE)
    axes.annotate(
        f"best: {quality.best_wavelength_nm:.3f} nm",
        (quality.best_wavelength_nm, quality.best_ratio),
        textcoords="offset points",
        xytext=(8, -4),
        fontsize="small",
    )
    axes.set_xlabel("vacuum wavelength (nm)")
    axes.set_ylabel("coupling over scattering, Ω/Γ (rad/photon)")
    if np.all(ratio > 0):
        axes.set_yscale("log")
    return axes

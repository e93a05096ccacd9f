"""Pictures of what light does to atoms.

Every function draws into the axes it is given, or into a new figure, and
returns the axes. Nothing is shown and no setting of matplotlib is changed.
"""

import math
from typing import TYPE_CHECKING

import numpy as np

from fluxloom import Quality
from fluxloom.plots import BLUE, ORANGE, new_axes
from fluxloom.wording import scientific

if TYPE_CHECKING:
    from matplotlib.axes import Axes

__all__ = ["plot_quality"]

# Ratios that differ by more are drawn on a logarithmic scale.
_WIDE = 10.0


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
    low, high = float(wavelengths[0]), float(wavelengths[-1])
    # A gap of the curve where a line stands between two points.
    cuts = [0.5 * (start + end) for start, end in quality.excluded_nm]
    places = np.searchsorted(wavelengths, cuts)
    x, y = np.insert(wavelengths, places, np.nan), np.insert(ratio, places, np.nan)
    axes.plot(x, y, color=BLUE, lw=1.6, gid="ratio")
    shown = [window for window in quality.excluded_nm if window[1] > low and window[0] < high]
    for start, end in shown:
        # The edge is what can be seen of a window narrower than a pixel.
        axes.axvspan(
            max(start, low),
            min(end, high),
            color=axes.xaxis.label.get_color(),
            alpha=0.3,
            lw=0.8,
            zorder=0.5,
            gid="excluded",
        )
    if high > low:
        axes.set_xlim(low, high)
    axes.ticklabel_format(axis="x", useOffset=False)
    shaded = "\nshaded: within 100 linewidths of a line" if shown else ""
    axes.set_xlabel(f"vacuum wavelength of the absorbed beam (nm){shaded}")
    axes.set_ylabel("coupling over scattering, Ω/Γ (rad/photon)")
    coupled = ratio[ratio > 0.0]
    if len(coupled) == 0:
        axes.set_title("No coupling in this range", fontsize=10)
        return axes
    if coupled.max() > _WIDE * coupled.min():
        axes.set_yscale("log")
    place = (quality.best_wavelength_nm, quality.best_ratio)
    axes.plot(*place, "o", color=ORANGE, ms=7, zorder=3, clip_on=False, gid="best")
    axes.set_title(_best(place, (low, high)), fontsize=10)
    return axes


def _best(place: tuple[float, float], range_nm: tuple[float, float]) -> str:
    """Say where the ratio is largest, and whether it might be larger outside."""
    (best_nm, ratio), (low, high) = place, range_nm
    # A thousandth of the range is what can be read from the axis.
    decimals = max(0, 3 - math.floor(math.log10(high - low))) if high > low else 6
    at_the_end = min(best_nm - low, high - best_nm) <= 1e-9 * (high - low)
    size = scientific(f"{ratio:.3g}" if 1e-3 <= ratio < 1e3 else f"{ratio:.2e}")
    where = f"{best_nm:.{decimals}f} nm{', an end of the range' if at_the_end else ''}"
    return f"Largest: {size} rad/photon at {where}"

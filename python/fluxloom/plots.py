"""Pictures of bands, Wannier functions and flux checks.

Every function draws into the axes it is given, or into a new figure, and
returns the axes. Nothing is shown and no setting of matplotlib is changed.
Colours are those of Okabe and Ito, distinct for every kind of sight; what a
colour says a shape or a word says as well.
"""

from itertools import pairwise
from typing import TYPE_CHECKING, Literal, TypeAlias

import numpy as np

from fluxloom import Atom, Bands, FluxCheck, Wannier
from fluxloom.displays import MEETS, MISSES
from fluxloom.flux_plane import Branch, FluxPlane
from fluxloom.wording import PLUS_MINUS, rad, scientific, signed_sum, spread, target, two_digits

if TYPE_CHECKING:
    from matplotlib.axes import Axes

__all__ = ["bands", "flux_check", "wannier"]

BLUE, SKY, ORANGE, PURPLE = "#0072b2", "#56b4e9", "#e69f00", "#cc79a7"
_BAND_COLOURS = (BLUE, MISSES, MEETS, PURPLE)
_SMALL = 8.0
_Place: TypeAlias = Literal["best", "upper right", "lower right", "lower left", "upper left"]


def new_axes(ax: "Axes | None", size_inches: tuple[float, float]) -> "Axes":
    """Return the axes given, or those of a new figure of a size in inches."""
    if ax is not None:
        return ax
    try:
        from matplotlib import pyplot
    except ImportError as problem:
        raise ImportError('pictures need matplotlib: pip install "fluxloom[plots]"') from problem
    _, new = pyplot.subplots(figsize=size_inches, layout="constrained")
    return new


def bands(bands: Bands, ax: "Axes | None" = None, *, atom: Atom | None = None) -> "Axes":
    """Draw the bands, their gaps, and how good nearest-neighbour hopping is.

    An inset compares the lowest band with mean - 2t cos(pi q).

    Parameters
    ----------
    bands : Bands
    ax : matplotlib axes, optional
        Where to draw; a new figure if there are none.
    atom : Atom, optional
        Gives the tunnelling in hertz as well.

    Returns
    -------
    matplotlib.axes.Axes

    Raises
    ------
    ImportError
        If matplotlib is not installed.
    """
    ax = new_axes(ax, (6.4, 5.6))
    lattice = bands.lattice
    momenta, energies = np.asarray(bands.quasimomenta), np.asarray(bands.energies_er)
    for band, values in enumerate(energies):
        colour = _BAND_COLOURS[band % len(_BAND_COLOURS)]
        ax.plot(momenta, values, color=colour, lw=1.8, gid="band")
    depth = scientific(f"{lattice.depth_er:.4g}")
    ax.axhline(
        lattice.depth_er, color=ax.xaxis.label.get_color(), lw=1.0, ls=(0, (1, 2)), gid="depth"
    )
    ax.annotate(
        f"depth\n{depth} $E_R$",
        (1.0, lattice.depth_er),
        xycoords=("axes fraction", "data"),
        xytext=(4, 0),
        textcoords="offset points",
        va="center",
        fontsize=_SMALL,
    )
    # The room above the bands is for the inset and the words beside it.
    high = max(float(energies.max()), lattice.depth_er)
    ax.set(xlim=(-1.0, 1.0), ylim=(-0.02 * high, 1.7 * high))
    ax.set_yticks([tick for tick in ax.get_yticks() if 0.0 <= tick <= 1.05 * high])
    for band, (lower, upper) in enumerate(pairwise(energies)):
        _gap(bands, ax, band, (float(lower.max()), float(upper.min())))
    ax.set_xlabel("quasimomentum ($k_L = \\pi/a$)")
    ax.set_ylabel("energy ($E_R$)")
    ax.set_title(
        f"lattice {lattice.wavelength_nm:.7g} nm, spacing {lattice.spacing_nm:.6g} nm, "
        f"depth {depth} $E_R$",
        fontsize=10,
    )
    _lowest_band(bands, ax, atom)
    return ax


def _gap(bands: Bands, ax: "Axes", lower: int, edges_er: tuple[float, float]) -> None:
    """Fill the gap above band ``lower``, and write its size where there is room."""
    bottom, top = edges_er
    if top <= bottom:
        return
    ax.axhspan(bottom, top, color=SKY, alpha=0.15, lw=0, gid="gap")
    depth_er = bands.lattice.depth_er
    if bottom < depth_er < top:
        bottom, top = max(((bottom, depth_er), (depth_er, top)), key=lambda part: part[1] - part[0])
    if top - bottom > 0.04 * ax.get_ylim()[1]:
        words = f"gap {bands.gap_er(lower):#.3g} $E_R$"
        middle = 0.5 * (bottom + top)
        ax.text(0.0, middle, words, ha="center", va="center_baseline", fontsize=_SMALL)


def _lowest_band(bands: Bands, ax: "Axes", atom: Atom | None) -> None:
    """Write the tunnelling, and draw the lowest band in its units beside hopping alone."""
    mean, near, far = (bands.lattice.tunnelling_er(reach=reach) for reach in (0, 1, 2))
    words = f"$t$ = {scientific(f'{near:.3g}')} $E_R$\n"
    if atom is not None:
        words += f"   = {bands.lattice.tunnelling_hz(atom):.4g} Hz ({atom.name})\n"
    words += f"$t_2/t$ = {scientific(f'{far / near:.2g}')}\n\n"
    # At the error of the energies the shape of the band is noise.
    if near < 100.0 * bands.error_er:
        words += "flat to the accuracy\nof its energies"
    else:
        momenta = np.asarray(bands.quasimomenta)
        # The hop over no site is minus the mean.
        exact = (np.asarray(bands.energies_er)[0] + mean) / near
        hopping = -2.0 * np.cos(np.pi * momenta)
        inset = ax.inset_axes((0.56, 0.70, 0.41, 0.235))
        inset.plot(momenta, exact, color=BLUE, lw=1.8)
        inset.plot(momenta, hopping, color=ORANGE, lw=1.4, ls="--", gid="hopping")
        inset.set_xlim(-1.0, 1.0)
        inset.set_xticks([-1.0, -0.5, 0.0, 0.5, 1.0])
        inset.set_title("(lowest band \N{MINUS SIGN} mean)/$t$", fontsize=_SMALL, pad=3)
        inset.tick_params(labelsize=7)
        difference = two_digits(float(np.abs(exact - hopping).max()))
        words += (
            "solid: exact\ndashed: \N{MINUS SIGN}2 cos($\\pi q$)\n"
            f"largest difference {difference} $t$"
        )
    ax.text(0.03, 0.965, words, transform=ax.transAxes, va="top", fontsize=9, linespacing=1.35)


def wannier(wannier: Wannier, ax: "Axes | None" = None) -> "Axes":
    """Draw a Wannier function.

    Parameters
    ----------
    wannier : Wannier
    ax : matplotlib axes, optional
        Where to draw; a new figure if there are none.

    Returns
    -------
    matplotlib.axes.Axes

    Raises
    ------
    ImportError
        If matplotlib is not installed.
    """
    ax = new_axes(ax, (6.4, 3.6))
    ax.axhline(0.0, color=ax.xaxis.label.get_color(), lw=0.6)
    ax.fill_between(wannier.x_nm, wannier.amplitude, color=SKY, alpha=0.25, lw=0)
    ax.plot(wannier.x_nm, wannier.amplitude, color=BLUE, lw=1.6)
    ax.set_xlim(float(wannier.x_nm[0]), float(wannier.x_nm[-1]))
    ax.set_xlabel("distance from the centre of the site (nm)")
    ax.set_ylabel("amplitude (nm$^{-1/2}$)")
    ax.set_title(f"Wannier function of band {wannier.band}", fontsize=10)
    return ax


def flux_check(
    check: FluxCheck,
    ax: "Axes | None" = None,
    *,
    range_nm: tuple[float, float] | None = None,
) -> "Axes":
    """Draw the flux against the wavelength, with what the target accepts.

    Horizontal lines are the fluxes branch + sense x target, with the band in
    which the phase budget is kept; markers are today's wavelength and the
    nearest one that hits, with its half-width. An inset enlarges the place.

    Parameters
    ----------
    check : FluxCheck
    ax : matplotlib axes, optional
        Where to draw; a new figure if there are none.
    range_nm : (float, float), optional
        Wavelengths to show; by default today's, the one that hits and the next
        branch. For beams given by directions those of the absorbed beam; a
        second beam with a wavelength of its own is held.

    Returns
    -------
    matplotlib.axes.Axes

    Raises
    ------
    InputError
        ``range.empty``, ``range.too_wide`` or ``light.wavelength_out_of_range``.
    ImportError
        If matplotlib is not installed.
    """
    plane = FluxPlane(check)
    low, high = plane.default_range_nm() if range_nm is None else plane.checked_range_nm(range_nm)
    ax = new_axes(ax, (6.8, 5.0))
    fluxes = plane.flux([low, high])
    shown = [float(fluxes.min()), float(fluxes.max())]
    if not plane.branches(*shown):
        # A picture without any accepted flux would not say how far away it is.
        shown.append(check.flux - check.error)
    margin = (0.08 * (max(shown) - min(shown)) or 0.05) + plane.half_height
    bottom, top = min(shown) - margin, max(shown) + margin
    ax.set(xlim=(low, high), ylim=(bottom, top))
    drawn = _draw(plane, ax, (low, high), (bottom, top))
    _label_branches(plane, ax, drawn)
    # Words shrink with narrow axes, down to where they can still be read.
    scale = min(max(_width_inches(ax) / 4.5, 0.6), 1.0)
    ax.set_xlabel(_wavelength_label(check))
    ax.set_ylabel("unfolded flux (flux quanta)")
    ax.set_title(_title(check), fontsize=10 * scale)
    _enlarge(plane, ax, (low, high), (bottom, top))
    if check.flux == 0.0:
        words = "no momentum along the lattice: flux 0 at every wavelength"
        across = ax.get_yaxis_transform()
        ax.text(0.03, 0.3 * margin, words, transform=across, fontsize=9, va="bottom")
    place: _Place = "best" if check.flux == 0.0 else _free_place(check.flux > 0.0, high / low)
    box = (0.0, 0.0, 1.0 if check.flux == 0.0 else 0.45, 1.0)
    ax.legend(loc=place, bbox_to_anchor=box, fontsize=_SMALL * scale, framealpha=1.0).set_zorder(6)
    return ax


def _width_inches(ax: "Axes") -> float:
    return float(ax.bbox.width / ax.figure.dpi)


def _free_place(falling: bool, ratio: float) -> _Place:
    """Where, left of the inset, a flux that goes as 1/wavelength leaves room."""
    # Over a wide range the curve bends into the corner below itself.
    if ratio > 2.5:
        return "upper right" if falling else "lower right"
    return "lower left" if falling else "upper left"


def _draw(
    plane: FluxPlane, ax: "Axes", range_nm: tuple[float, float], fluxes: tuple[float, float]
) -> list[Branch]:
    """Draw lines, bands, curve and markers; give the branches that have a line."""
    check = plane.check
    drawn, half = plane.branches(*fluxes), plane.half_height
    budget = f"within budget: {PLUS_MINUS} {two_digits(half)}"
    for line in plane.branches(fluxes[0] - half, fluxes[1] + half):
        low, high = line.flux - half, line.flux + half
        ax.fill_between(
            range_nm, low, high, color=ORANGE, alpha=0.35, lw=0, gid="tolerance", label=budget
        )
        budget = "_once"
    accepted = f"accepted: branch {PLUS_MINUS} {target(abs(check.target))}"
    for line in drawn:
        ax.axhline(line.flux, color=ORANGE, lw=1.0, gid="branch", label=accepted)
        accepted = "_once"
    wavelengths = np.linspace(*range_nm, 400)
    ax.plot(
        wavelengths, plane.flux(wavelengths), color=BLUE, lw=1.6, zorder=2.2, label="this geometry"
    )
    if check.exact_wavelength_nm is not None and check.wavelength_tolerance_nm is not None:
        exact, tolerance = check.exact_wavelength_nm, check.wavelength_tolerance_nm
        bars = ax.errorbar(
            [exact], plane.flux([exact]), xerr=tolerance, color=PURPLE, capsize=4, zorder=3
        )
        bars.lines[0].set(marker="D", ms=9, mfc="none", mew=1.6, ls="none", gid="exact")
        bars.set_label(f"hits: {spread(exact, tolerance, 'nm')}")
    shape, colour, word = ("o", MEETS, "meets") if check.meets_target else ("X", MISSES, "misses")
    today = f"today: {plane.today_nm:.10g} nm, {word}"
    if not range_nm[0] <= plane.today_nm <= range_nm[1]:
        today += " (not shown)"
    ax.plot(
        plane.today_nm, check.flux, shape, color=colour, ms=9, zorder=3, label=today, gid="today"
    )
    return drawn


def _label_branches(plane: FluxPlane, ax: "Axes", drawn: list[Branch]) -> None:
    """Name the branches at the right edge, the one of the check first, none over another."""
    bottom, top = ax.get_ylim()
    wanted = plane.check.flux - plane.check.error
    named: list[Branch] = []
    for line in sorted(drawn, key=lambda line: abs(line.flux - wanted)):
        if all(abs(line.flux - other.flux) > 0.045 * (top - bottom) for other in named):
            named.append(line)
    right = ax.secondary_yaxis("right")
    right.set_yticks(
        [line.flux for line in named],
        [signed_sum(line.branch, line.sense, plane.check.target) for line in named],
    )
    right.tick_params(length=3, labelsize=9)


def _wavelength_label(check: FluxCheck) -> str:
    if check.raman.wavelength_nm is not None:
        return "Raman wavelength (nm)"
    if check.raman.emit is None:
        return "wavelength of the link (nm)"
    return "wavelength of the absorbed beam (nm), the other in proportion"


def _title(check: FluxCheck) -> str:
    text = (
        f"{'Meets' if check.meets_target else 'Misses'} {target(check.target)}: "
        f"{rad(check.phase_error_rad)} over {check.sites} sites, "
        f"budget {rad(check.phase_budget_rad)}"
    )
    if check.loop_flux is not None:
        effect = "acts on" if check.loop_phase_is_physical else "averages out over"
        text += f"\ntube of {check.legs} legs: its loop phase {effect} the cloud"
    return text


def _enlarge(
    plane: FluxPlane, ax: "Axes", range_nm: tuple[float, float], fluxes: tuple[float, float]
) -> None:
    """Enlarge the place in the corner that a flux going as 1/wavelength leaves free."""
    from matplotlib.patches import Rectangle

    zoom = plane.zoom_range_nm()
    band_is_visible = 2.0 * plane.half_height > 0.08 * (fluxes[1] - fluxes[0])
    if zoom is None or band_is_visible or _width_inches(ax) < 3.2:
        return
    if zoom[0] < range_nm[0] or zoom[1] > range_nm[1]:
        return
    falling = plane.check.flux > 0.0
    left, lower = 0.58, 0.58 if falling else 0.08
    # A sheet over the horizontal lines, but under the curve, keeps them out of the tick labels.
    sheet = Rectangle((left - 0.09, lower - 0.06), 0.49, 0.46, lw=0, transform=ax.transAxes)
    sheet.set(facecolor=ax.get_facecolor(), zorder=2.1)
    ax.add_artist(sheet)
    inset = ax.inset_axes((left, lower, 0.39, 0.38), zorder=5)
    ends = plane.flux(zoom)
    margin = 0.1 * float(np.ptp(ends)) + plane.half_height
    shown = (float(ends.min()) - margin, float(ends.max()) + margin)
    inset.set(xlim=zoom, ylim=shown)
    _draw(plane, inset, zoom, shown)
    inset.tick_params(labelsize=7)
    inset.locator_params(nbins=3)
    inset.ticklabel_format(style="plain", useOffset=False)
    ax.indicate_inset_zoom(inset, edgecolor=ax.xaxis.label.get_color(), alpha=0.6)

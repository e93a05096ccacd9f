"""Where a check lies in the plane of wavelength and flux.

For one geometry every wave vector goes as 1/wavelength, and so does the flux;
a second beam with a wavelength of its own is held, and adds a constant.
A target accepts the fluxes branch + sense x target, each with the band in which
the phase error stays within the budget.
"""

import math
from typing import NamedTuple

import numpy as np
from numpy.typing import ArrayLike, NDArray

from fluxloom import FluxCheck, InputError, _core, flux

__all__ = ["Branch", "FluxPlane"]

_LEAST_NM, _LARGEST_NM = next(
    (low, high) for field, _, low, high, *_ in _core.limits() if field == "wavelength_nm"
)
# More lines than this are a grey surface.
_MOST_BRANCHES = 200


class Branch(NamedTuple):
    """One flux that the target accepts."""

    flux: float
    branch: int
    sense: int


class FluxPlane:
    """A check in the plane of wavelength and flux."""

    def __init__(self, check: FluxCheck) -> None:
        self.check = check
        # Pairs by directions are judged by the absorbed beam.
        raman = check.raman
        self.today_nm = raman.wavelength_nm or raman.absorb_wavelength_nm or math.nan
        self.held = 0.0
        if raman.emit_wavelength_nm is not None:
            other_nm = self.today_nm * (2.0 if 2.0 * self.today_nm <= _LARGEST_NM else 0.5)
            other = raman.replace(absorb_wavelength_nm=other_nm).flux(check.lattice)
            self.held = (other * other_nm - check.flux * self.today_nm) / (other_nm - self.today_nm)
        self.tuned = check.flux - self.held
        # No flux is further than 1/2 from an accepted one: then everything is accepted.
        half = check.phase_budget_rad / (2.0 * math.pi * (check.sites - 1))
        self.half_height = min(half, 0.5)

    def flux(self, wavelength_nm: ArrayLike) -> NDArray[np.float64]:
        """Give the flux of the same geometry at other wavelengths."""
        return self.held + self.tuned * self.today_nm / np.asarray(wavelength_nm, dtype=np.float64)

    def wavelength_nm(self, flux: float) -> float | None:
        """Give the wavelength with a flux, if it is an allowed one."""
        if self.tuned == 0.0 or flux == self.held:
            return None
        found = self.today_nm * self.tuned / (flux - self.held)
        return found if _LEAST_NM <= found <= _LARGEST_NM else None

    def branches(self, low: float, high: float) -> list[Branch]:
        """Every branch + sense x target in [low, high], once, lowest first."""
        target = float(self.check.target)
        found: dict[float, Branch] = {}
        for sense in (1, -1):
            first, last = math.ceil(low - sense * target), math.floor(high - sense * target)
            for branch in range(first, last + 1):
                line = Branch(branch + sense * target, branch, sense)
                found.setdefault(round(line.flux, 9), line)
        return sorted(found.values(), key=lambda line: line.flux)

    def default_range_nm(self) -> tuple[float, float]:
        """Today, the wavelength that hits, and one neighbouring branch."""
        wanted = [self.today_nm, self.check.exact_wavelength_nm or self.today_nm]
        ends = self.flux(wanted)
        low, high = float(ends.min()) - 1e-9, float(ends.max()) + 1e-9
        outside = [
            wavelength
            for line in self.branches(low - 1.0, high + 1.0)
            if not low <= line.flux <= high
            and (wavelength := self.wavelength_nm(line.flux)) is not None
        ]
        if outside:
            wanted.append(min(outside, key=lambda nm: abs(math.log(nm / self.today_nm))))
        low, high = min(wanted), max(wanted)
        margin = 0.12 * (high - low) if outside else 0.1 * high
        return max(low - margin, _LEAST_NM), min(high + margin, _LARGEST_NM)

    def zoom_range_nm(self) -> tuple[float, float] | None:
        """Around the wavelength that hits, and today if it is not far from it."""
        exact, tolerance = self.check.exact_wavelength_nm, self.check.wavelength_tolerance_nm
        if exact is None or tolerance is None:
            return None
        wanted = [exact - 2.0 * tolerance, exact + 2.0 * tolerance]
        if abs(self.today_nm - exact) < 12.0 * tolerance:
            wanted.append(self.today_nm)
        margin = 0.1 * (max(wanted) - min(wanted))
        return min(wanted) - margin, max(wanted) + margin

    def checked_range_nm(self, range_nm: tuple[float, float]) -> tuple[float, float]:
        """Give a range as two floats, or say why it cannot be drawn."""
        low, high = range_nm
        # Refuses what is no wavelength, with the words that every wavelength gets.
        flux(spacing_nm=self.check.lattice.spacing_nm, wavelength_nm=[low, high])
        low, high = float(low), float(high)
        details: dict[str, float | str] = {"field": "range_nm", "low": low, "high": high}
        asked = f"range_nm = ({low:g}, {high:g})"
        if low >= high:
            remedy = "is empty: the first number must be smaller than the second; swap them"
            raise InputError(f"{asked} {remedy}", "range.empty", details)
        lines = 2.0 * float(np.ptp(self.flux([low, high])))
        if lines > _MOST_BRANCHES:
            remedy = (
                f"holds {lines:.0f} accepted fluxes, at most {_MOST_BRANCHES} can be told apart"
            )
            raise InputError(f"{asked} {remedy}; narrow it", "range.too_wide", details)
        return low, high

"""Tables of levels and of curves over wavelengths, for pandas and notebooks."""

from typing import TYPE_CHECKING

from fluxloom import GroundLevels, Quality
from fluxloom.displays import html_table

if TYPE_CHECKING:
    import pandas

__all__ = ["levels_html", "levels_to_pandas", "quality_to_pandas"]


def _frame(columns: dict[str, object]) -> "pandas.DataFrame":
    try:
        import pandas
    except ImportError as problem:
        raise ImportError('tables need pandas: pip install "fluxloom[tables]"') from problem
    return pandas.DataFrame(columns)


def levels_to_pandas(levels: GroundLevels) -> "pandas.DataFrame":
    """One row per state: F, m, energy, its slope and curvature.

    Parameters
    ----------
    levels : GroundLevels

    Returns
    -------
    pandas.DataFrame

    Raises
    ------
    ImportError
        Without pandas.
    """
    states = levels.states
    return _frame(
        {
            "f": levels.f,
            "m": levels.m,
            "energy_hz": levels.energies_hz,
            "moment_hz_per_gauss": [levels.moment_hz_per_gauss(*state) for state in states],
            "curvature_hz_per_gauss2": [levels.curvature_hz_per_gauss2(*state) for state in states],
        }
    )


def levels_html(levels: GroundLevels) -> str:
    """Lay out the levels, one row per state.

    Parameters
    ----------
    levels : GroundLevels

    Returns
    -------
    str
        HTML.
    """
    rows = [
        [
            str(state),
            f"{levels.energy_hz(*state) * 1e-6:,.6f}",
            f"{levels.moment_hz_per_gauss(*state) * 1e-3:,.3f}",
            f"{levels.curvature_hz_per_gauss2(*state):,.3f}",
        ]
        for state in levels.states
    ]
    heads = ["F,m", "energy/h (MHz)", "slope (kHz/G)", "curvature (Hz/G²)"]
    title = f"{levels.atom.name} at {levels.field_gauss:g} G"
    return html_table(title, heads, rows, figures=(1, 2, 3))


def quality_to_pandas(quality: Quality) -> "pandas.DataFrame":
    """One row per wavelength: coupling, scattering and their ratio.

    Parameters
    ----------
    quality : Quality

    Returns
    -------
    pandas.DataFrame

    Raises
    ------
    ImportError
        Without pandas.
    """
    return _frame(
        {
            "wavelength_nm": quality.wavelengths_nm,
            "rabi_hz": quality.rabi_hz,
            "scattering_per_s": quality.scattering_per_s,
            "ratio": quality.ratio,
        }
    )

"""Tables of levels and of curves over wavelengths, for pandas and notebooks."""

from typing import TYPE_CHECKING

from fluxloom import Coupling, GroundLevels, Quality, Scattering, State
from fluxloom.displays import html_table

if TYPE_CHECKING:
    import pandas

__all__ = [
    "coupling_html",
    "levels_html",
    "levels_to_pandas",
    "quality_to_pandas",
    "scattering_html",
]


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


def coupling_html(coupling: Coupling) -> str:
    """Lay out a coupling: its sizes, its parts by rank, the rule, the alternatives.

    Parameters
    ----------
    coupling : Coupling

    Returns
    -------
    str
        HTML.
    """
    rows = [["Rabi frequency, free atoms", f"{abs(coupling.rabi_hz):,.3f} Hz"]]
    if coupling.kick is not None:
        size = f"{abs(coupling.effective_rabi_hz):,.3f} Hz, kick {coupling.kick:.6f} k_L"
        rows.append(["in the lattice", size])
    names = ("scalar part", "vector part", "tensor part")
    rows += [[n, f"{abs(p):,.6f} Hz"] for n, p in zip(names, coupling.ranks, strict=True)]
    rows.append(["rule", coupling.rule])
    rows += [["instead", text] for text in coupling.alternatives]
    a, b = State(*coupling.a), State(*coupling.b)
    return html_table(f"{coupling.atom.name}: {a} to {b}", [], rows)


def scattering_html(scattering: Scattering) -> str:
    """Lay out scattering rates: the sums, then every final state that is reached.

    Parameters
    ----------
    scattering : Scattering

    Returns
    -------
    str
        HTML.
    """
    rows = [
        ["all photons", f"{scattering.total:.4e}"],
        ["keep the state", f"{scattering.rayleigh:.4e}"],
        ["change the state", f"{scattering.raman:.4e}"],
    ]
    rows += [[f"to {State(*s)}", f"{rate:.4e}"] for s, rate in scattering.to.items() if rate > 0]
    title = f"{scattering.atom.name} in {State(*scattering.state)}"
    return html_table(title, ["", "photons/s"], rows, figures=(1,))


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

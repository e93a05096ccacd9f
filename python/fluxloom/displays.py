"""Tables for notebooks and for pandas and xarray.

The HTML has no scripts, no style sheet and no colours for text, so that it
reads the same on light and dark pages and in viewers that strip styles. What a
colour says a word or a sign says as well. Every text is escaped.
"""

import math
from collections.abc import Iterable, Sequence
from html import escape
from typing import TYPE_CHECKING

import numpy as np

from fluxloom import Bands, DataSource, FluxCheck, SourceTable, __version__, band_energies_er
from fluxloom.wording import (
    MINUS,
    PLUS_MINUS,
    rad,
    scientific,
    signed_sum,
    spread,
    to_tolerance,
    with_minus,
)

if TYPE_CHECKING:
    import pandas
    import xarray

__all__ = [
    "bands_html",
    "bands_to_xarray",
    "check_html",
    "html_table",
    "sources_html",
    "sources_to_pandas",
]

# Okabe and Ito's bluish green and vermillion: distinct for every kind of sight.
MEETS, MISSES = "#009e73", "#d55e00"

_SOURCE_COLUMNS = ("name", "value", "uncertainty", "unit", "status", "source")
_STATUS_SIGNS = {
    "verified": "\N{CHECK MARK}",
    "consistency-checked": "\N{ALMOST EQUAL TO}",
    "from memory, unverified": "?",
    "supplied by the user": "\N{BLACK STAR}",
}
_CELL = "text-align:left;vertical-align:top;padding:0.15em 0.8em 0.15em 0"
_FIGURE = "text-align:right;vertical-align:top;padding:0.15em 0.8em 0.15em 0;white-space:nowrap"


def check_html(check: FluxCheck) -> str:
    """Lay out a check as a small table: the verdict, then the numbers behind it.

    Parameters
    ----------
    check : FluxCheck

    Returns
    -------
    str
        HTML.
    """
    tolerance = check.phase_budget_rad / (2.0 * math.pi * (check.sites - 1))
    error = scientific(f"{abs(check.error):.4g}")
    rows = [
        (
            "flux",
            f"{to_tolerance(check.flux, tolerance)} "
            f"(folded {to_tolerance(check.folded, tolerance)}), in flux quanta",
        ),
        (
            "target",
            f"flux = {signed_sum(check.branch, check.sense, check.target)} "
            f"{MINUS if check.error < 0.0 else '+'} {error}",
        ),
        (
            "phase error",
            f"{rad(check.phase_error_rad)} over {check.sites} sites, "
            f"budget {rad(check.phase_budget_rad)}",
        ),
        (
            "exact wavelength",
            _setting(check.exact_wavelength_nm, check.wavelength_tolerance_nm, "nm"),
        ),
        ("exact angle", _setting(check.exact_angle_deg, check.angle_tolerance_deg, "deg")),
        (
            "nearest fractions",
            ", ".join(
                f"{with_minus(str(near.fraction))} ({rad(near.phase_error_rad)})"
                for near in check.nearest
            ),
        ),
        ("kick overlap", with_minus(f"{check.kick_overlap:.4f}")),
        (
            "diagonal ratio",
            "none" if check.diagonal_ratio is None else f"{check.diagonal_ratio:.4f}",
        ),
    ]
    if (
        check.loop_flux is not None
        and check.closure_mismatch is not None
        and check.closure_overlap is not None
    ):
        legs = check.legs or 0
        effect = "acts on" if check.loop_phase_is_physical else "averages out over"
        rows += [
            ("loop flux", f"{to_tolerance(check.loop_flux, tolerance)} round {legs} legs"),
            ("closure mismatch", to_tolerance(check.closure_mismatch, tolerance)),
            (
                "closure overlap",
                f"{check.closure_overlap:.4f}: the loop phase {effect} the cloud",
            ),
        ]
    sign, colour = ("\N{CHECK MARK}", MEETS) if check.meets_target else ("\N{BALLOT X}", MISSES)
    verdict = (
        f'<div style="border-left:4px solid {colour};padding-left:0.6em;margin:0.3em 0">'
        f"<strong>{sign} {escape(check.verdict)}</strong></div>"
    )
    return _frame(verdict + _table([], [[_name(name), escape(text)] for name, text in rows]))


def _setting(value: float | None, tolerance: float | None, unit: str) -> str:
    if value is None or tolerance is None:
        return "none of this geometry"
    return spread(value, tolerance, unit)


def bands_html(bands: Bands) -> str:
    """Lay out the lowest bands as a small table: edges, width, gap to the next.

    Parameters
    ----------
    bands : Bands

    Returns
    -------
    str
        HTML.
    """
    count = len(bands.energies_er)
    # The edges lie at the centre and the end of the zone, which need not be among the points.
    ends = band_energies_er([bands.lattice.depth_er], [0.0, 1.0], count=count)[0]
    rows = [
        [
            str(band),
            f"{min(ends[:, band]):.6f}",
            f"{max(ends[:, band]):.6f}",
            scientific(f"{bands.width_er(band):.5g}"),
            scientific(f"{bands.gap_er(band):.5g}"),
        ]
        for band in range(count)
    ]
    heads = ["band", "lower edge", "upper edge", "width", "gap to the next"]
    title = (
        f"{count} lowest bands, depth {bands.lattice.depth_er:g} E<sub>R</sub>, "
        f"spacing {bands.lattice.spacing_nm:.6g} nm; all energies in E<sub>R</sub>, "
        f"proven to {escape(scientific(f'{bands.error_er:.0e}'))} E<sub>R</sub>"
    )
    table = _table(heads, [[escape(cell) for cell in row] for row in rows], figures=range(5))
    return _frame(f"<div>{title}</div>" + table)


def sources_html(table: SourceTable) -> str:
    """Lay out the numbers of an atom, each with its uncertainty, status and source.

    Parameters
    ----------
    table : SourceTable

    Returns
    -------
    str
        HTML.
    """
    rows = [
        [
            _name(row.name),
            escape(_measured(row.value, row.uncertainty)),
            escape("" if row.unit == "1" else row.unit),
            f'<span style="white-space:nowrap">{escape(_status(row))}</span>',
            escape(row.source),
        ]
        for row in _rows(table)
    ]
    heads = ["name", "value", "unit", "status", "source"]
    return _frame(_table(heads, rows, figures=(1,)))


def html_table(
    title: str, heads: Sequence[str], rows: Iterable[Sequence[str]], figures: Iterable[int] = ()
) -> str:
    """Lay out a table of plain texts under a title.

    Parameters
    ----------
    title : str
    heads : sequence of str
        Heads of the columns.
    rows : iterable of sequences of str
    figures : iterable of int
        Columns of numbers, set to the right.

    Returns
    -------
    str
        HTML; every text is escaped.
    """
    cells = [[escape(text) for text in row] for row in rows]
    return _frame(f"<div>{escape(title)}</div>" + _table(heads, cells, figures))


def _rows(table: SourceTable) -> list[DataSource]:
    return [table[place] for place in range(len(table))]


def _status(row: DataSource) -> str:
    return f"{_STATUS_SIGNS.get(row.status, '')} {row.status}".strip()


def _measured(value: float, uncertainty: float | None) -> str:
    """Write a number with its uncertainty, both to the uncertainty's second digit."""
    power = math.floor(math.log10(abs(value))) if value != 0.0 else 0
    if not uncertainty:
        exact = " (exact)" if uncertainty == 0.0 else ""
        if -3 <= power <= 15:
            # As many digits as were given, and never an exponent.
            return with_minus(np.format_float_positional(value, precision=12, trim="-")) + exact
        return scientific(f"{value:.9e}") + exact
    if not -3 <= power <= 15:
        inner = _measured(value / 10.0**power, uncertainty / 10.0**power)
        return f"({inner}) {scientific(f'1e{power}').removeprefix('1 ')}"
    uncertainty = float(f"{uncertainty:.1e}")
    decimals = 1 - math.floor(math.log10(uncertainty))
    value_text = f"{round(value, decimals):.{max(decimals, 0)}f}"
    spread_text = f"{uncertainty:.{max(decimals, 0)}f}"
    return f"{with_minus(value_text)} {PLUS_MINUS} {spread_text}"


def _name(text: str) -> str:
    return f'<span style="opacity:0.75">{escape(text)}</span>'


def _table(heads: Sequence[str], rows: Iterable[Sequence[str]], figures: Iterable[int] = ()) -> str:
    """Lay out a table of cells that are HTML already; ``figures`` are the columns of numbers."""
    right = set(figures)
    style = [_FIGURE if column in right else _CELL for column in range(16)]
    head = "".join(
        f'<th style="{style[column]};border-bottom:1px solid currentColor">{escape(name)}</th>'
        for column, name in enumerate(heads)
    )
    body = "".join(
        '<tr style="background:transparent">'
        + "".join(f'<td style="{style[column]}">{cell}</td>' for column, cell in enumerate(row))
        + "</tr>"
        for row in rows
    )
    opening = f'<tr style="background:transparent">{head}</tr>' if heads else ""
    return (
        '<table style="border-collapse:collapse;background:transparent;color:inherit;margin:0">'
        f"{opening}{body}</table>"
    )


def _frame(content: str) -> str:
    return f'<div style="color:inherit;background:transparent;overflow-x:auto">{content}</div>'


def bands_to_xarray(bands: Bands) -> "xarray.DataArray":
    """Give the band energies as an ``xarray.DataArray`` with named axes and units.

    Parameters
    ----------
    bands : Bands

    Returns
    -------
    xarray.DataArray
        Energies in lattice recoils, ``[band, quasimomentum]``: a copy, free to be changed.

    Raises
    ------
    ImportError
        If xarray is not installed.
    """
    try:
        import xarray
    except ImportError as problem:
        raise ImportError('to_xarray() needs xarray: pip install "fluxloom[tables]"') from problem
    count = len(bands.energies_er)
    momenta = np.array(bands.quasimomenta)
    return xarray.DataArray(
        np.array(bands.energies_er),
        dims=("band", "quasimomentum"),
        coords={
            "band": ("band", np.arange(count)),
            "quasimomentum": ("quasimomentum", momenta, {"units": "k_L"}),
        },
        name="energy",
        attrs={
            "units": "E_R",
            "depth_er": bands.lattice.depth_er,
            "spacing_nm": bands.lattice.spacing_nm,
            "error_er": bands.error_er,
            "fluxloom_version": __version__,
        },
    )


def sources_to_pandas(table: SourceTable) -> "pandas.DataFrame":
    """Give the numbers of an atom as a ``pandas.DataFrame``, one row per number.

    Parameters
    ----------
    table : SourceTable

    Returns
    -------
    pandas.DataFrame
        Columns name, value, uncertainty (NaN where there is none), unit, status, source.

    Raises
    ------
    ImportError
        If pandas is not installed.
    """
    try:
        import pandas
    except ImportError as problem:
        raise ImportError('to_pandas() needs pandas: pip install "fluxloom[tables]"') from problem
    rows = _rows(table)
    columns = {name: [getattr(row, name) for row in rows] for name in _SOURCE_COLUMNS}
    # Without this a column of None only would be one of objects.
    columns["uncertainty"] = [
        math.nan if row.uncertainty is None else row.uncertainty for row in rows
    ]
    return pandas.DataFrame(columns, columns=list(_SOURCE_COLUMNS))

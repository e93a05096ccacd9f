"""Which version this is, and what it runs on."""

import platform
import sys
from importlib import metadata

from fluxloom import _core

__all__ = ["__version__", "show_versions"]

__version__: str = _core.build_info()[0]


def show_versions() -> None:
    """Print the versions of Fluxloom and of what it works with, for a report.

    Examples
    --------
    >>> import fluxloom as fl
    >>> fl.show_versions()  # doctest: +ELLIPSIS
    fluxloom     ...
    """
    version, level, threads = _core.build_info()
    rows = {
        "fluxloom": version,
        "cpu level": level,
        "threads": str(threads),
        "python": sys.version.split()[0],
        "system": platform.platform(),
    }
    for package in ("numpy", "matplotlib", "pandas", "xarray"):
        try:
            rows[package] = metadata.version(package)
        except metadata.PackageNotFoundError:
            rows[package] = "not installed"
    for name, value in rows.items():
        print(f"{name:<12} {value}")

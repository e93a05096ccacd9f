#!/usr/bin/env python3
"""Write masses.json: masses of isotopes as a general periodic-table package has them.

Run:  make reference

The tests of the embedded atomic table compare with it.
"""

from __future__ import annotations

import json
import sys
from importlib.metadata import version
from pathlib import Path

from mendeleev import element

ISOTOPES = {
    "Li": (6, 7),
    "Na": (23,),
    "K": (39, 40, 41),
    "Rb": (85, 87),
    "Sr": (87,),
    "Cs": (133,),
    "Yb": (171, 173),
}


def masses() -> dict[str, dict[str, float]]:
    """Mass and its standard uncertainty, both in u, by name such as `40K`."""
    found = {}
    for symbol, mass_numbers in ISOTOPES.items():
        known = {isotope.mass_number: isotope for isotope in element(symbol).isotopes}
        for mass_number in mass_numbers:
            isotope = known[mass_number]
            found[f"{mass_number}{symbol}"] = {
                "mass_u": float(isotope.mass),
                "uncertainty_u": float(isotope.mass_uncertainty),
            }
    return found


def main() -> None:
    """Write the file named on the command line."""
    document = {
        "source": f"isotope table of the Python package mendeleev {version('mendeleev')} "
        "(atomic mass evaluation AME2020)",
        "made_by": "make_masses.py",
        "isotopes": masses(),
    }
    Path(sys.argv[1]).write_text(json.dumps(document, indent=1) + "\n", encoding="utf-8")


if __name__ == "__main__":
    main()

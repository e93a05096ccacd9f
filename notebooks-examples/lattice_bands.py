"""Bands of the demo lattice: how good is nearest-neighbour hopping?

Tern Bay is an invented laboratory.  Run:  python lattice_bands.py [PICTURE.png]
"""

import pathlib
import sys

from matplotlib.figure import Figure

import fluxloom as fl

here = pathlib.Path(__file__).parent
bay = fl.Apparatus.load(here / "tern_bay.toml")
lattice, atom = bay.lattice(), bay.atom()
bands = lattice.bands()

next_neighbour = lattice.tunnelling_hz(atom)
second = lattice.tunnelling_hz(atom, reach=2)
print(f"{atom.name} at {lattice.depth_er} E_R: recoil {lattice.recoil_hz(atom):.1f} Hz")
print(f"tunnelling {next_neighbour:.1f} Hz, to the second neighbour {second:.1f} Hz")
print(f"gap to the next band {bands.gap_er():.3f} E_R, width {bands.width_er(0):.4f} E_R")

picture = sys.argv[1] if len(sys.argv) > 1 else "bands.png"
figure = Figure(figsize=(7.0, 5.0), layout="constrained")
bands.plot(figure.add_subplot())
figure.savefig(picture, dpi=150)
print(f"picture: {picture}")

"""The type stubs tell the truth about the compiled module, and the package keeps to them."""

import subprocess
import sys
from collections.abc import Iterator
from importlib import resources
from pathlib import Path

import pytest

CONFIGURATION = Path(__file__).parents[1] / "pyproject.toml"


@pytest.fixture(scope="module", autouse=True)
def shared_cache(tmp_path_factory: pytest.TempPathFactory) -> Iterator[None]:
    """One cache for all runs: most of the time goes into numpy's own types."""
    with pytest.MonkeyPatch.context() as patch:
        patch.setenv("MYPY_CACHE_DIR", str(tmp_path_factory.mktemp("cache")))
        yield


def run(tool: str, *arguments: str, folder: Path) -> subprocess.CompletedProcess[str]:
    """Run a checker outside the source tree, so that it sees the installed package only."""
    return subprocess.run(
        [sys.executable, "-m", tool, *arguments],
        cwd=folder,
        capture_output=True,
        text=True,
        check=False,
    )


def passed(done: subprocess.CompletedProcess[str]) -> None:
    print(done.stdout, done.stderr, sep="\n")
    assert done.returncode == 0, done.stdout + done.stderr


def test_stubs_agree_with_what_was_compiled(tmp_path: Path) -> None:
    # Only the compiled module has stubs; the others are their own.
    arguments = ("fluxloom._core", "--mypy-config-file", str(CONFIGURATION))
    passed(run("mypy.stubtest", *arguments, folder=tmp_path))


def test_the_package_is_strictly_typed(tmp_path: Path) -> None:
    passed(run("mypy", "--config-file", str(CONFIGURATION), "-p", "fluxloom", folder=tmp_path))


def test_the_package_says_that_it_is_typed() -> None:
    files = {file.name for file in resources.files("fluxloom").iterdir()}
    assert {"py.typed", "_core.pyi"} <= files


def test_stubs_leave_nothing_open() -> None:
    text = resources.files("fluxloom").joinpath("_core.pyi").read_text(encoding="utf-8")
    # A word of its own, so that names that merely contain it may exist.
    assert "Any" not in text.replace(",", " ").replace("[", " ").replace("]", " ").split()


USES = """
from decimal import Decimal
from fractions import Fraction
from pathlib import Path
from typing import assert_type

import numpy as np
from numpy.typing import NDArray

import fluxloom as fl

Numbers = float | NDArray[np.float64]

lattice = fl.Lattice(wavelength_nm=np.float32(1064), depth_er=Decimal(6), axis=np.ones(3))
assert_type(lattice, fl.Lattice)
assert_type(lattice.replace(depth_er=7, axis=(0, 1, 0)), fl.Lattice)
assert_type(lattice.kick_overlap(0.5, reach=1), float)
assert_type(lattice.kick_overlap(Fraction(1, 2)), float)
assert_type(lattice.kick_overlap([0.5, 0.75]), Numbers)
assert_type(lattice.bands(count=2).energies_er, NDArray[np.float64])
assert_type(fl.Lattice.from_json(lattice.to_json()), fl.Lattice)

raman = fl.RamanPair.from_directions(absorb=[1, 0, 0], absorb_wavelength_nm=769)
assert_type(raman.emit, tuple[float, float, float] | fl.Beam | None)
check = fl.check_flux(lattice, raman, (3, 8), sites=60, legs=4, closed=True)
assert_type(check.nearest[0].fraction, Fraction)
assert_type(fl.fold(1.75), float)
assert_type(fl.raman_angles("3/8", lattice, wavelength_nm=769), tuple[fl.Solution, ...])

own: dict[str, float] = {"D1.dipole_au": 4.1}
assert_type(fl.Atom("40K").with_data(own, source="ours"), fl.Atom)
assert_type([row.name for row in fl.Atom("40K").sources()], list[str])
beam = fl.Beam(
    wavelength_nm=769,
    power_mw=Decimal("0.4"),
    waist_um=(250, 200),
    direction=[1, 0, 0],
    polarisation=fl.polarisation.linear((1, 0, 0), np.ones(3)),
).replace(waist_axis=(0, 0, 1), polarisation=(0, 1, 1j))
assert_type(beam.waist_um, float | tuple[float, float])
assert_type(beam.polarisation, tuple[complex, complex, complex])
assert_type(beam.intensity_w_per_m2((0, 0, 50)), float)
assert_type(beam.intensity_w_per_m2(), float)
assert_type(beam.reflected(0.96).intensity_w_per_m2([[0, 0, 50], [0, 0, 60]]), Numbers)
assert_type(fl.polarisation.circular((0, 0, 1), 1), NDArray[np.complex128])
apparatus = fl.Apparatus.load(Path("bay.toml")).replace({"field.direction": [0, 0, 1]})
assert_type(apparatus.measured("lattice.depth_er").value, float)
"""

MISUSES = {
    'lattice.depth_er = "deep"': "misc",
    'fl.Lattice(wavelength_nm="1064", depth_er=6)': "arg-type",
    "fl.Lattice(wavelength_nm=1064, depth_er=6j)": "arg-type",
    "fl.check_flux(lattice, raman, 1j, sites=60)": "arg-type",
    "fl.check_flux(raman, lattice, 0.5, sites=60)": "arg-type",
    'fl.check_flux(lattice, raman, 0.5, sites="60")': "arg-type",
    "fl.raman_wavelengths(0.5, lattice, range_nm=766)": "arg-type",
    "class Deeper(fl.Lattice): ...": "misc",
    'beam.replace(polarisation="linear")': "arg-type",
    "fl.polarisation.circular((0, 0, 1), 1j)": "arg-type",
}


def test_uses_that_are_right_pass(tmp_path: Path) -> None:
    (tmp_path / "uses.py").write_text(USES, encoding="utf-8")
    passed(run("mypy", "--strict", "uses.py", folder=tmp_path))


@pytest.fixture(scope="module")
def told(tmp_path_factory: pytest.TempPathFactory) -> dict[str, str]:
    """What the checker says about each misuse."""
    folder = tmp_path_factory.mktemp("misuses")
    head = USES.count("\n")
    text = USES + "\n".join(MISUSES) + "\n"
    (folder / "misuses.py").write_text(text, encoding="utf-8")
    done = run("mypy", "--strict", "misuses.py", folder=folder)
    lines = dict.fromkeys(MISUSES, "")
    for line in done.stdout.splitlines():
        parts = line.split(":", 2)
        if len(parts) == 3 and parts[1].isdigit() and int(parts[1]) > head:
            lines[list(MISUSES)[int(parts[1]) - head - 1]] += parts[2]
    return lines


@pytest.mark.parametrize("misuse", MISUSES)
def test_misuses_are_found(told: dict[str, str], misuse: str) -> None:
    assert f"[{MISUSES[misuse]}]" in told[misuse]

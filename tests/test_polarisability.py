"""Polarisabilities and tune-outs against sums over excited states and measurements."""

import itertools
import re

import numpy as np
import pytest
from independent import atoms, dipoles, light
from independent.beams import WAVELENGTHS, Setup

import fluxloom as fl

ISOTOPES = [name for name, _ in WAVELENGTHS]


@pytest.mark.parametrize("name", ISOTOPES)
def test_hyperfine_elements_are_those_of_uncoupled_spins(name: str) -> None:
    # A test of the reference itself: 3j and 6j symbols against the product basis, where
    # the light acts on J alone, and the sum rule over all states.
    one = atoms.species(name)
    ground = atoms.coupling_matrix(one.j, one.i)
    for line in one.lines:
        found = dipoles.spherical_elements(one, line)
        excited = atoms.coupling_matrix(line.excited_j, one.i)
        electron = atoms.Species("", 0.0, one.j, 0.0, 0.0, 0.0, 0.0, (line,))
        for q, part in enumerate(dipoles.spherical_elements(electron, line)):
            whole = np.kron(part, np.eye(round(2 * one.i) + 1))
            expected = ground.T @ whole @ excited
            np.testing.assert_allclose(found[q], expected, rtol=0, atol=1e-14)
        each = (found**2).sum(axis=(0, 2))
        np.testing.assert_allclose(each, line.dipole_au**2 / (2 * one.j + 1), rtol=1e-13)


@pytest.mark.parametrize(("name", "wavelengths_nm"), WAVELENGTHS)
def test_polarisabilities_are_the_sums(name: str, wavelengths_nm: tuple[float, ...]) -> None:
    # source: 6j sums of Le Kien, Schneeweiss, Rauschenbeutel, Eur. Phys. J. D 67, 92 (2013),
    # in sympy and numpy
    one, atom = atoms.species(name), fl.Atom(name)
    for wavelength_nm in wavelengths_nm:
        for f in atom.manifolds:
            found = atom.polarisability_au(wavelength_nm, f)
            expected = light.polarisabilities_au(one, f, wavelength_nm)
            size = 1e-10 * max(abs(part) for part in expected)
            assert found.scalar == pytest.approx(expected[0], rel=0, abs=size)
            assert found.vector == pytest.approx(expected[1], rel=0, abs=size)
            assert found.tensor == pytest.approx(expected[2], rel=0, abs=size)


def test_arrays_give_arrays() -> None:
    atom = fl.Atom("40K")
    grid = np.array([[1064.0, 769.0, 532.0], [900.0, 20_000.0, 768.5]])
    found = atom.polarisability_au(grid, 4.5)
    for name in ("scalar", "vector", "tensor"):
        parts = getattr(found, name)
        assert parts.shape == grid.shape
        for place in np.ndindex(grid.shape):
            assert parts[place] == getattr(atom.polarisability_au(grid[place], 4.5), name)


@pytest.mark.parametrize(
    ("name", "static_au"),
    [
        # source: Gregoire et al., Phys. Rev. A 92, 052513 (2015): 320.10(60), 290.00(50),
        # 401.20(70)
        ("87Rb", 320.10),
        ("85Rb", 320.10),
        ("39K", 290.00),
        ("40K", 290.00),
        ("41K", 290.00),
        ("133Cs", 401.20),
        # source: from memory, not confirmed: 162.7(8)
        ("23Na", 162.7),
    ],
)
def test_static_polarisability(name: str, static_au: float) -> None:
    atom = fl.Atom(name)
    for f in atom.manifolds:
        far = atom.polarisability_au(np.array([20_000.0, 10_000.0]), f).scalar
        # To frequency zero with its square.
        assert (4 * far[0] - far[1]) / 3 == pytest.approx(static_au, rel=5e-3)


def test_far_from_resonance_the_hyperfine_structure_is_forgotten() -> None:
    atom = fl.Atom("87Rb")
    line1, line2 = atoms.species("87Rb").lines
    w = light.in_hartree(light.frequency_hz(1064.0))
    w1, w2 = light.in_hartree([line1.frequency_hz, line2.frequency_hz])
    d1, d2 = line1.dipole_au**2, line2.dipole_au**2
    # source: closed form for J = 1/2, 2 w0/(w0^2 - w^2) over 3 (2J + 1); 10.7 is the residual
    scalar = (d1 * w1 / (w1**2 - w**2) + d2 * w2 / (w2**2 - w**2)) / 3 + 10.7
    vector = (w / 3) * (d2 / (w2**2 - w**2) - 2 * d1 / (w1**2 - w**2))
    for f, sign in [(2, 1), (1, -0.5)]:
        found = atom.polarisability_au(1064.0, f)
        assert found.scalar == pytest.approx(scalar, rel=1e-4)
        assert found.vector == pytest.approx(sign * vector, rel=3e-4)
        assert abs(found.tensor) < 1e-5 * scalar


@pytest.mark.parametrize(
    ("name", "range_nm", "options", "published_nm", "within_nm"),
    [
        # source: Leonard et al., Phys. Rev. A 92, 052501 (2015): 790.032388(32); the line
        # strengths of the table rest on it
        ("87Rb", (789.0, 791.0), {"f": 2}, 790.032388, 3.2e-5),
        # source: Schmidt et al., Phys. Rev. A 93, 022507 (2016): 790.01858(23)
        ("87Rb", (789.0, 791.0), {"f": 1, "m": 0}, 790.01858, 1e-3),
        # source: Fallon et al., arXiv:2201.10435: 785.1522(3), V m < 0, V = 0.9931
        ("87Rb", (781.0, 794.0), {"f": 2, "m": -2, "circularity": 0.9931}, 785.1522, 2e-3),
        ("87Rb", (781.0, 794.0), {"f": 2, "m": 2, "circularity": -0.9931}, 785.1522, 2e-3),
        # source: Holmgren et al. 2012 (from memory): 768.9712(15)
        ("39K", (768.0, 769.9), {"f": 1}, 768.9712, 1.5e-3),
        ("39K", (768.0, 769.9), {"f": 2}, 768.9712, 1.5e-3),
        # source: Ratkata et al., Phys. Rev. A 104, 052813 (2021): 880.21790(40)(8); the
        # residual of the table rests on it
        ("133Cs", (870.0, 890.0), {"f": 3, "m": 3}, 880.21790, 5e-4),
        ("133Cs", (870.0, 890.0), {"f": 3}, 880.21790, 5e-4),
    ],
)
def test_published_tune_outs(
    name: str,
    range_nm: tuple[float, float],
    options: dict[str, float],
    published_nm: float,
    within_nm: float,
) -> None:
    found = fl.Atom(name).tune_out_nm(range_nm, **options)
    assert found == pytest.approx(published_nm, abs=within_nm)
    expected = light.tune_out_nm(
        atoms.species(name),
        *range_nm,
        options["f"],
        options.get("m"),
        options.get("circularity", 0.0),
    )
    assert found == pytest.approx(expected, abs=1e-8)


def test_tune_out_of_lithium_from_its_line() -> None:
    one = atoms.species("7Li")
    line = one.lines[0]
    excited = atoms.hyperfine_hz(2.0, 0.5, 1.5, line.a_hz, line.b_hz)
    resonance_hz = line.frequency_hz + excited - one.zero_field_hz(2.0)
    found = fl.Atom("7Li").tune_out_nm((670.965, 670.976), f=2)
    # source: Copenhaver et al., arXiv:1904.08974: 3310.1(4.9) MHz above F = 2 -> F' = 2 of D1
    offset_mhz = (light.frequency_hz(found) - resonance_hz) / 1e6
    assert offset_mhz == pytest.approx(3310.1, abs=4.9)


@pytest.mark.parametrize(
    ("name", "f", "range_nm"),
    [("87Rb", 2, (779.0, 796.0)), ("87Rb", 1, (779.0, 796.0)), ("40K", 4.5, (766.0, 771.0))],
)
def test_between_two_resonances_lies_one_scalar_tune_out(
    name: str, f: float, range_nm: tuple[float, float]
) -> None:
    # All residues have one sign, so that the scalar part has one zero between neighbouring
    # hyperfine lines; each comes from a bracketing root finder of scipy. Those within 100
    # linewidths of a line mean nothing and are not given.
    one, atom = atoms.species(name), fl.Atom(name)
    poles = sorted(
        1e9 * light.constants.c / (line.frequency_hz + shift - one.zero_field_hz(f))
        for line in one.lines
        for f_excited in atoms.couple(line.excited_j, one.i)
        for shift in [atoms.hyperfine_hz(f_excited, line.excited_j, one.i, line.a_hz, line.b_hz)]
        if dipoles.reduced_element(one, line, f, f_excited) != 0.0
    )
    widths = {row.name: row.value for row in atom.sources() if row.name.endswith("linewidth_hz")}
    window_nm = 100 * max(widths.values()) * range_nm[1] ** 2 / (1e9 * light.constants.c)
    expected = []
    for low, high in itertools.pairwise(poles):
        inside = 1e-6 * (high - low)
        zero = light.tune_out_nm(one, low + inside, high - inside, f)
        if min(zero - low, high - zero) > window_nm:
            expected.append(zero)
    assert expected
    found = list(atom.tune_outs_nm(range_nm, f=f))
    assert found == pytest.approx(expected, rel=0, abs=1e-8)
    assert found == sorted(found)


def test_no_tune_out_or_several_are_refused() -> None:
    atom = fl.Atom("87Rb")
    assert len(atom.tune_outs_nm((1000.0, 1100.0), f=2)) == 0
    with pytest.raises(fl.InputError):
        atom.tune_out_nm((1000.0, 1100.0), f=2)
    # The residual polarisability makes another one, far in the ultraviolet.
    several = atom.tune_outs_nm((120.0, 796.0), f=2)
    assert len(several) == 2
    with pytest.raises(fl.InputError) as caught:
        atom.tune_out_nm((120.0, 796.0), f=2)
    told = [float(number) for number in re.findall(r"\d+\.\d+", str(caught.value))]
    for wavelength_nm in several:
        assert min(abs(number - wavelength_nm) for number in told) < 0.01
    for options in ({"f": 3}, {"f": 2, "m": 3}, {"f": 2, "m": 1, "circularity": 1.2}):
        with pytest.raises(fl.InputError):
            atom.tune_out_nm((789.0, 791.0), **options)


# Refusals and warnings.


def test_a_wavelength_on_a_resonance_is_refused() -> None:
    one, atom = atoms.species("87Rb"), fl.Atom("87Rb")
    line = one.lines[1]
    excited = atoms.hyperfine_hz(3.0, 1.5, 1.5, line.a_hz, line.b_hz)
    resonance_nm = 1e9 * light.constants.c / (line.frequency_hz + excited - one.zero_field_hz(2))
    beam = Setup((0.0, 0.0, 1.0), (1.0, 0.0, 0.0), resonance_nm).beam()
    for ask in (
        lambda: atom.polarisability_au(resonance_nm, 2),
        lambda: atom.polarisability_au(np.array([1064.0, resonance_nm]), 2),
        lambda: atom.light_shift_hz(beam, 2, 0),
        lambda: atom.scattering_per_s(beam, 2, 0),
    ):
        with pytest.raises(fl.InputError):
            ask()


def test_numbers_from_memory_warn() -> None:
    with pytest.warns(fl.FluxloomWarning):
        fl.Atom("87Rb").polarisability_au(1064.0, 2)

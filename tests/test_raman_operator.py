"""The two-photon operator against direct sums over excited states, phases included."""

import itertools
import math

import numpy as np
import pytest
from independent import atoms, frames, light
from independent.beams import Setup, random_setup

import fluxloom as fl

Z = (0.0, 0.0, 1.0)
# An isotope and its wavelengths: between or near the lines, far away.
CASES = [
    ("87Rb", (790.03, 1064.0)),
    ("40K", (769.0, 1064.0)),
    ("133Cs", (870.0, 1064.0)),
    ("6Li", (671.1, 670.985)),
]
LOOP = [(4.5, -0.5), (4.5, 0.5), (3.5, 0.5)]


def pair_of(absorb: Setup, emit: Setup) -> fl.RamanPair:
    return fl.RamanPair.from_beams(absorb=absorb.beam(), emit=emit.beam())


def found_hz(
    name: str, absorb: Setup, emit: Setup, field_gauss: float, field_direction: tuple = Z
) -> np.ndarray:
    """Rabi frequencies [b, a] between different states, in the order of the reference."""
    atom, pair = fl.Atom(name), pair_of(absorb, emit)
    states = atoms.species(name).states
    found = np.zeros((len(states), len(states)), dtype=complex)
    for (row, b), (column, a) in itertools.permutations(enumerate(states), 2):
        found[row, column] = pair.rabi_hz(
            atom, a, b, field_gauss=field_gauss, field_direction=field_direction
        )
    return found


def expected_hz(
    name: str, absorb: Setup, emit: Setup, field_gauss: float, field_direction: tuple = Z
) -> np.ndarray:
    expected = light.rabi_hz(
        atoms.species(name), absorb.light(), emit.light(), field_gauss, field_direction
    )
    np.fill_diagonal(expected, 0.0)
    return expected


@pytest.mark.parametrize("name", ["87Rb", "40K", "133Cs", "6Li", "87Sr", "171Yb", "173Yb"])
def test_the_sum_has_the_form_of_the_three_polarisabilities(name: str) -> None:
    # A test of the reference itself, within one F: the form of Le Kien, Schneeweiss,
    # Rauschenbeutel, Eur. Phys. J. D 67, 92 (2013), with F as matrices.
    one, random = atoms.species(name), np.random.default_rng(1)
    out, into = (frames.unit(random.normal(size=(2, 3)).T @ (1, 1j)) for _ in range(2))
    wavelength_nm = 1.0005e9 * light.constants.c / one.lines[-1].frequency_hz
    v = light.operator(one, out, into, light.frequency_hz(wavelength_nm))
    for f in one.manifolds:
        block = [n for n, state in enumerate(one.states) if state[0] == f]
        scalar, vector, tensor = light.polarisabilities_au(one, f, wavelength_nm)
        spin, eye = np.array(atoms.cartesian_spin(f)), np.eye(len(block))
        along = [np.einsum("i,iab->ab", u, spin) for u in (out.conj(), into)]
        turn = np.einsum("i,iab->ab", np.cross(out.conj(), into), spin)
        overlap = out.conj() @ into
        form = scalar * overlap * eye - 1j * vector * turn / (2 * f)
        if f >= 1:
            both = along[0] @ along[1] + along[1] @ along[0]
            part = 3 * both - 2 * f * (f + 1) * overlap * eye
            form += tensor * part / (2 * f * (2 * f - 1))
        found = v[np.ix_(block, block)]
        np.testing.assert_allclose(found, form, rtol=0, atol=1e-11 * np.abs(v).max())


def test_two_elements_of_rubidium() -> None:
    absorb = Setup((0.0, 1.0, 0.0), (0.0, 0.0, 1.0), 790.03, 7.0, 90.0)
    emit = Setup((0.0, 1.0, 0.0), (1.0, 0.0, 0.0), 790.03, 11.0, 120.0)
    atom, pair = fl.Atom("87Rb"), pair_of(absorb, emit)
    # source: computed independently of this project (numpy and mpmath), no publication:
    # u1 = z, u2 = x, field along z, in atomic units; V12/h = -4.687124980647e-02 Hz for
    # one unit in 1 W/cm^2
    intensity = math.prod(s.light().intensity_w_per_m2 / 1e4 for s in (absorb, emit)) ** 0.5
    unit_hz = -2 * 4.687124980647e-02 * intensity
    up = pair.rabi_hz(atom, (1, -1), (1, 0), field_gauss=0.0)
    assert up / unit_hz == pytest.approx(-4405.449713, abs=2e-6)
    down = pair.rabi_hz(atom, (1, 0), (1, -1), field_gauss=0.0)
    assert down / unit_hz == pytest.approx(4404.959022, abs=2e-6)


@pytest.mark.parametrize("field_gauss", [0.0, 1.0, 150.0])
@pytest.mark.parametrize(("name", "wavelengths_nm"), CASES)
def test_every_coupling_is_the_direct_sum(
    name: str, wavelengths_nm: tuple[float, float], field_gauss: float
) -> None:
    # source: sum over |F', m'> with sympy 3j and 6j symbols, turned into field eigenstates
    random = np.random.default_rng(17)
    for wavelength_nm in wavelengths_nm:
        # Two beams apart by about a hyperfine interval.
        absorb = random_setup(random, wavelength_nm)
        emit = random_setup(random, wavelength_nm * (1 + 1e-5))
        found = found_hz(name, absorb, emit, field_gauss)
        expected = expected_hz(name, absorb, emit, field_gauss)
        size = np.abs(expected).max()
        np.testing.assert_allclose(found, expected, rtol=0, atol=1e-9 * size)


@pytest.mark.parametrize("field_direction", [(1, 0, 0), (0, 0, -1), (0.3, -0.8, 0.5)])
@pytest.mark.parametrize(("name", "wavelengths_nm"), CASES)
def test_magnitudes_for_any_field_direction(
    name: str, wavelengths_nm: tuple[float, float], field_direction: tuple
) -> None:
    random = np.random.default_rng(29)
    absorb, emit = (random_setup(random, wavelengths_nm[0]) for _ in range(2))
    for field_gauss in (0.0, 20.0):
        found = np.abs(found_hz(name, absorb, emit, field_gauss, field_direction))
        expected = np.abs(expected_hz(name, absorb, emit, field_gauss, field_direction))
        np.testing.assert_allclose(found, expected, rtol=0, atol=1e-9 * expected.max())


@pytest.mark.parametrize(
    ("name", "wavelength_nm"), [("87Sr", 689.4), ("171Yb", 555.9), ("173Yb", 555.81)]
)
def test_couplings_without_electron_spin(name: str, wavelength_nm: float) -> None:
    random = np.random.default_rng(31)
    absorb, emit = (random_setup(random, wavelength_nm) for _ in range(2))
    for field_direction in (Z, (1.0, 1.0, -0.5)):
        found = found_hz(name, absorb, emit, 10.0, field_direction)
        expected = expected_hz(name, absorb, emit, 10.0, field_direction)
        if field_direction != Z:
            found, expected = np.abs(found), np.abs(expected)
        size = np.abs(expected).max()
        np.testing.assert_allclose(found, expected, rtol=0, atol=1e-9 * size)


def loop_hz3(absorb: Setup, emit: Setup, field_gauss: float, field_direction: tuple) -> complex:
    """Product of the three couplings round the loop, each b <- a in the direction walked."""
    atom, pair = fl.Atom("40K"), pair_of(absorb, emit)
    return math.prod(
        pair.rabi_hz(atom, a, b, field_gauss=field_gauss, field_direction=field_direction)
        for a, b in zip(LOOP, LOOP[1:] + LOOP[:1], strict=True)
    )


@pytest.mark.parametrize("field_gauss", [0.5, 19.7, 120.0])
@pytest.mark.parametrize(
    "field_direction", [Z, (0, 0, -1), (1, 0, 0), (0, -2, 0), (1, 1, 1), (-0.2, 0.7, -0.4)]
)
def test_the_product_round_a_tube_has_a_phase(field_direction: tuple, field_gauss: float) -> None:
    # source: direct sum over |F', m'>; the product needs no convention for the phases of
    # the states, so that it holds for a field in any direction
    one, random = atoms.species("40K"), np.random.default_rng(37)
    for _ in range(4):
        absorb, emit = (random_setup(random, nm) for nm in (769.0, 769.002))
        matrix = expected_hz("40K", absorb, emit, field_gauss, field_direction)
        rows = [one.index(state) for state in LOOP]
        expected = math.prod(
            complex(matrix[b, a]) for a, b in zip(rows, rows[1:] + rows[:1], strict=True)
        )
        found = loop_hz3(absorb, emit, field_gauss, field_direction)
        size = np.abs(matrix).max()
        assert abs(found - expected) < 3e-9 * abs(expected) ** (2 / 3) * size
        assert abs(np.angle(expected)) > 1e-3


def test_couplings_turn_with_everything_else() -> None:
    random = np.random.default_rng(41)
    for name, wavelength_nm in [("87Rb", 790.03), ("40K", 769.0), ("173Yb", 555.9)]:
        absorb, emit = (random_setup(random, wavelength_nm) for _ in range(2))
        field = frames.random_direction(random)
        turn = frames.rotation(random.normal(size=3), float(random.uniform(0.5, 3.0)))
        before = found_hz(name, absorb, emit, 12.0, tuple(field))
        after = found_hz(name, absorb.turned(turn), emit.turned(turn), 12.0, tuple(turn @ field))
        size = np.abs(before).max()
        np.testing.assert_allclose(np.abs(after), np.abs(before), rtol=0, atol=1e-9 * size)


def test_the_loop_turns_with_everything_else() -> None:
    random = np.random.default_rng(43)
    for _ in range(5):
        absorb, emit = (random_setup(random, 769.0) for _ in range(2))
        field = frames.random_direction(random)
        turn = frames.rotation(random.normal(size=3), float(random.uniform(0.5, 3.0)))
        before = loop_hz3(absorb, emit, 30.0, tuple(field))
        after = loop_hz3(absorb.turned(turn), emit.turned(turn), 30.0, tuple(turn @ field))
        assert after == pytest.approx(before, rel=1e-7)


def test_a_turn_of_light_about_the_field_is_a_phase() -> None:
    # source: about the field, |m> turns by exp(-i m angle): b <- a gains exp(-i (m_b - m_a) angle)
    random = np.random.default_rng(47)
    absorb, emit = (random_setup(random, 790.03) for _ in range(2))
    turn = frames.rotation(Z, 0.7)
    before = found_hz("87Rb", absorb, emit, 5.0)
    after = found_hz("87Rb", absorb.turned(turn), emit.turned(turn), 5.0)
    m = np.array([m for _, m in atoms.species("87Rb").states])
    expected = before * np.exp(-0.7j * (m[:, None] - m[None, :]))
    np.testing.assert_allclose(after, expected, rtol=0, atol=1e-9 * np.abs(before).max())


@pytest.mark.parametrize(("name", "wavelengths_nm"), CASES)
def test_swapped_beams_undo_the_step(name: str, wavelengths_nm: tuple[float, float]) -> None:
    # source: v_ab with the beams exchanged is the complex conjugate of v_ba
    random = np.random.default_rng(53)
    absorb, emit = (
        random_setup(random, nm) for nm in (wavelengths_nm[0], wavelengths_nm[0] * (1 + 1e-5))
    )
    atom, pair = fl.Atom(name), pair_of(absorb, emit)
    forth = found_hz(name, absorb, emit, 60.0)
    back = found_hz(name, emit, absorb, 60.0)
    size = np.abs(forth).max()
    np.testing.assert_allclose(back, forth.conj().T, rtol=0, atol=1e-10 * size)
    states = atoms.species(name).states
    for a, b in itertools.islice(itertools.permutations(range(len(states)), 2), 12):
        swapped = pair.swapped().rabi_hz(atom, states[b], states[a], field_gauss=60.0)
        assert abs(swapped - forth[b, a].conj()) < 1e-10 * size


def test_strength_follows_the_root_of_both_powers() -> None:
    random = np.random.default_rng(59)
    absorb, emit = (random_setup(random, 769.0) for _ in range(2))
    atom, options = fl.Atom("40K"), {"field_gauss": 10.0}
    one = pair_of(absorb, emit).rabi_hz(atom, *LOOP[:2], **options)
    more = fl.RamanPair.from_beams(
        absorb=absorb.beam().replace(power_mw=4 * absorb.power_mw),
        emit=emit.beam().replace(power_mw=9 * emit.power_mw),
    )
    assert more.rabi_hz(atom, *LOOP[:2], **options) == pytest.approx(6 * one, rel=1e-12)
    # The phase of a polarisation is that of the light: of u1 as it is, of u2 conjugate.
    phase = np.exp(0.4j)
    late = absorb.beam().replace(polarisation=tuple(phase * x for x in absorb.polarisation))
    turned = fl.RamanPair.from_beams(absorb=late, emit=emit.beam())
    assert turned.rabi_hz(atom, *LOOP[:2], **options) == pytest.approx(phase * one, rel=1e-11)
    late = emit.beam().replace(polarisation=tuple(phase * x for x in emit.polarisation))
    turned = fl.RamanPair.from_beams(absorb=absorb.beam(), emit=late)
    expected = one * np.conj(phase)
    assert turned.rabi_hz(atom, *LOOP[:2], **options) == pytest.approx(expected, rel=1e-11)


# Which steps are driven.


def test_no_step_changes_m_by_more_than_two() -> None:
    # source: two photons carry at most two units of angular momentum along the field
    random = np.random.default_rng(61)
    absorb, emit = (random_setup(random, 769.0) for _ in range(2))
    found = np.abs(found_hz("40K", absorb, emit, 25.0))
    for (row, b), (column, a) in itertools.permutations(enumerate(atoms.species("40K").states), 2):
        if abs(b[1] - a[1]) > 2:
            assert found[row, column] <= 1e-12 * found.max()


def by_change(name: str, wavelength_nm: float) -> dict[int, float]:
    """Largest coupling for each |change of m|, for light of mixed polarisations."""
    random = np.random.default_rng(67)
    absorb, emit = (random_setup(random, wavelength_nm) for _ in range(2))
    found = np.abs(found_hz(name, absorb, emit, 1.0))
    m = np.array([m for _, m in atoms.species(name).states])
    change = np.abs(m[:, None] - m[None, :])
    return {k: found[change == k].max() for k in (1, 2)}


@pytest.mark.parametrize(
    ("name", "wavelength_nm"), [("40K", 769.0), ("87Rb", 790.03), ("133Cs", 870.0)]
)
def test_alkalis_hardly_change_m_by_two(name: str, wavelength_nm: float) -> None:
    # source: common practice, 1e-5..2e-3 of a step by one beyond the excited hyperfine
    # splitting; widened to both sides for the polarisations drawn
    couplings = by_change(name, wavelength_nm)
    assert 2e-6 < couplings[2] / couplings[1] < 4e-3


def test_ytterbium_near_its_narrow_line_changes_m_by_two() -> None:
    # source: common practice; the hyperfine splitting of 3P1 is not small beside the detuning
    couplings = by_change("173Yb", 555.9)
    assert couplings[2] > 0.03 * couplings[1]


def test_the_part_of_the_cross_product_along_the_field_keeps_m() -> None:
    # source: C = u2* x u1; along the field it drives steps without change of m between
    # different F, across it steps by one. Parallel linear light has C = 0.
    up, side = (0.0, 0.0, 1.0), (0.0, 1.0, 0.0)
    along_x = (1.0, 0.0, 0.0)
    one, options = atoms.species("40K"), {"field_gauss": 0.0}
    crossed = pair_of(Setup(along_x, up, 769.0), Setup(along_x, side, 769.0))
    same = pair_of(Setup(along_x, side, 769.0), Setup(along_x, side, 769.0))
    atom = fl.Atom("40K")

    def strength(pair: fl.RamanPair, step: tuple, field_direction: tuple) -> float:
        return abs(pair.rabi_hz(atom, *step, field_direction=field_direction, **options))

    keep, change = ((4.5, 0.5), (3.5, 0.5)), ((4.5, 0.5), (4.5, -0.5))
    size = strength(crossed, keep, along_x)
    assert size > 0 and one.a_hz < 0
    assert strength(crossed, change, along_x) < 3e-3 * size
    assert strength(crossed, change, up) > 0.3 * size
    assert strength(crossed, keep, up) < 3e-3 * size
    for field_direction in (along_x, up):
        assert strength(same, keep, field_direction) < 3e-3 * size
        assert strength(same, change, field_direction) < 3e-3 * size
    oblique = (1.0, 0.0, 1.0)
    assert strength(crossed, keep, oblique) > 0.3 * size
    assert strength(crossed, change, oblique) > 0.2 * size


def test_the_effective_coupling_has_the_overlap_of_the_kick() -> None:
    lattice = fl.Lattice(wavelength_nm=1064.0, depth_er=6.0)
    half = math.radians(31.451) / 2
    absorb, emit = (
        Setup((side * math.sin(half), math.cos(half), 0.0), (0.0, 0.0, 1.0), 769.0)
        for side in (1.0, -1.0)
    )
    emit = Setup(emit.direction, (math.cos(half), math.sin(half), 0.0), 769.0)
    atom, pair = fl.Atom("40K"), pair_of(absorb, emit)
    # source: Phi = (lambda_L/lambda_R) sin(A_R/2) for a difference along the lattice
    assert pair.flux(lattice) == pytest.approx(1064 / 769 * math.sin(half), rel=1e-12)
    assert pair.kick(lattice) == pytest.approx(2 * pair.flux(lattice), rel=1e-14)
    options = {"field_gauss": 20.0, "field_direction": (0, 0, 1)}
    rabi = pair.rabi_hz(atom, *LOOP[:2], **options)
    coupling = pair.coupling(atom, *LOOP[:2], lattice=lattice, **options)
    assert coupling.rabi_hz == rabi
    expected = rabi * lattice.kick_overlap(pair.kick(lattice))
    assert coupling.effective_rabi_hz == pytest.approx(expected, rel=1e-12)


# Refusals.


def test_a_pair_without_beams_has_no_rabi_frequency() -> None:
    atom = fl.Atom("40K")
    for pair in (
        fl.RamanPair(wavelength_nm=769.0, angle_deg=31.451),
        fl.RamanPair.from_directions(
            absorb=(1, 0, 0), absorb_wavelength_nm=769, emit=(0, 1, 0), emit_wavelength_nm=769
        ),
    ):
        for ask in (pair.rabi_hz, pair.coupling):
            with pytest.raises(fl.InputError) as caught:
                ask(atom, *LOOP[:2], field_gauss=10.0, field_direction=(0, 0, 1))
            assert caught.value.code == "raman.no_beams"


def test_couplings_that_cannot_be_asked() -> None:
    random = np.random.default_rng(71)
    absorb, emit = (random_setup(random, 790.03) for _ in range(2))
    atom, pair = fl.Atom("87Rb"), pair_of(absorb, emit)
    good = {"field_gauss": 1.0, "field_direction": (0, 0, 1)}
    for a, b, changes in [
        ((3, 0), (2, 0), {}),
        ((2, 0), (0, 0), {}),
        ((2, 3), (2, 2), {}),
        ((2, 1), (2, 0.5), {}),
        ((2, 1), (2, 2), {"field_direction": (0, 0, 0)}),
        ((2, 1), (2, 2), {"field_gauss": 2000.1}),
        ((2, 1), (2, 2), {"field_gauss": math.nan}),
    ]:
        with pytest.raises(fl.InputError):
            pair.rabi_hz(atom, a, b, **{**good, **changes})
    with pytest.raises(fl.InputError, match=r"(?s)\b1\b.*\b2\b|\b2\b.*\b1\b"):
        pair.rabi_hz(atom, (3, 0), (2, 0), **good)


def test_a_pair_on_a_resonance_is_refused() -> None:
    one = atoms.species("87Rb")
    line = one.lines[0]
    excited = atoms.hyperfine_hz(1.0, 0.5, 1.5, line.a_hz, line.b_hz)
    resonance_nm = 1e9 * light.constants.c / (line.frequency_hz + excited - one.zero_field_hz(1))
    absorb = Setup((0.0, 1.0, 0.0), (0.0, 0.0, 1.0), resonance_nm)
    emit = Setup((0.0, 1.0, 0.0), (1.0, 0.0, 0.0), resonance_nm)
    with pytest.raises(fl.InputError):
        pair_of(absorb, emit).rabi_hz(fl.Atom("87Rb"), (1, 0), (1, 1), field_gauss=1.0)

"""Standard errors against first-order propagation done from outside, number by number."""

import json
import math
import pickle
from collections.abc import Callable

import pytest

import fluxloom as fl

DATA = ("frequency_hz", "dipole_au", "hyperfine_a_hz", "hyperfine_b_hz")
GROUND = ("hyperfine_a_hz", "g_j", "g_i", "residual_polarisability_au")


def beam(wavelength_nm: float, direction: tuple[float, ...], along: tuple[float, ...]) -> fl.Beam:
    return fl.Beam(
        wavelength_nm=wavelength_nm,
        power_mw=0.4,
        waist_um=200.0,
        direction=direction,
        polarisation=along,
    )


ABSORB, EMIT = beam(769.0, (0, 1, 0), (0, 0, 1)), beam(769.0, (1, 0, 0), (0, 1, 0))
PAIR = fl.RamanPair.from_beams(absorb=ABSORB, emit=EMIT)


def propagated(atom: fl.Atom, compute: Callable[[fl.Atom], float]) -> float:
    """Half the differences of moving each uncertain number up and down, in squares."""
    squares = 0.0
    for row in atom.sources():
        line, _, field = row.name.rpartition(".")
        if row.uncertainty and field in (DATA if line else GROUND):
            up, down = (
                compute(atom.with_data({row.name: row.value + sign * row.uncertainty}, source="x"))
                for sign in (1, -1)
            )
            squares += (0.5 * (up - down)) ** 2
    return math.sqrt(squares)


def test_independent_numbers_add_in_squares() -> None:
    # 40K has no measured ratio of strengths; without a field nothing else adds to the error.
    atom = fl.Atom("40K")
    alpha = atom.polarisability_au(771.0, 4.5, uncertainty=True)
    for part in ("scalar", "vector", "tensor"):
        expected = propagated(
            atom, lambda a, part=part: getattr(a.polarisability_au(771.0, 4.5), part)
        )
        assert getattr(alpha.standard_error, part) == pytest.approx(expected, rel=1e-6)
    shift = atom.light_shift_hz(ABSORB, 4.5, -4.5, uncertainty=True)
    expected = propagated(atom, lambda a: a.light_shift_hz(ABSORB, 4.5, -4.5))
    assert shift.standard_error == pytest.approx(expected, rel=1e-6)
    rates = atom.scattering_per_s(PAIR, 4.5, -4.5, uncertainty=True)
    expected = propagated(atom, lambda a: a.scattering_per_s(PAIR, 4.5, -4.5).total)
    assert rates.standard_error.total == pytest.approx(expected, rel=1e-6)
    assert float(rates.standard_error) == rates.standard_error.total
    states = ("9/2,-9/2", "9/2,-7/2")
    rabi = PAIR.rabi_hz(atom, *states, field_gauss=0.0, uncertainty=True)
    expected = propagated(atom, lambda a: abs(PAIR.rabi_hz(a, *states, field_gauss=0.0)))
    assert rabi.standard_error == pytest.approx(expected, rel=1e-6)
    tune_out = atom.tune_out_nm((768.0, 769.9), f=4.5, uncertainty=True)
    expected = propagated(atom, lambda a: a.tune_out_nm((768.0, 769.9), f=4.5))
    assert tune_out.standard_error == pytest.approx(expected, rel=1e-3)


def test_a_measured_ratio_of_strengths_joins_two_elements() -> None:
    atom = fl.Atom("87Rb")
    (ratio,) = atom.strength_ratios()
    rows = {row.name: row for row in atom.sources()}
    one, two = rows["D1.dipole_au"], rows["D2.dipole_au"]
    # source: Leonard et al., PRA 92, 052501 (2015): 1.99221(3)
    assert (ratio.value, ratio.uncertainty) == (1.99221, 0.00003)
    assert (two.value / one.value) ** 2 == pytest.approx(ratio.value, abs=ratio.uncertainty)

    def moved(size: float) -> float:
        """The tune-out with only the ratio moved."""
        dipole = one.value * (1.0 - 0.5 * size / ratio.value)
        own = atom.with_data({one.name: dipole}, source="x")
        return own.tune_out_nm((785.0, 794.0), f=2)

    from_ratio = abs(moved(ratio.uncertainty) - moved(-ratio.uncertainty)) / 2
    found = atom.tune_out_nm((785.0, 794.0), f=2, uncertainty=True)
    # The common size of both elements leaves the zero where the residual is small
    # against them; what remains is the residual's own error.
    residual = rows["residual_polarisability_au"]
    from_residual = abs(
        atom.with_data(
            {residual.name: residual.value + residual.uncertainty}, source="x"
        ).tune_out_nm((785.0, 794.0), f=2)
        - found.value
    )
    both = math.hypot(from_ratio, from_residual)
    assert both < found.standard_error < 1.2 * both
    # An element of the user's own undoes the link.
    loose = atom.with_data({"D1.dipole_au": one.value}, source="own")
    assert loose.tune_out_nm((785.0, 794.0), f=2, uncertainty=True).standard_error > 3 * both


def test_the_neglected_zeeman_shift_joins_the_error() -> None:
    # common practice: about 1.4 MHz/G over the detuning, here from D1 of F = 9/2
    atom = fl.Atom("40K")
    near = fl.RamanPair.from_beams(
        absorb=ABSORB.replace(wavelength_nm=770.0), emit=EMIT.replace(wavelength_nm=770.0)
    )
    states = ("9/2,-9/2", "9/2,-7/2")
    rabi = near.rabi_hz(atom, *states, field_gauss=200.0, uncertainty=True)
    rows = {row.name: row.value for row in atom.sources()}
    detuning = 299_792_458.0 / 770.0e-9 - rows["D1.frequency_hz"]
    relative = rabi.standard_error / abs(rabi.value)
    assert relative == pytest.approx(1.4e6 * 200.0 / detuning, rel=0.1)


def test_an_uncertain_result_is_a_result() -> None:
    atom = fl.Atom("40K")
    lattice = fl.Lattice(wavelength_nm=1064.0, depth_er=6.0)
    states = {"a": "9/2,-9/2", "b": "9/2,-7/2"}
    for found in (
        atom.tune_out_nm((768.0, 769.9), f=4.5, uncertainty=True),
        atom.polarisability_au([1064.0, 532.0], 4.5, uncertainty=True),
        atom.scattering_per_s(PAIR, 4.5, -4.5, uncertainty=True),
        PAIR.rabi_hz(atom, **states, field_gauss=30.0, uncertainty=True),
        PAIR.coupling(atom, **states, field_gauss=30.0, lattice=lattice, uncertainty=True),
    ):
        assert "D1.frequency_hz" in found.unconfirmed
        assert fl.Uncertain.from_json(found.to_json()) == found
        assert json.loads(found.to_json())["format"] == "fluxloom-uncertain"
        assert pickle.loads(pickle.dumps(found)) == found
    assert found.rule == found.value.rule
    overlap = lattice.kick_overlap(PAIR.kick(lattice))
    errors = found.standard_error
    assert errors.effective_rabi_hz == pytest.approx(errors.rabi_hz * abs(overlap))


def test_what_rests_on_memory_says_so() -> None:
    atom = fl.Atom("87Rb")
    with pytest.warns(fl.FluxloomWarning, match=r"D1\.frequency_hz"):
        atom.light_shift_hz(ABSORB, 2, 0)
    with pytest.warns(fl.FluxloomWarning, match="g_j"):
        atom.ground_levels(1.0)
    with pytest.warns(fl.FluxloomWarning, match="listed lines alone"):
        fl.Atom("173Yb").polarisability_au(1064.0, 2.5)


@pytest.mark.parametrize("text", ["", "[]", "{}", '{"format": "fluxloom-uncertain"}', "1"])
def test_texts_that_are_no_uncertain_result(text: str) -> None:
    with pytest.raises(fl.InputError) as caught:
        fl.Uncertain.from_json(text)
    assert caught.value.code == "file.not_valid"

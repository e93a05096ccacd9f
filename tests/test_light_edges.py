"""Light at the edges of what the formulas can say: near lines, at weak fields, between rules."""

import json
import math

import mpmath
import numpy as np
import pytest
import sympy
from independent.frames import rotation
from scipy import constants
from sympy.physics.wigner import wigner_6j

import fluxloom as fl

C_NM_HZ = 299_792_458.0 * 1e9


def beam(direction: object, along: object, nm: float = 769.0, **others: float) -> fl.Beam:
    settings = {"power_mw": 0.4, "waist_um": 200.0, **others}
    return fl.Beam(wavelength_nm=nm, direction=direction, polarisation=along, **settings)


def numbers(atom: fl.Atom) -> dict[str, float]:
    return {row.name: row.value for row in atom.sources()}


def resonance_nm(atom: fl.Atom, line: str, ground_hz: float, excited_hz: float) -> float:
    return C_NM_HZ / (numbers(atom)[f"{line}.frequency_hz"] + excited_hz - ground_hz)


@pytest.mark.parametrize("seed", [None, 0, 1, 2, 3])
def test_a_link_that_is_alone_is_not_forbidden(seed: int | None) -> None:
    # 173Yb: crossed polarisations across the field drive |Delta m| = 2 and nothing else;
    # however the laboratory is turned, rounding must not decide.
    turn = np.eye(3) if seed is None else rotation((1.0, seed - 1.5, 0.3), 0.7 + seed)
    x, y, z = turn.T
    pair = fl.RamanPair.from_beams(absorb=beam(x, y, 556.2), emit=beam(y, x, 556.2))
    link = pair.coupling(
        fl.Atom("173Yb"), "5/2,-5/2", "5/2,-1/2", field_gauss=5.0, field_direction=z
    )
    assert not link.forbidden and 0.01 < link.relative <= 1.0 + 1e-9
    assert abs(link.rabi_hz) > 0 and link.alternatives == ()
    assert "|Delta m| <= 1" not in link.rule


def test_the_rule_counts_the_component_that_turns_m() -> None:
    # pi and sigma+: u2* x u1 lies across the field, but turns m by -1 only.
    atom = fl.Atom("87Rb")
    sigma = fl.polarisation.circular((0, 0, 1), 1)
    pair = fl.RamanPair.from_beams(
        absorb=beam((1, 0, 0), (0, 0, 1), 790.0), emit=beam((0, 0, 1), sigma, 790.0)
    )
    up = pair.coupling(atom, (2, 0), (2, 1), field_gauss=1.0)
    down = pair.coupling(atom, (2, 1), (2, 0), field_gauss=1.0)
    assert up.rabi_hz == 0 and "0.000 here" in up.rule and up.forbidden
    assert abs(down.rabi_hz) > 0 and "1.000 here" in down.rule and not down.forbidden


def test_the_scalar_part_is_named() -> None:
    # At high field the two levels mix, and their scalar polarisabilities differ.
    atom = fl.Atom("87Rb")
    pair = fl.RamanPair.from_beams(
        absorb=beam((1, 0, 0), (0, 0, 1), 790.0), emit=beam((0, 1, 0), (0, 0, 1), 790.0)
    )
    link = pair.coupling(atom, (1, 0), (2, 0), field_gauss=1500.0)
    share = abs(link.ranks.scalar) / sum(abs(part) for part in link.ranks)
    assert share > 0.5
    assert f"scalar {100 * share:.1f} %" in link.rule


def test_beams_without_power_couple_nothing_and_say_so() -> None:
    atom = fl.Atom("40K")
    pair = fl.RamanPair.from_beams(
        absorb=beam((0, 1, 0), (0, 0, 1)), emit=beam((1, 0, 0), (0, 1, 0), power_mw=0.0)
    )
    link = pair.coupling(atom, "9/2,-9/2", "9/2,-7/2", field_gauss=30.0)
    assert link.rule.startswith("the emitted beam has no power")
    with pytest.raises(fl.InputError) as caught:
        pair.quality(atom, "9/2,-9/2", "9/2,-7/2", range_nm=(768.0, 769.0), field_gauss=30.0)
    assert caught.value.code == "light.no_coupling"


def test_a_weak_field_changes_little() -> None:
    # Light on the line of F = 1 is gigahertz away from that of F = 2, whatever small part of
    # F = 1 a weak field mixes in.
    atom = fl.Atom("87Rb")
    ground = atom.ground_levels(0.0)
    on_line = resonance_nm(atom, "D2", ground.energy_hz(1, 0), 0.0)
    light = beam((1, 0, 0), (0, 1, 0), on_line)
    at_rest = atom.light_shift_hz(light, 2, 0)
    for field in (1e-6, 1e-3, 0.1, 1.0):
        shift = atom.light_shift_hz(light, 2, 0, field_gauss=field)
        assert shift == pytest.approx(at_rest, rel=1e-4)
        rate = atom.scattering_per_s(light, 2, 0, field_gauss=field).total
        assert rate == pytest.approx(atom.scattering_per_s(light, 2, 0).total, rel=1e-3)
    found = atom.light_shift_hz(light, 2, 0, uncertainty=True)
    assert math.isfinite(found.standard_error)
    with pytest.raises(fl.InputError, match="linewidths"):
        atom.light_shift_hz(light, 1, 0)


def test_a_line_of_other_states_is_no_matter() -> None:
    # On the line of F = 1, gigahertz away from that of F = 2.
    atom = fl.Atom("87Rb")
    on_line = resonance_nm(atom, "D2", atom.ground_levels(0.0).energy_hz(1, 0), 0.0)
    pair = fl.RamanPair.from_beams(
        absorb=beam((0, 1, 0), (0, 0, 1), on_line), emit=beam((1, 0, 0), (0, 1, 0), on_line)
    )
    link = pair.coupling(atom, (2, 0), (2, 1), field_gauss=1.0)
    assert link.rabi_hz == pair.rabi_hz(atom, (2, 0), (2, 1), field_gauss=1.0)
    assert 0.1 < link.relative <= 1.0 and not link.forbidden
    for ask in (
        lambda: pair.coupling(atom, (1, 0), (1, 1), field_gauss=1.0),
        lambda: pair.rabi_matrix_hz(atom, field_gauss=1.0),
    ):
        with pytest.raises(fl.InputError) as caught:
            ask()
        assert caught.value.code == "light.on_resonance"


def test_near_an_uncertain_line_nothing_is_known() -> None:
    # The line 1S0-3P1 of ytterbium is tabulated to 1 GHz.
    atom = fl.Atom("171Yb")
    row = next(r for r in atom.sources() if r.name == "1S0-3P1.frequency_hz")
    upper = 0.5 * numbers(atom)["1S0-3P1.hyperfine_a_hz"]  # F' = 3/2
    for offset in (-0.1e9, -1.0e9, 1.0e9):
        light = beam((1, 0, 0), (0, 0, 1), C_NM_HZ / (row.value + upper + offset))
        found = atom.light_shift_hz(light, 0.5, 0.5, uncertainty=True)
        # To first order the relative error is that of the detuning.
        relative = found.standard_error / abs(found.value)
        assert relative == pytest.approx(row.uncertainty / abs(offset), rel=0.2)


def test_without_a_hyperfine_splitting_levels_stay_two() -> None:
    atom = fl.Atom("87Rb").with_data({"hyperfine_a_hz": 0.0}, source="a thought")
    levels = atom.ground_levels(1.0)
    assert levels.energy_hz(2, 0) > levels.energy_hz(1, 0)
    assert sum(levels.energies_hz) == pytest.approx(0.0, abs=1e-3)
    one, two = levels.vector(2, 0), levels.vector(1, 0)
    assert float(one @ two) == pytest.approx(0.0, abs=1e-15)


def test_a_standing_wave_heats_by_both_its_beams() -> None:
    # source: Gordon, Ashkin, Phys. Rev. A 21, 1606 (1980) (from memory): what the dark sites of
    # a blue lattice do not scatter heats by the gradient of the field.
    atom = fl.Atom("87Rb")
    for nm in (1064.0, 767.0):
        one = beam((1, 0, 0), (0, 0, 1), nm, power_mw=100.0)
        two = one.reflected(0.8)
        found = fl.lattice_scattering_per_s(atom, [one, two], state=(1, 0))
        singles = [atom.scattering_per_s(light, 1, 0).total for light in (one, two)]
        expected = 2 * atom.recoil_hz(nm) * sum(singles)
        assert found.heating_hz_per_s == pytest.approx(expected, rel=1e-12)


def test_no_more_power_than_a_beam_may_have() -> None:
    atom = fl.Atom("87Rb")
    nm = atom.tune_out_nm((785.0, 794.0), f=1, m=0) + 1e-9
    one = beam((1, 0, 0), (0, 0, 1), nm)
    with pytest.raises(fl.InfeasibleError) as caught:
        fl.lattice_power_mw(atom, one.replace(waist_um=1e5), depth_er=900.0, state=(1, 0))
    assert caught.value.code == "lattice.power_out_of_reach"
    assert caught.value.details["power_mw"] > caught.value.details["high"] == 1e6


def test_blue_light_meets_lines_that_the_table_does_not_have() -> None:
    atom = fl.Atom("87Rb")
    with pytest.warns(fl.FluxloomWarning, match=r"421\.7 nm"):
        atom.polarisability_au([1064.0, 420.3], 2)
    with pytest.warns(fl.FluxloomWarning, match=r"421\.7 nm"):
        atom.tune_outs_nm((100.0, 500.0), f=2)


def test_documents_of_results_must_make_sense() -> None:
    atom = fl.Atom("40K")
    pair = fl.RamanPair.from_beams(
        absorb=beam((0, 1, 0), (0, 0, 1)), emit=beam((1, 0, 0), (0, 1, 0))
    )
    states = {"a": "9/2,-9/2", "b": "9/2,-7/2"}
    curve = pair.quality(atom, **states, range_nm=(768.0, 769.0), points=3, field_gauss=30.0)
    for one, changes in [
        (atom.scattering_per_s(pair, 4.5, 0.5), {"total": -1.0}),
        (atom.scattering_per_s(pair, 4.5, 0.5), {"to": []}),
        (atom.scattering_per_s(pair, 4.5, 0.5), {"from": [2, 0]}),
        (pair.coupling(atom, **states, field_gauss=30.0), {"relative": -1.0}),
        (pair.coupling(atom, **states, field_gauss=30.0), {"to": [5, 0]}),
        (curve, {"ratio": [1.0]}),
        (curve, {"wavelengths_nm": [769.0, 768.5, 768.0]}),
        (pair.stray_couplings(atom, **states, field_gauss=30.0)[0], {"rabi_hz": "much"}),
        (atom.polarisability_au([1064.0], 4.5), {"scalar": []}),
        (atom.ground_levels(1.0), {"field_gauss": -1.0}),
    ]:
        assert type(one).from_json(one.to_json()) == one
        spoilt = json.loads(one.to_json()) | changes
        with pytest.raises(fl.InputError):
            type(one).from_json(json.dumps(spoilt))


def test_rates_by_state_cannot_be_changed() -> None:
    rates = fl.Atom("40K").scattering_per_s(beam((1, 0, 0), (0, 0, 1)), 4.5, 0.5)
    with pytest.raises(TypeError):
        rates.to[4.5, 0.5] = 5.0  # type: ignore[index]
    assert rates.to[4.5, 0.5] == rates.rayleigh
    assert sum(rates.to.values()) == pytest.approx(rates.total)


def test_arguments_that_are_no_atom_or_flag() -> None:
    atom = fl.Atom("40K")
    light = beam((1, 0, 0), (0, 0, 1))
    with pytest.raises(TypeError, match=r"atom must be an Atom such as fl\.Atom"):
        fl.lattice_depth_er("40K", light, state="9/2,1/2")
    with pytest.raises(TypeError, match="uncertainty must be True or False"):
        atom.light_shift_hz(light, 4.5, 0.5, uncertainty="yes")
    with pytest.raises(fl.InputError, match=r"^reflection = 1\.5"):
        fl.RamanPair.from_beams(absorb=light, emit=light).stray_couplings(
            atom, "9/2,1/2", "9/2,3/2", field_gauss=1.0, reflection=1.5
        )


@pytest.mark.parametrize(("name", "f"), [("40K", 4.5), ("87Rb", 2.0), ("133Cs", 3.0)])
def test_the_tensor_part_keeps_its_digits(name: str, f: float) -> None:
    # source: Le Kien, Schneeweiss, Rauschenbeutel, Eur. Phys. J. D 67, 92 (2013) (from memory),
    # with exact 6j symbols of sympy and 40 digits of mpmath; terms cancel to a ten-millionth.
    atom = fl.Atom(name)
    data, i, j = (
        numbers(atom),
        sympy.Rational(round(2 * atom.nuclear_spin), 2),
        sympy.Rational(1, 2),
    )
    spin = sympy.Rational(round(2 * f), 2)
    with mpmath.workdps(40):
        nu = mpmath.mpf(299792458) / (mpmath.mpf(1064) * mpmath.mpf(10) ** -9)

        def shift(jj: sympy.Rational, ff: sympy.Rational, a: float, b: float) -> mpmath.mpf:
            k = ff * (ff + 1) - i * (i + 1) - jj * (jj + 1)
            found = mpmath.mpf(a) * _mp(k) / 2
            if b:
                top = sympy.Rational(3, 2) * k * (k + 1) - 2 * i * (i + 1) * jj * (jj + 1)
                found += mpmath.mpf(b) * _mp(top / (2 * i * (2 * i - 1) * 2 * jj * (2 * jj - 1)))
            return found

        total = mpmath.mpf(0)
        ground = shift(j, spin, data["hyperfine_a_hz"], 0.0)
        for line, jj in (("D1", sympy.Rational(1, 2)), ("D2", sympy.Rational(3, 2))):
            for twice in range(round(2 * abs(i - jj)), round(2 * (i + jj)) + 1, 2):
                ff = sympy.Rational(twice, 2)
                if abs(ff - spin) > 1:
                    continue
                reduced = (2 * spin + 1) * (2 * ff + 1) * wigner_6j(j, spin, i, ff, jj, 1) ** 2
                weight = (-1) ** int(spin + ff + 1) * wigner_6j(1, 2, 1, spin, ff, spin) * reduced
                a, b = data[f"{line}.hyperfine_a_hz"], data.get(f"{line}.hyperfine_b_hz", 0.0)
                at = mpmath.mpf(data[f"{line}.frequency_hz"])
                at += shift(jj, ff, a, b if jj > 1 else 0.0) - ground
                strength = mpmath.mpf(data[f"{line}.dipole_au"]) ** 2
                total += strength * _mp(sympy.nsimplify(weight)) * (1 / (at - nu) + 1 / (at + nu))
        factor = 2 * spin * (2 * spin - 1) / (3 * (spin + 1) * (2 * spin + 1) * (2 * spin + 3))
        # Atomic units: the Hartree energy over h.
        hartree = mpmath.mpf(constants.physical_constants["Hartree energy"][0]) / constants.h
        expected = -_mp(sympy.sqrt(factor * 5)) * total * hartree
        found = atom.polarisability_au(1064.0, f).tensor
        assert found == pytest.approx(float(expected), rel=1e-12, abs=0)


def _mp(number: sympy.Expr) -> mpmath.mpf:
    return mpmath.mpf(str(sympy.N(number, 45)))

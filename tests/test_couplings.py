"""Explanations of couplings, strays, and coupling over scattering."""

import math

import numpy as np
import pytest

import fluxloom as fl

ATOM = fl.Atom("40K")
LATTICE = fl.Lattice(wavelength_nm=1064.0, depth_er=6.0)


def beam(direction: tuple[float, ...], along: tuple[float, ...], **others: float) -> fl.Beam:
    settings = {"wavelength_nm": 769.0, "power_mw": 0.4, "waist_um": 200.0, **others}
    return fl.Beam(direction=direction, polarisation=along, **settings)


# Crossed linear polarisations, the vector product along x: across a field along z.
PAIR = fl.RamanPair.from_beams(absorb=beam((0, 1, 0), (0, 0, 1)), emit=beam((1, 0, 0), (0, 1, 0)))


def test_a_strong_link_needs_no_alternatives() -> None:
    link = PAIR.coupling(ATOM, "9/2,-9/2", "9/2,-7/2", field_gauss=30.0, lattice=LATTICE)
    assert (link.a, link.b) == ((4.5, -4.5), (4.5, -3.5))
    assert not link.forbidden and link.alternatives == ()
    assert "across the field" in link.rule
    assert sum(link.ranks) == pytest.approx(link.rabi_hz)
    assert link.ranks[1] == link.ranks.vector and len(link.ranks) == 3
    overlap = LATTICE.kick_overlap(PAIR.kick(LATTICE))
    assert link.effective_rabi_hz == pytest.approx(link.rabi_hz * overlap, rel=1e-14)
    assert link.kick == PAIR.kick(LATTICE)
    free = PAIR.coupling(ATOM, "9/2,-9/2", "9/2,-7/2", field_gauss=30.0)
    assert free.kick is None and free.effective_rabi_hz == free.rabi_hz == link.rabi_hz


def test_alternatives_keep_what_they_promise() -> None:
    # Delta m = 0 between manifolds takes the component of u2* x u1 along the field: none here.
    states = {"a": "9/2,-1/2", "b": "7/2,-1/2"}
    link = PAIR.coupling(ATOM, **states, field_gauss=30.0)
    assert link.forbidden and link.relative < 1e-2
    assert "along the field" in link.rule and "too weak" in link.rule
    text = next(text for text in link.alternatives if text.startswith("a field along x"))
    promised = float(text.split(": ")[1].split(" ")[0]) * 1e3
    turned = PAIR.rabi_hz(ATOM, **states, field_gauss=30.0, field_direction=(1, 0, 0))
    assert abs(turned) == pytest.approx(promised, rel=1e-3)
    assert any("radio_rabi_hz" in text for text in link.alternatives)


def test_two_steps_are_offered_where_one_is_too_long() -> None:
    link = PAIR.coupling(ATOM, "9/2,-9/2", "9/2,-5/2", field_gauss=30.0)
    assert link.forbidden and "tensor part" in link.rule
    assert any("by way of 9/2,-7/2" in text for text in link.alternatives)
    link = PAIR.coupling(ATOM, "9/2,-9/2", "9/2,-3/2", field_gauss=30.0)
    assert link.rabi_hz == 0 and "2 at most" in link.rule and link.alternatives


def test_strays_are_pairs_of_their_own() -> None:
    states = {"a": "9/2,-9/2", "b": "9/2,-7/2"}
    strays = PAIR.stray_couplings(ATOM, **states, field_gauss=30.0, reflection=0.005)
    sizes = [abs(stray.rabi_hz) for stray in strays]
    assert sizes == sorted(sizes, reverse=True) and len(strays) == 11
    by_name = {(stray.absorb, stray.emit): stray for stray in strays}
    for stray in strays:
        again = stray.pair.rabi_hz(ATOM, **states, field_gauss=30.0)
        assert stray.rabi_hz == again
    # The pair backwards kicks backwards; one beam alone does not kick.
    assert by_name["emit", "absorb"].pair.flux(LATTICE) == -PAIR.flux(LATTICE)
    assert by_name["emit", "emit"].pair.flux(LATTICE) == 0.0
    # Half a per cent of reflected power is 7 % in amplitude.
    reflected = by_name["absorb", "emit, reflected"]
    main = abs(PAIR.rabi_hz(ATOM, **states, field_gauss=30.0))
    assert abs(reflected.rabi_hz) / main == pytest.approx(math.sqrt(0.005), rel=1e-6)
    assert reflected.pair.flux(LATTICE) == pytest.approx(532.0 / 769.0)


def test_tones_gigahertz_apart_have_wave_vectors_of_their_own() -> None:
    states = ("9/2,1/2", "7/2,1/2")
    tuned = PAIR.on_resonance(ATOM, *states, field_gauss=20.0)
    absorb, emit = tuned.beams
    light = 299_792_458.0
    apart = light / absorb.wavelength_nm * 1e9 - light / emit.wavelength_nm * 1e9
    splitting = ATOM.ground_levels(20.0).splitting_hz(*states)
    assert splitting > 1e9
    assert apart == pytest.approx(splitting, abs=0.1)
    expected = -LATTICE.spacing_nm / emit.wavelength_nm
    assert tuned.flux(LATTICE) == pytest.approx(expected, rel=1e-14)
    # Over 60 sites a gigahertz turns the phase by milliradians.
    phase = 2 * math.pi * 60 * (tuned.flux(LATTICE) - PAIR.flux(LATTICE))
    assert 1e-4 < abs(phase) < 5e-3


def test_quality_is_coupling_over_scattering() -> None:
    states = {"a": "9/2,-9/2", "b": "9/2,-7/2"}
    curve = PAIR.quality(ATOM, **states, range_nm=(766.0, 771.0), points=501, field_gauss=30.0)
    assert len(curve.excluded_nm) == 2
    for nm in (767.0, 768.97, 770.5):
        place = int(np.argmin(abs(curve.wavelengths_nm - nm)))
        at = float(curve.wavelengths_nm[place])
        pair = fl.RamanPair.from_beams(
            absorb=PAIR.beams[0].replace(wavelength_nm=at),
            emit=PAIR.beams[1].replace(wavelength_nm=at),
        )
        rabi = abs(pair.rabi_hz(ATOM, **states, field_gauss=30.0))
        rates = [ATOM.scattering_per_s(pair, 4.5, m, field_gauss=30.0).total for m in (-4.5, -3.5)]
        assert curve.rabi_hz[place] == pytest.approx(rabi, rel=1e-12)
        assert curve.scattering_per_s[place] == pytest.approx(sum(rates) / 2, rel=1e-12)
        assert curve.ratio[place] == pytest.approx(4 * math.pi * rabi / sum(rates), rel=1e-12)
    assert curve.best_ratio >= max(curve.ratio)
    for low, high in curve.excluded_nm:
        assert not np.any((curve.wavelengths_nm > low) & (curve.wavelengths_nm < high))
    # Power changes nothing if both beams change together.
    weak = fl.RamanPair.from_beams(
        absorb=PAIR.beams[0].replace(power_mw=0.04), emit=PAIR.beams[1].replace(power_mw=0.04)
    )
    again = weak.quality(ATOM, **states, range_nm=(766.0, 771.0), points=501, field_gauss=30.0)
    np.testing.assert_allclose(again.ratio, curve.ratio, rtol=1e-12)
    with pytest.raises(fl.InputError, match="nearer than 100 linewidths"):
        PAIR.quality(ATOM, **states, range_nm=(766.6996, 766.6998), points=9, field_gauss=30.0)


def test_lattices_from_light() -> None:
    one = fl.Beam(
        wavelength_nm=1064.0,
        power_mw=50.0,
        waist_um=120.0,
        direction=(1, 0, 0),
        polarisation=(0, 0, 1),
    )
    two = one.reflected(0.5)
    state = "9/2,-9/2"
    depth = fl.lattice_depth_er(ATOM, [one, two], state=state)
    # Closed form: 4 sqrt(U1 U2) for parallel polarisations.
    shifts = [ATOM.light_shift_hz(light, 4.5, -4.5) for light in (one, two)]
    expected = 4 * math.sqrt(shifts[0] * shifts[1]) / ATOM.recoil_hz(1064.0)
    assert depth == pytest.approx(expected, rel=1e-12)
    power = fl.lattice_power_mw(ATOM, [one, two], depth_er=7.0, state=state)
    stronger = [one.replace(power_mw=power), two.replace(power_mw=power / 2)]
    assert fl.lattice_depth_er(ATOM, stronger, state=state) == pytest.approx(7.0, rel=1e-12)
    # One beam alone is retro-reflected without loss.
    alone = fl.lattice_depth_er(ATOM, one, state=state)
    assert alone == fl.lattice_depth_er(ATOM, [one, one.reflected(1.0)], state=state)
    # Crossing at 60 degrees doubles the spacing and quarters the recoil.
    angle = math.radians(60.0)
    crossed = one.replace(direction=(math.cos(angle), math.sin(angle), 0.0))
    wide = fl.lattice_depth_er(ATOM, [one, crossed], state=state)
    assert wide == pytest.approx(4 * alone, rel=1e-12)
    # Atoms on the sites of a red-detuned lattice see both amplitudes added.
    rates = fl.lattice_scattering_per_s(ATOM, [one, two], state=state).total
    single = ATOM.scattering_per_s(one, 4.5, -4.5).total
    assert rates == pytest.approx(single * (1 + math.sqrt(0.5)) ** 2, rel=1e-12)
    blue = [light.replace(wavelength_nm=532.0) for light in (one, one.reflected(1.0))]
    dark = fl.lattice_scattering_per_s(ATOM, blue, state=state).total
    assert dark < 1e-20
    with pytest.raises(fl.InfeasibleError) as caught:
        crossed = [one, two.replace(polarisation=(0, 1, 0))]
        fl.lattice_power_mw(ATOM, crossed, depth_er=7.0, state="9/2,1/2")
    assert caught.value.code == "lattice.no_interference"
    for wrong, code in [
        ([one, one], "lattice.parallel_beams"),
        ([one, two, two], "lattice.not_two_beams"),
        ([one, two.replace(wavelength_nm=1065.0)], "lattice.two_wavelengths"),
    ]:
        with pytest.raises(fl.InputError) as caught:
            fl.lattice_depth_er(ATOM, wrong, state=state)
        assert caught.value.code == code

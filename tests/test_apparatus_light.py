"""Beams of an apparatus file as light, and what the light does, against sums from outside."""

import json
import subprocess
import sys
from pathlib import Path

import numpy as np
import pytest
from independent import atoms, frames, light
from scipy import constants

import fluxloom as fl

BAY = Path("notebooks-examples/tern_bay.toml")
FIELD_GAUSS = 30.0
POTASSIUM = atoms.species("40K")
Z, X = (0.0, 0.0, 1.0), (1.0, 0.0, 0.0)
PEAK_LATTICE = light.peak_w_per_m2(54.6, 120.0)


def bay() -> fl.Apparatus:
    return fl.Apparatus.load(BAY)


def text_with(old: str, new: str) -> str:
    text = BAY.read_text(encoding="utf-8")
    assert text.count(old) == 1
    return text.replace(old, new)


def light_of(beam: fl.Beam) -> light.Light:
    """A round beam at its focus, from what it says of itself."""
    assert isinstance(beam.waist_um, float)
    intensity = light.peak_w_per_m2(beam.power_mw, beam.waist_um)
    return light.Light(beam.polarisation, beam.wavelength_nm, intensity)


def run(*arguments: str) -> subprocess.CompletedProcess[str]:
    return subprocess.run(
        [sys.executable, "-m", "fluxloom", *arguments], capture_output=True, text=True, check=False
    )


# What the light does.


def test_the_depth_that_the_power_makes() -> None:
    # source: s = 4 |U_12|/E_R with U_12 from a direct sum over excited states, physics of a
    # standing wave of z-polarised light along x, 0.95 of the power coming back
    v = light.operator_in_field(POTASSIUM, Z, Z, light.frequency_hz(1064.0), FIELD_GAUSS)
    place = POTASSIUM.index((4.5, -4.5))
    interference = light.HZ_PER_AU * np.sqrt(0.95) * PEAK_LATTICE * v[place, place].real
    recoil_hz = constants.h / (2 * fl.Atom("40K").mass_kg * 1064e-9**2)
    expected = 4 * abs(interference) / recoil_hz
    report = bay().links()
    assert report is not None
    assert report.depth_from_power_er == pytest.approx(expected, rel=1e-9)
    assert (report.depth_er, report.depth_standard_error_er) == (6.0, 0.06)
    # source: two-level sum of the D lines (Grimm, Weidemueller, Ovchinnikov 2000), a few per cent
    shift, _ = light.two_level_sum(POTASSIUM, 1064.0, np.sqrt(0.95) * PEAK_LATTICE)
    assert report.depth_from_power_er == pytest.approx(4 * abs(shift) / recoil_hz, rel=0.03)


def test_links_are_those_of_a_direct_sum() -> None:
    # source: direct sums over excited states; energies of the whole matrix in numpy
    apparatus = bay()
    absorb, emit = (light_of(apparatus.beam(name)) for name in ("raman_a", "raman_b"))
    rabi = light.rabi_hz(POTASSIUM, absorb, emit, FIELD_GAUSS)
    energies, _ = atoms.eigenstates(POTASSIUM, FIELD_GAUSS)
    report = apparatus.links(legs=10)
    assert report is not None and len(report.links) == 9
    overlap = apparatus.lattice().kick_overlap(apparatus.raman_pair().kick(apparatus.lattice()))
    # 20, 10 and 30 uG, and 0.5 ppm of 30 G.
    rms = np.sqrt(20e-6**2 + 10e-6**2 + 30e-6**2 + 15e-6**2)
    assert report.field_rms_gauss == pytest.approx(rms, rel=1e-12)
    for link in report.links:
        a, b = POTASSIUM.index(tuple(link.a)), POTASSIUM.index(tuple(link.b))
        assert link.b.m == link.a.m + 1
        assert link.rabi_hz == pytest.approx(abs(rabi[b, a]), rel=1e-9)
        assert link.effective_rabi_hz == pytest.approx(abs(rabi[b, a] * overlap), rel=1e-9)
        assert link.splitting_hz == pytest.approx(energies[b] - energies[a], abs=1e-3)
        slope = atoms.breit_rabi_slope(POTASSIUM, *link.b, FIELD_GAUSS, 1)
        slope -= atoms.breit_rabi_slope(POTASSIUM, *link.a, FIELD_GAUSS, 1)
        assert link.field_hz_per_gauss == pytest.approx(slope, rel=1e-9)
        assert link.field_rms_hz == pytest.approx(abs(slope) * rms, rel=1e-9)
        assert not link.forbidden


def test_scattering_is_that_of_a_direct_sum() -> None:
    # source: Kramers-Heisenberg sums; on the sites of a red lattice the amplitudes add up
    apparatus = bay()
    raman = sum(
        light.scattering_per_s(POTASSIUM, light_of(apparatus.beam(name)), FIELD_GAUSS)
        for name in ("raman_a", "raman_b")
    )
    at_sites = light.Light(Z, 1064.0, PEAK_LATTICE * (1 + np.sqrt(0.95)) ** 2)
    lattice = light.scattering_per_s(POTASSIUM, at_sites, FIELD_GAUSS)
    report = apparatus.links(legs=3)
    assert report is not None and len(report.scattering_per_s) == 3
    for leg in report.scattering_per_s:
        place = POTASSIUM.index(tuple(leg.state))
        for rates, total, changing in [
            (raman, leg.raman_beams_per_s, leg.raman_beams_changing_per_s),
            (lattice, leg.lattice_beams_per_s, leg.lattice_beams_changing_per_s),
        ]:
            assert total == pytest.approx(rates[:, place].sum(), rel=1e-8)
            assert changing == pytest.approx(np.delete(rates[:, place], place).sum(), rel=1e-6)


def test_a_report_is_a_document_and_warns_of_nothing(recwarn: pytest.WarningsRecorder) -> None:
    report = bay().links(legs=3, closed=True)
    assert report is not None
    assert fl.LightReport.from_json(report.to_json()) == report
    closing = report.links[2]
    assert (closing.a, closing.b, closing.forbidden) == ((4.5, -2.5), (4.5, -4.5), True)
    assert "Delta m = -2" in (closing.rule or "") and closing.alternatives
    assert fl.LinkReport.from_json(closing.to_json()) == closing
    leg = report.scattering_per_s[0]
    assert fl.LegReport.from_json(leg.to_json()) == leg
    # The closing link has |Delta m| = 2.
    codes = [caution.code for caution in report.cautions]
    assert codes == ["caution.link_forbidden", "caution.unconfirmed_data"]
    assert set(report.unconfirmed_data) == {"D1.frequency_hz", "D2.frequency_hz", "g_j"}
    assert not recwarn.list


@pytest.mark.parametrize("legs", [0, 65, 2.5, True])
def test_numbers_of_legs_that_are_none(legs: float) -> None:
    with pytest.raises((fl.InputError, TypeError)):
        bay().links(legs=legs)


# Where the beams go.


@pytest.mark.parametrize("normal", [(0, 0, 1), (0, 1, 0), (0, 1, -2)])
@pytest.mark.parametrize("tilt_deg", [0.0, 2.0, -7.5])
@pytest.mark.parametrize("angle_deg", [10.0, 31.451, 90.0, 180.0])
def test_beams_stay_where_the_file_puts_them(
    angle_deg: float, tilt_deg: float, normal: tuple[float, float, float]
) -> None:
    apparatus = bay().replace(
        {
            "raman.angle_deg": angle_deg,
            "raman.tilt_deg": tilt_deg,
            "raman.plane_normal": normal,
            "beams.raman_a.polarisation_deg": 25.0,
            "beams.raman_a.ellipticity_deg": 12.0,
        }
    )
    pair = apparatus.raman_pair()
    a, b = (np.array(apparatus.beam(name).direction) for name in ("raman_a", "raman_b"))
    assert np.linalg.norm(a) == pytest.approx(1.0, abs=1e-15)
    assert np.degrees(np.arctan2(np.linalg.norm(np.cross(a, b)), a @ b)) == pytest.approx(angle_deg)
    # k1 - k2 lies at the tilt from the lattice axis, in the plane of the pair.
    unit, turn = frames.unit(normal).real, a - b
    across = np.cross(unit, X)
    assert np.degrees(np.arctan2(turn @ across, turn @ X)) == pytest.approx(tilt_deg, abs=1e-9)
    assert abs(turn @ unit) < 1e-15
    # The light is transverse, and turned from the plane as the bench says.
    u = np.array(apparatus.beam("raman_a").polarisation)
    assert abs(u @ a) < 1e-15
    in_plane = np.cross(unit, a)
    chi, angle = np.radians(12.0), np.radians(25.0)
    long = np.cos(angle) * in_plane + np.sin(angle) * unit
    expected = np.cos(chi) * long + 1j * np.sin(chi) * np.cross(a, long)
    assert np.abs(u - expected).max() < 1e-12
    # The pair is the one it was, and carries them.
    bare = fl.RamanPair(wavelength_nm=769.0, angle_deg=angle_deg, tilt_deg=tilt_deg)
    assert pair.flux(apparatus.lattice()) == bare.flux(apparatus.lattice())
    assert (pair.angle_deg, pair.tilt_deg) == (angle_deg, tilt_deg)
    assert pair.beams == (apparatus.beam("raman_a"), apparatus.beam("raman_b"))


def test_lattice_beams() -> None:
    apparatus = bay()
    beam, back = apparatus.lattice_beams()
    assert beam == apparatus.beam("lattice")
    assert back == beam.reflected(0.95)
    assert beam.direction == X and apparatus.field_direction == Z
    found = fl.lattice_depth_er(
        apparatus.atom(), [beam, back], state="9/2,-9/2", field_gauss=FIELD_GAUSS
    )
    report = apparatus.links()
    assert report is not None and found == report.depth_from_power_er


@pytest.mark.parametrize(
    ("name", "code", "meant"),
    [
        ("ramen_a", "apparatus.unknown_beam", "raman_a"),
        ("spare", "apparatus.beam_without_direction", None),
        ("dim", "apparatus.not_stated", None),
    ],
)
def test_beams_that_are_no_light(name: str, code: str, meant: str | None) -> None:
    text = text_with('beams = ["raman_a", "raman_b"]', 'beams = ["raman_a", "dim"]')
    text += '\n[beams.dim]\nlaser = "raman"\npower_mw = 1.0\n[beams.spare]\nlaser = "raman"\n'
    apparatus = fl.Apparatus.from_toml(text)
    with pytest.raises(fl.InputError) as caught:
        apparatus.beam(name)
    (fault,) = caught.value.faults
    assert (fault.code, fault.did_you_mean) == (code, meant)
    if name == "dim":
        assert fault.path == "beams.dim.waist_um"
        assert "polarisation_deg" in str(caught.value)
    # The pair without all its light is geometry alone.
    assert apparatus.raman_pair() == fl.RamanPair(wavelength_nm=769.0, angle_deg=31.451)


# Depth against power.


@pytest.mark.parametrize(
    ("power_mw", "told"),
    [
        (54.6, None),
        (54.2, None),
        (55.6, "caution"),
        (53.5, "caution"),
        (57.0, "fault"),
        (52.0, "fault"),
    ],
)
def test_depth_and_power_agree_or_are_told(
    power_mw: float, told: str | None, tmp_path: Path
) -> None:
    file = tmp_path / "bay.toml"
    text = text_with("power_mw = 54.6", f"power_mw = {power_mw}")
    file.write_text(text, encoding="utf-8")
    if told == "fault":
        with pytest.raises(fl.InputError) as caught:
            fl.Apparatus.load(file)
        (fault,) = caught.value.faults
        assert (fault.code, fault.path) == ("apparatus.depth_disagrees", "lattice.depth_er")
        assert fault.line is not None
        assert text.split("\n")[fault.line - 1].startswith("depth_er")
        assert "power_mw = 54.62" in fault.message and f"= {power_mw:g}" in fault.message
        done = run("check", str(file), "--target", "3/8", "--json")
        assert done.returncode == 2
        assert json.loads(done.stdout)["faults"][0]["code"] == fault.code
        return
    cautions = {caution.code: caution.text for caution in fl.Apparatus.load(file).cautions}
    assert ("caution.depth_disagrees" in cautions) == (told == "caution")
    if told == "caution":
        assert "the stated depth is used" in cautions["caution.depth_disagrees"]
        done = run("check", str(file), "--target", "3/8", "--json")
        assert done.returncode == 0
        codes = [caution["code"] for caution in json.loads(done.stdout)["cautions"]]
        assert codes.count("caution.depth_disagrees") == 1


@pytest.mark.parametrize(
    ("changes", "power_mw"),
    [
        # source: depth goes as P sqrt(r)/(w1 w2)
        ({"beams.lattice.waist_um": 240.0}, 218.4),
        ({"beams.lattice.waist_um": [60.0, 120.0]}, 27.3),
        ({"beams.lattice.return_fraction": 0.2375}, 109.2),
        ({"beams.lattice.waist_um": 240.0, "lattice.depth_er": 3.0}, 109.2),
    ],
)
def test_the_power_follows(changes: dict, power_mw: float, tmp_path: Path) -> None:
    apparatus = bay().replace(changes)
    assert apparatus["beams.lattice.power_mw"] == pytest.approx(power_mw, rel=1e-12)
    assert apparatus["lattice.depth_er"] == changes.get("lattice.depth_er", 6.0)
    assert any("beams.lattice.power_mw moves" in change for change in apparatus.changes)
    file = tmp_path / "bay.toml"
    apparatus.save(file)
    assert fl.Apparatus.load(file) == apparatus
    assert "# what `plan` may choose from" in file.read_text(encoding="utf-8")


def test_the_power_follows_the_colour() -> None:
    # source: direct sums; the lattice recoil goes as 1/wavelength^2
    apparatus = bay().replace({"lasers.lattice.wavelength_nm": 850.0})
    made = []
    for wavelength_nm in (1064.0, 850.0):
        v = light.operator_in_field(POTASSIUM, Z, Z, light.frequency_hz(wavelength_nm), FIELD_GAUSS)
        made.append(
            wavelength_nm**2 * v[POTASSIUM.index((4.5, -4.5))][POTASSIUM.index((4.5, -4.5))]
        )
    expected = 54.6 * abs(made[0] / made[1])
    assert apparatus["beams.lattice.power_mw"] == pytest.approx(expected, rel=1e-9)
    assert apparatus["lattice.depth_er"] == 6.0
    assert apparatus.measured("lattice.depth_er").standard_error == 0.06


# The command.


def test_the_answer_has_the_light() -> None:
    done = run("check", str(BAY), "--target", "3/8", "--legs", "3", "--json")
    assert (done.returncode, done.stderr) == (0, "")
    document = json.loads(done.stdout)
    found = document["light"]
    assert found["depth_from_power_er"] == pytest.approx(6.0, abs=0.06)
    assert len(found["links"]) == 2
    assert set(found["links"][0]) >= {
        "from", "to", "splitting_hz", "rabi_hz", "effective_rabi_hz", "forbidden",
        "field_hz_per_gauss", "field_rms_hz",
    }  # fmt: skip
    assert (found["links"][0]["from"], found["links"][0]["to"]) == ("9/2,-9/2", "9/2,-7/2")
    assert [leg["state"] for leg in found["scattering_per_s"]] == [
        "9/2,-9/2", "9/2,-7/2", "9/2,-5/2",
    ]  # fmt: skip
    assert set(found["scattering_per_s"][0]["raman_beams"]) == {"total", "changing"}
    codes = [caution["code"] for caution in document["cautions"]]
    assert codes.count("caution.unconfirmed_data") == 1
    assert "caution.laser" in codes


def test_a_tube_and_too_many_legs() -> None:
    done = run("check", str(BAY), "--target", "3/8", "--legs", "3", "--closed")
    assert "9/2,-5/2 -> 9/2,-9/2" in done.stdout
    assert "too weak to be used" in done.stdout and "instead: two links" in done.stdout
    done = run("check", str(BAY), "--target", "3/8", "--legs", "12")
    assert "12 legs asked for, but F = 9/2 has 10" in done.stdout
    assert done.returncode == 0


def test_files_without_light_print_what_they_printed(tmp_path: Path) -> None:
    text = "\n".join(
        line
        for line in BAY.read_text(encoding="utf-8").split("\n")
        if not line.startswith("waist_um")
    )
    file = tmp_path / "bay.toml"
    file.write_text(text, encoding="utf-8")
    done = run("check", str(file), "--target", "3/8")
    lines = done.stdout.split("\n")
    assert lines[8].startswith("  diagonal ratio")
    assert lines[9].startswith("caution: beams in the range")
    assert "light" not in json.loads(run("check", str(file), "--target", "3/8", "--json").stdout)
    assert fl.Apparatus.load(file).links() is None


def test_light_on_a_resonance_is_a_line() -> None:
    # Between the hyperfine states of the D1 line.
    done = run("check", str(BAY), "--target", "3/8", "--set", "lasers.raman.wavelength_nm=770.1083")
    assert done.returncode == 0 and done.stderr == ""
    assert "couplings left out: light at 770.1083 nm" in done.stdout
    assert "/s of lattice light" in done.stdout
    done = run(
        "check", str(BAY), "--target", "3/8", "--set", "lasers.lattice.wavelength_nm=770.1083"
    )
    assert "depth from power left out: light at 770.1083 nm" in done.stdout

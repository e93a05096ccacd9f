"""What a light report and changes of an apparatus tell, so that nobody is misled."""

import json
from pathlib import Path

import pytest
from test_apparatus_light import BAY, bay, run

import fluxloom as fl


def test_a_cloud_that_starts_in_the_middle_has_legs_on_both_sides() -> None:
    lab = fl.Apparatus.load(BAY).replace({"cloud.start": "7/2,1/2"})
    report = lab.links(legs=8)
    assert [str(leg.state) for leg in report.scattering_per_s][::7] == ["7/2,7/2", "7/2,-7/2"]
    assert len(report.links) == 7 and not report.remarks


def test_colours_that_no_modulator_brings_together_couple_nothing() -> None:
    text = Path(BAY).read_text(encoding="utf-8")
    text = text.replace(
        '[beams.raman_b]\nlaser = "raman"', '[beams.raman_b]\nlaser = "other"'
    ).replace("[beams.lattice]", "[lasers.other]\nwavelength_nm = 767.5\n\n[beams.lattice]", 1)
    report = fl.Apparatus.from_toml(text).links()
    assert all(link.rabi_hz is None for link in report.links)
    (remark,) = report.remarks
    # source: c/767.5 nm - c/769.0 nm = 761.9 GHz
    assert "differ by 761.9 GHz" in remark
    assert all(leg.raman_beams_per_s is not None for leg in report.scattering_per_s)


def test_light_beyond_the_listed_lines_is_a_caution_and_no_fault() -> None:
    lab = fl.Apparatus.load(BAY).replace(
        {"beams.lattice.max_power_mw": 5000.0, "lasers.lattice.wavelength_nm": 421.0}
    )
    codes = [caution.code for caution in lab.links().cautions]
    assert codes == ["caution.unlisted_lines", "caution.unconfirmed_data"]
    assert lab.links().beyond_lines_nm == (421.0,)
    # No depth of ours is right there, so a measured one is not refused.
    text = lab.to_toml().replace(
        "value = 6.0, standard_error = 0.06", "value = 9.0, standard_error = 0.06"
    )
    other = fl.Apparatus.from_toml(text)
    (caution,) = [c for c in other.cautions if c.code == "caution.depth_disagrees"]
    assert "the table lacks lines" in caution.text


def test_links_that_cannot_be_used_are_a_caution() -> None:
    lab = fl.Apparatus.load(BAY).replace({"beams.raman_b.polarisation_deg": 90.0})
    (caution,) = [c for c in lab.links().cautions if c.code == "caution.link_forbidden"]
    assert "9/2,-9/2 -> 9/2,-7/2" in caution.text


def test_what_is_assumed_is_told() -> None:
    text = Path(BAY).read_text(encoding="utf-8")
    assert fl.Apparatus.from_toml(text).links().assumed == ()
    plain = text.replace("{ value = 6.0, standard_error = 0.06 }", "6.0")
    plain = "\n".join(line for line in plain.splitlines() if not line.startswith("noise_rms_gauss"))
    report = fl.Apparatus.from_toml(plain).links()
    assert set(report.assumed) == {"lattice.depth_er.standard_error", "field.noise_rms_gauss"}
    assert report.table().count("(common practice)") == 2


def test_reports_must_make_sense() -> None:
    report = fl.Apparatus.load(BAY).links()
    for changes in ({"depth_er": -3.0}, {"field_rms_gauss": -5.0}):
        with pytest.raises(fl.InputError):
            fl.LightReport.from_json(json.dumps(json.loads(report.to_json()) | changes))


def test_texts_that_begin_with_a_digit_are_shown_in_quotes() -> None:
    done = run("check", str(BAY), "--target", "3/8", "--set", "cloud.atom=87Rb")
    assert done.returncode == 2
    assert "'cloud.atom=\"87Rb\"'" in done.stderr


def test_changes_tell_values_that_stood_somewhere() -> None:
    # Twice the waist and four times the power make the same depth.
    same = bay().replace({"beams.lattice.power_mw": 218.4, "beams.lattice.waist_um": 240.0})
    assert same["lattice.depth_er"] == pytest.approx(6.0, rel=1e-12)
    assert same.changes == ()
    other = bay().replace({"beams.lattice.power_mw": 109.2, "beams.lattice.waist_um": 240.0})
    (sentence,) = other.changes
    assert other["lattice.depth_er"] == pytest.approx(3.0, rel=1e-12)
    assert sentence == (
        "beams.lattice.power_mw 54.6 -> 109.2, beams.lattice.waist_um changed: "
        "lattice.depth_er moves, 6 -> 3"
    )
    # The depth is the cause where both it and something that hardly matters change.
    table = bay().to_dict()["beams"]["lattice"] | {"polarisation_deg": 0.0}
    both = bay().replace({"lattice.depth_er": 9.0, "beams.lattice": table})
    (sentence,) = both.changes
    assert sentence.startswith("lattice.depth_er 6 -> 9, beams.lattice.polarisation_deg changed")

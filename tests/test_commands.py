"""The command line, run as a user runs it."""

import errno
import io
import json
import os
import subprocess
import sys
from pathlib import Path

import pytest

from fluxloom.commands import main

BAY = str(Path(__file__).parent.parent / "notebooks-examples" / "tern_bay.toml")
NUMBERS = ["--lattice-nm", "1064", "--raman-nm", "769.0", "--depth-er", "6", "--sites", "60"]


def run(*arguments: str) -> subprocess.CompletedProcess[str]:
    return subprocess.run(
        [sys.executable, "-m", "fluxloom", *arguments], capture_output=True, text=True, check=False
    )


def answer(*arguments: str) -> tuple[int, dict]:
    done = run(*arguments, "--json")
    document = json.loads(done.stdout)
    assert (document["format"], document["version"]) == ("fluxloom-answer", 1)
    assert document["command"] == arguments[0]
    assert document["ok"] == (not document["faults"])
    return done.returncode, document


def test_an_apparatus_that_meets_its_target() -> None:
    done = run("check", BAY, "--target", "3/8")
    assert done.returncode == 0
    assert done.stdout.startswith("Meets 3/8: ")
    assert "laser safety officer" in done.stdout
    code, document = answer("check", BAY, "--target", "3/8")
    assert code == 0
    assert document["check"]["meets_target"] is True
    assert {caution["code"] for caution in document["cautions"]} >= {"caution.laser"}


def test_one_that_misses_it_says_what_to_change() -> None:
    done = run("check", BAY, "--target", "3/8", "--set", "raman.angle_deg=180")
    assert done.returncode == 1
    assert "tune to 773.818 nm instead of 769 nm" in done.stdout
    assert "stands outside raman.angle_range_deg" in done.stdout


def test_numbers_instead_of_a_file() -> None:
    code, document = answer("check", *NUMBERS, "--target", "3/8", "--angle-deg", "31.451")
    assert code == 0
    code, tube = answer(
        "check", *NUMBERS, "--target", "0.3125", "--legs", "4", "--closed",
        "--lattice-angle-deg", "120", "--tilt-deg", "3",
    )  # fmt: skip
    assert code == 1
    assert tube["check"]["closure_mismatch"] is not None
    assert document["check"]["closure_mismatch"] is None


def test_single_values_and_nothing_else() -> None:
    done = run("check", BAY, "--target", "3/8", "--value", "flux")
    assert float(done.stdout) == pytest.approx(0.375, abs=1e-6)
    assert run("check", BAY, "--target", "3/8", "--value", "meets_target").stdout == "true\n"
    done = run("check", BAY, "--target", "3/8", "--value", "fluks")
    assert (done.returncode, done.stdout) == (2, "")
    done = run("check", BAY, "--target", "3/8", "--value", "closure_mismatch")
    assert done.returncode == 2
    done = run("check", BAY, "--target", "3/8", "--value", "light.links.1.to")
    assert done.stdout == "9/2,-5/2\n"
    done = run("check", BAY, "--target", "3/8", "--value", "light.depth_from_power_er")
    assert float(done.stdout) == pytest.approx(6.0, abs=0.06)
    done = run("check", BAY, "--target", "3/8", "--value", "light.links.9.to")
    assert (done.returncode, done.stdout) == (2, "")
    assert "light.links.0.to" in done.stderr and "light.links.1.to" not in done.stderr
    done = run("check", BAY, "--target", "3/8", "--quiet")
    assert done.stdout.count("\n") == 1


def test_changes_that_move_other_settings_are_told(tmp_path: Path) -> None:
    code, document = answer("check", BAY, "--target", "3/8", "--set", "lattice.depth_er=9")
    assert code == 0
    assert "beams.lattice.power_mw" in document["changes"][0]
    text = Path(BAY).read_text(encoding="utf-8").replace("tilt_deg", "# tilt_deg")
    file = tmp_path / "bay.toml"
    file.write_text(text, encoding="utf-8")
    done = run("check", str(file), "--target", "3/8", "--set", "lattice.depth_er=9", "--verbose")
    assert "note: lattice.depth_er 6 -> 9" in done.stdout
    assert "default: raman.tilt_deg = 0.0 (" in done.stdout


@pytest.mark.parametrize(
    ("arguments", "code", "word"),
    [
        (["check", BAY], "command.usage", "--target"),
        (["check", "--target", "3/8"], "command.missing_option", "--lattice-nm"),
        (["check", BAY, *NUMBERS, "--target", "3/8"], "command.two_forms", "--lattice-nm"),
        (["check", BAY, "--target", "3/0"], "flux.zero_denominator", "3/0"),
        (["check", BAY, "--target", "3/8", "--set", "x"], "command.bad_set", "PATH=VALUE"),
        (
            ["check", BAY, "--target", "3/8", "--set", "lasers.ramen.wavelength_nm=1"],
            "apparatus.unknown_path",
            "lasers.raman.wavelength_nm",
        ),
        (["check", "missing.toml", "--target", "3/8"], "file.system", "missing.toml"),
        (
            ["check", *NUMBERS[2:], "--lattice-nm", "1064e-9", "--target", "1/3"],
            "light.wavelength_out_of_range",
            "--lattice-nm = 1.064e-6",
        ),
        (
            ["check", *NUMBERS[:-1], "1e13", "--target", "1/3"],
            "check.sites_out_of_range",
            "1e13",
        ),
        (["check", *NUMBERS[:-1], "sixty", "--target", "1/3"], "command.not_a_number", "sixty"),
        (["check", BAY, "--target", "3/8", "--set", "x.y=769,5"], "command.bad_set", "769.0"),
        (["check", BAY, "--target", "3/8", "--set", "name='a'\nb=1"], "command.bad_set", "several"),
        (
            ["check", BAY, "--target", "3/8", *(2 * ["--set", "field.noise_ppm=1"])],
            "command.set_twice",
            "field.noise_ppm",
        ),
        (["check", BAY, "--target", "3/8", "--threads", "0"], "threads.out_of_range", "1024"),
        (["check", BAY, "--target", "3/8", "--value", "flux"], "command.usage", "not allowed with"),
        (["check", BAY, "--target", "3/8", "--sit", "60"], "command.usage", "--sit"),
        (["check", BAY, "--target", "3/8", "--figure", "x.nonsense"], "command.bad_figure", ".png"),
        (
            ["check", BAY, "--target", "3/8", "--figure", "no such folder/x.png"],
            "file.system",
            "no such folder",
        ),
    ],
)
def test_bad_input(arguments: list[str], code: str, word: str) -> None:
    status, document = answer(*arguments)
    assert status == 2
    assert document["faults"][0]["code"] == code
    told = json.dumps(document["faults"])
    assert word in told
    if "--value" not in arguments:
        done = run(*arguments)
        assert (done.returncode, done.stdout) == (2, "")
        assert done.stderr.startswith("fluxloom: ")


def test_all_faults_of_a_file_with_their_lines(tmp_path: Path) -> None:
    text = Path(BAY).read_text(encoding="utf-8")
    text = text.replace("waist_um = 200.0", "waist_mm = 0.2", 1).replace('"40K"', '"40k"')
    file = tmp_path / "bay.toml"
    file.write_text(text, encoding="utf-8")
    status, document = answer("check", str(file), "--target", "3/8")
    assert status == 2
    assert document["ok"] is False
    by_code = {fault["code"]: fault for fault in document["faults"]}
    unknown = by_code["file.unknown_key"]
    assert (unknown["file"], unknown["did_you_mean"]) == ("bay.toml", "waist_um")
    assert text.split("\n")[unknown["line"] - 1].startswith("waist_mm")
    assert by_code["atom.unknown"]["did_you_mean"] == "40K"


def test_a_lattice_too_shallow_is_a_numerical_failure() -> None:
    arguments = ["check", *NUMBERS, "--target", "3/8", "--depth-er", "1e-4"]
    status, document = answer(*arguments)
    assert status == 3
    assert document["faults"][0]["code"] == "lattice.not_localised"


def test_pictures_are_written(tmp_path: Path) -> None:
    picture = tmp_path / "check.png"
    done = run("check", BAY, "--target", "3/8", "--figure", str(picture))
    assert done.returncode == 0
    assert picture.read_bytes().startswith(b"\x89PNG")
    done = run("check", BAY, "--target", "3/8", "--figure", str(tmp_path / "check.nonsense"))
    assert done.returncode == 2


def test_a_negative_flux_needs_no_trick() -> None:
    code, document = answer("check", *NUMBERS, "--angle-deg", "31.451", "--target", "-3/8")
    assert code == 0
    assert document["check"]["sense"] == -1


def test_no_text_or_terminal_makes_it_stumble(tmp_path: Path) -> None:
    environment = {**os.environ, "PYTHONIOENCODING": "ascii"}
    command = [sys.executable, "-m", "fluxloom", "check", BAY, "--json", "--target"]
    for target, status in [("3/8", 0), ("3\N{LATIN SMALL LETTER E WITH ACUTE}", 2)]:
        done = subprocess.run([*command, target], capture_output=True, env=environment, check=False)
        assert done.returncode == status
        assert json.loads(done.stdout)["command"] == "check"
    # Bytes that are no text at all, as a shell may pass them.
    done = subprocess.run([*command, b"3\xe9"], capture_output=True, check=False)
    assert done.returncode == 2
    assert json.loads(done.stdout)["faults"]


def test_a_full_disk_is_not_an_answer(monkeypatch: pytest.MonkeyPatch, capsys) -> None:
    class Full(io.StringIO):
        def write(self, text: str) -> int:
            raise OSError(errno.ENOSPC, "No space left on device")

    monkeypatch.setattr(sys, "stdout", Full())
    assert main(["check", BAY, "--target", "3/8"]) == 2
    assert "No space left" in capsys.readouterr().err
    assert main(["check", BAY, "--target", "3/8", "--json"]) == 2


def test_a_closed_terminal_still_gets_an_exit_code(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(sys, "stdout", None)
    assert main(["check", BAY, "--target", "3/8"]) == 0
    assert main(["check", BAY, "--target", "3/0", "--json"]) == 2


def test_a_fault_of_ours_is_not_the_answer_no(monkeypatch: pytest.MonkeyPatch, capsys) -> None:
    def broken(*_: object) -> None:
        raise RuntimeError("an internal computation failed")

    monkeypatch.setattr("fluxloom.commands.check", broken)
    assert main(["check", BAY, "--target", "3/8", "--json"]) == 3
    assert json.loads(capsys.readouterr().out)["faults"][0]["code"] == "command.failed"


def test_version() -> None:
    done = run("--version")
    assert done.returncode == 0
    assert done.stdout.startswith("fluxloom 0.")

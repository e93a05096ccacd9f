"""The command line.

Exit codes: 0 fine; 1 the answer is no; 2 bad input or file; 3 numerical
failure; 130 interrupted.  With ``--json`` stdout holds exactly one document,
whatever the exit code.
"""

import argparse
import errno
import json
import os
import sys
import tomllib
from collections.abc import Callable, Sequence
from typing import NoReturn, TypeVar

import fluxloom as fl
from fluxloom.answers import Answer, Form, Plain, refuse, show

__all__ = ["main"]

FINE, NO, BAD_INPUT, NUMERICAL, INTERRUPTED = 0, 1, 2, 3, 130

Made = TypeVar("Made")

#: Options that describe lattice and beams where no apparatus file does.
GEOMETRY = ("lattice_nm", "depth_er", "raman_nm", "angle_deg", "lattice_angle_deg", "tilt_deg")


class Parser(argparse.ArgumentParser):
    """A parser whose complaints are ordinary errors of the package."""

    def error(self, message: str) -> NoReturn:
        """Raise what argparse would print and exit with."""
        raise fl.InputError(f"{message}; see {self.prog} --help", "command.usage")


def main(arguments: Sequence[str]) -> int:
    """Run one command; returns its exit code."""
    wants_json = "--json" in arguments
    command = next((word for word in arguments if not word.startswith("-")), "")
    answer: Answer | None = None
    try:
        options = parser().parse_args(joined(arguments))
        if options.threads is not None:
            fl.set_threads(number(options.threads, "threads"))
        answer = check(options)
        show(answer, options.command, Form(options.json, options.value, options.quiet))
        return answer.code
    except fl.FluxloomError as error:
        code = {fl.InfeasibleError: NO, fl.NumericalError: NUMERICAL}.get(type(error), BAD_INPUT)
        return refuse(command, error, code, wants_json)
    except BrokenPipeError:
        # The reader of a pipe has left; there is nobody to tell, but the answer stands.
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
        return FINE if answer is None else answer.code
    except KeyboardInterrupt:
        stopped = fl.FluxloomError("stopped", "run.cancelled")
        return refuse(command, stopped, INTERRUPTED, wants_json)
    except (OSError, ImportError, MemoryError, UnicodeError) as error:
        return refuse(command, error, BAD_INPUT, wants_json)
    except Exception as error:
        # A fault of ours: it must not look like the answer "no".
        return refuse(command, error, NUMERICAL, wants_json)


def joined(arguments: Sequence[str]) -> list[str]:
    """Join ``--target -3/8`` into one word, which would be read as an option otherwise."""
    words: list[str] = []
    for word in arguments:
        if words and words[-1] == "--target" and word[:1] == "-" and word[1:2].isdigit():
            words[-1] = f"--target={word}"
        else:
            words.append(word)
    return words


def parser() -> Parser:
    """Build the parser of the whole command line."""
    top = Parser(
        prog="fluxloom",
        description="Check settings of a Raman-coupled optical lattice against a target flux.",
        allow_abbrev=False,
    )
    top.add_argument("--version", action="version", version=f"fluxloom {fl.__version__}")
    commands = top.add_subparsers(dest="command", required=True, metavar="COMMAND")
    judge = commands.add_parser(
        "check",
        help="judge a Raman wavelength against a target flux",
        description=(
            "Judge a Raman wavelength against a target flux: either of an apparatus file as it "
            "stands today, or of numbers given by options."
        ),
        epilog="Exit codes: 0 met, 1 missed, 2 bad input, 3 numerical failure, 130 interrupted.",
        allow_abbrev=False,
    )
    judge.add_argument("apparatus", nargs="?", metavar="APPARATUS.toml", help="apparatus file")
    judge.add_argument("--target", required=True, metavar="P/Q", help="flux, such as 3/8 or 0.375")
    judge.add_argument("--sites", metavar="N", help="sites that the atoms cover")
    judge.add_argument("--legs", metavar="N", help="number of legs")
    judge.add_argument("--closed", action="store_true", help="the last leg couples to the first")
    judge.add_argument("--phase-budget-rad", metavar="X", help="accepted phase error (0.5)")
    numbers = judge.add_argument_group("numbers instead of a file")
    numbers.add_argument("--lattice-nm", metavar="X", help="lattice wavelength")
    numbers.add_argument("--depth-er", metavar="X", help="lattice depth in recoils")
    numbers.add_argument("--lattice-angle-deg", metavar="X", help="angle of lattice beams (180)")
    numbers.add_argument("--raman-nm", metavar="X", help="Raman wavelength")
    numbers.add_argument("--angle-deg", metavar="X", help="angle of the Raman beams (180)")
    numbers.add_argument("--tilt-deg", metavar="X", help="tilt of their difference (0)")
    judge.add_argument("--figure", metavar="FILE", help="write the picture to this file")
    add_common(judge)
    return top


def add_common(command: argparse.ArgumentParser) -> None:
    """Add the options that every command has."""
    common = command.add_argument_group("common")
    common.add_argument(
        "--set",
        action="append",
        default=[],
        metavar="PATH=VALUE",
        help="change a setting of the apparatus file, by its path; may be repeated",
    )
    form = common.add_mutually_exclusive_group()
    form.add_argument("--json", action="store_true", help="print one JSON document")
    form.add_argument(
        "--value",
        metavar="KEY",
        help="print this number or text, nothing else: flux, or light.links.0.rabi_hz",
    )
    common.add_argument("--quiet", action="store_true", help="print the verdict only")
    common.add_argument(
        "--verbose", action="store_true", help="print defaults and their reasons too"
    )
    common.add_argument("--threads", metavar="N", help="number of threads")
    common.add_argument("--seed", type=int, default=0, metavar="N", help="seed of random draws")


def check(options: argparse.Namespace) -> Answer:
    """Carry out ``fluxloom check``."""
    if options.figure is not None:
        check_figure(options.figure)
    given = [name for name in GEOMETRY if getattr(options, name) is not None]
    if options.apparatus is None:
        found, answer = check_numbers(options)
    else:
        if given:
            names = ", ".join("--" + name.replace("_", "-") for name in given)
            raise fl.InputError(
                f"{names} given beside the file {options.apparatus}: change the file's settings "
                "with --set, or leave the file out",
                "command.two_forms",
            )
        found, answer = check_apparatus(options)
    answer.code = FINE if found.meets_target else NO
    answer.verdict = found.verdict
    table = found.table().rstrip("\n").split("\n")
    answer.lines = [*table, *answer.lines]
    answer.document["check"] = json.loads(found.to_json())
    if options.figure is not None:
        draw(found, options.figure)
        answer.notes.append(f"picture: {options.figure}")
    return answer


def check_apparatus(options: argparse.Namespace) -> tuple[fl.FluxCheck, Answer]:
    """Judge an apparatus file as it stands, with the changes of ``--set``."""
    apparatus = fl.Apparatus.load(options.apparatus)
    changes: dict[str, Plain] = {}
    for path, value in map(setting, options.set):
        if path in changes:
            raise fl.InputError(f"--set {path} is given twice: give it once", "command.set_twice")
        changes[path] = value
    if changes:
        apparatus = apparatus.replace(changes)
    found = apparatus.check(
        options.target,
        sites=count(options.sites, "sites"),
        legs=count(options.legs, "legs"),
        closed=options.closed,
        phase_budget_rad=number(options.phase_budget_rad, "phase-budget-rad", 0.5),
    )
    light = apparatus.links(legs=found.legs, closed=found.closed)
    cautions = list(apparatus.cautions)
    answer = Answer(FINE, {"changes": list(apparatus.changes)})
    if light is not None:
        cautions += light.cautions
        answer.document["light"] = json.loads(light.to_json())
        answer.lines += light.table().rstrip("\n").split("\n")
    answer.document["cautions"] = [
        {"code": caution.code, "text": caution.text} for caution in cautions
    ]
    answer.notes += [f"note: {change}" for change in apparatus.changes]
    answer.notes += [f"caution: {caution}" for caution in cautions]
    if options.verbose:
        defaults = apparatus.defaults()
        answer.document["defaults"] = {
            path: {"value": value, "reason": reason} for path, (value, reason) in defaults.items()
        }
        answer.lines += [
            f"default: {path} = {value} ({reason})" for path, (value, reason) in defaults.items()
        ]
    return found, answer


def check_numbers(options: argparse.Namespace) -> tuple[fl.FluxCheck, Answer]:
    """Judge a lattice and a Raman pair given by options."""
    needed = ("lattice_nm", "depth_er", "raman_nm", "sites")
    missing = [name for name in needed if getattr(options, name) is None]
    if missing:
        names = ", ".join("--" + name.replace("_", "-") for name in missing)
        raise fl.InputError(
            f"{names} missing: give an apparatus file, or all of --lattice-nm, --depth-er, "
            "--raman-nm and --sites",
            "command.missing_option",
        )
    if options.set:
        raise fl.InputError(
            "--set changes a setting of an apparatus file, and none is given: name the file, or "
            "give the numbers by their options",
            "command.set_without_file",
        )
    found = fl.check_flux(
        named(
            {"wavelength_nm": "--lattice-nm", "angle_deg": "--lattice-angle-deg"},
            lambda: fl.Lattice(
                wavelength_nm=number(options.lattice_nm, "lattice-nm"),
                depth_er=number(options.depth_er, "depth-er"),
                angle_deg=number(options.lattice_angle_deg, "lattice-angle-deg", 180.0),
            ),
        ),
        named(
            {"wavelength_nm": "--raman-nm"},
            lambda: fl.RamanPair(
                wavelength_nm=number(options.raman_nm, "raman-nm"),
                angle_deg=number(options.angle_deg, "angle-deg", 180.0),
                tilt_deg=number(options.tilt_deg, "tilt-deg", 0.0),
            ),
        ),
        options.target,
        sites=number(options.sites, "sites"),
        legs=count(options.legs, "legs"),
        closed=options.closed,
        phase_budget_rad=number(options.phase_budget_rad, "phase-budget-rad", 0.5),
    )
    return found, Answer(FINE, {"changes": [], "cautions": []})


def named(options: dict[str, str], build: Callable[[], Made]) -> Made:
    """Build an object; an error about a field names the option that gave it."""
    try:
        return build()
    except fl.InputError as error:
        name = str(error.details.get("field", ""))
        option = options.get(name, "--" + name.replace("_", "-"))
        message = str(error).replace(name, option) if name else str(error)
        raise fl.InputError(message, error.code, {**error.details, "field": option}) from error


def number(text: str | None, name: str, default: float = 0.0) -> float:
    """Read a number from an option; the library checks its range."""
    if text is None:
        return default
    try:
        return float(text)
    except ValueError:
        raise fl.InputError(
            f"--{name} {text} is not a number: write a plain number, such as 60 or 769.0; the "
            "unit is in the option's name",
            "command.not_a_number",
        ) from None


def count(text: str | None, name: str) -> float | None:
    """Read a count from an option; the library checks that it is whole and in range."""
    return None if text is None else number(text, name)


def setting(text: str) -> tuple[str, Plain]:
    """Read ``PATH=VALUE``; the value as in TOML, or else a plain text."""
    path, equals, value = text.partition("=")
    if not equals or not path.strip():
        raise fl.InputError(
            f"--set {text} is not PATH=VALUE: write, for example, "
            "--set lasers.raman.wavelength_nm=769.1",
            "command.bad_set",
        )
    value = value.strip()
    try:
        read = tomllib.loads(f"value = {value}")
    except tomllib.TOMLDecodeError as problem:
        # A bare word is a text; what begins like a number, list or table is a slip.
        if value[:1] in tuple("+-.0123456789[{\"'"):
            raise fl.InputError(
                f"--set {path.strip()}={value} cannot be read ({problem}): write numbers as 769.0, "
                "lists as [766.0, 775.0], tables as {value = 6.0, standard_error = 0.05}, and "
                f"texts that begin with a digit in double quotes, '{path.strip()}=\"87Rb\"'",
                "command.bad_set",
            ) from None
        read = {"value": {"True": True, "False": False}.get(value, value)}
    if list(read) != ["value"]:
        raise fl.InputError(
            f"--set {path.strip()}={value} holds several settings: give each its own --set",
            "command.bad_set",
        )
    return path.strip(), read["value"]


def check_figure(path: str) -> None:
    """Refuse a name that no picture can be written to, before any work is done."""
    try:
        from matplotlib.figure import Figure
    except ImportError as problem:
        raise ImportError(
            f'--figure needs matplotlib ({problem}): pip install "fluxloom[plots]"'
        ) from problem
    ending = os.path.splitext(path)[1].lower().removeprefix(".")
    known = sorted(Figure().canvas.get_supported_filetypes())
    if ending not in known:
        raise fl.InputError(
            f"--figure {path} does not end in the name of a picture format: "
            + ", ".join(f".{name}" for name in known),
            "command.bad_figure",
        )
    folder = os.path.dirname(path) or "."
    if not os.path.isdir(folder):
        raise FileNotFoundError(errno.ENOENT, "No such folder for --figure", folder)


def draw(found: fl.FluxCheck, path: str) -> None:
    """Write the picture of a check to a file."""
    from matplotlib.figure import Figure

    figure = Figure(figsize=(8.0, 5.0), layout="constrained")
    found.plot(figure.add_subplot())
    figure.savefig(path, dpi=150)

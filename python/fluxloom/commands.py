"""The command line.

Exit codes: 0 fine; 1 the answer is no; 2 bad input or file; 3 numerical
failure; 130 interrupted.  With ``--json`` stdout holds exactly one document,
whatever the exit code.
"""

import argparse
import json
import os
import sys
import tomllib
from collections.abc import Callable, Sequence
from dataclasses import dataclass, field
from typing import NoReturn, TextIO, TypeVar

import fluxloom as fl

__all__ = ["main"]

FINE, NO, BAD_INPUT, NUMERICAL, INTERRUPTED = 0, 1, 2, 3, 130

#: What may stand in an answer.
Plain = str | int | float | bool | None | list["Plain"] | dict[str, "Plain"]

Made = TypeVar("Made")

#: Options that describe lattice and beams where no apparatus file does.
GEOMETRY = ("lattice_nm", "depth_er", "raman_nm", "angle_deg", "lattice_angle_deg", "tilt_deg")


@dataclass
class Answer:
    """What a command found: an exit code, a document, and lines for a person."""

    code: int
    document: dict[str, Plain]
    verdict: str = ""
    lines: list[str] = field(default_factory=list)
    notes: list[str] = field(default_factory=list)


class Parser(argparse.ArgumentParser):
    """A parser whose complaints are ordinary errors of the package."""

    def error(self, message: str) -> NoReturn:
        """Raise what argparse would print and exit with."""
        raise fl.InputError(f"{message}; see {self.prog} --help", "command.usage")


def main(arguments: Sequence[str]) -> int:
    """Run one command; returns its exit code."""
    wants_json = "--json" in arguments
    command = next((word for word in arguments if not word.startswith("-")), "")
    try:
        options = parser().parse_args(arguments)
        if options.threads is not None:
            fl.set_threads(options.threads)
        answer = check(options)
        show(answer, options, sys.stdout)
        sys.stdout.flush()
        return answer.code
    except fl.FluxloomError as error:
        code = {fl.InfeasibleError: NO, fl.NumericalError: NUMERICAL}.get(type(error), BAD_INPUT)
        return refuse(command, error, code, wants_json)
    except BrokenPipeError:
        # The reader of a pipe has left; there is nobody to tell.
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
        return FINE
    except (OSError, ImportError, MemoryError) as error:
        return refuse(command, error, BAD_INPUT, wants_json)
    except KeyboardInterrupt:
        return refuse(
            command, fl.FluxloomError("stopped", "run.cancelled"), INTERRUPTED, wants_json
        )


def parser() -> Parser:
    """Build the parser of the whole command line."""
    top = Parser(
        prog="fluxloom",
        description="Check settings of a Raman-coupled optical lattice against a target flux.",
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
    common.add_argument("--json", action="store_true", help="print one JSON document")
    common.add_argument("--value", metavar="KEY", help="print this number or text, nothing else")
    common.add_argument("--quiet", action="store_true", help="print the verdict only")
    common.add_argument(
        "--verbose", action="store_true", help="print defaults and their reasons too"
    )
    common.add_argument("--threads", type=int, metavar="N", help="number of threads")
    common.add_argument("--seed", type=int, default=0, metavar="N", help="seed of random draws")


def check(options: argparse.Namespace) -> Answer:
    """Carry out ``fluxloom check``."""
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
    changes = dict(setting(text) for text in options.set)
    if changes:
        apparatus = apparatus.replace(changes)
    found = apparatus.check(
        options.target,
        sites=count(options.sites, "sites"),
        legs=count(options.legs, "legs"),
        closed=options.closed,
        phase_budget_rad=number(options.phase_budget_rad, "phase-budget-rad", 0.5),
    )
    answer = Answer(FINE, {"changes": list(apparatus.changes)})
    answer.document["cautions"] = [
        {"code": caution.code, "text": caution.text} for caution in apparatus.cautions
    ]
    answer.notes += [f"moved too: {change}" for change in apparatus.changes]
    answer.notes += [f"caution: {caution}" for caution in apparatus.cautions]
    if options.verbose:
        answer.lines += [
            f"default: {path} = {value} ({reason})"
            for path, (value, reason) in apparatus.defaults().items()
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
        raise fl.InputError(f"--{name} {text} is not a number", "command.not_a_number") from None


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
    try:
        return path.strip(), tomllib.loads(f"value = {value}")["value"]
    except tomllib.TOMLDecodeError:
        return path.strip(), value.strip()


def draw(found: fl.FluxCheck, path: str) -> None:
    """Write the picture of a check to a file."""
    from matplotlib.figure import Figure

    figure = Figure(figsize=(8.0, 5.0), layout="constrained")
    found.plot(figure.add_subplot())
    try:
        figure.savefig(path, dpi=150)
    except ValueError as problem:
        raise fl.InputError(f"--figure {path}: {problem}", "command.bad_figure") from problem


def show(answer: Answer, options: argparse.Namespace, out: TextIO) -> None:
    """Print an answer in the form that was asked for."""
    if options.value is not None:
        print(single(answer.document["check"], options.value), file=out)
    elif options.json:
        document = {"command": options.command, "ok": True, **answer.document, "faults": []}
        print(dump(document), file=out)
    elif options.quiet:
        print(answer.verdict, file=out)
    else:
        print("\n".join([answer.verdict, *answer.lines, *answer.notes]), file=out)


def single(found: Plain, key: str) -> str:
    """Return one number or text of a check as it is to be printed."""
    table = found if isinstance(found, dict) else {}
    known = [name for name, value in table.items() if not isinstance(value, (dict, list))]
    if key not in known:
        raise fl.InputError(
            f"--value {key} is not a number or text of this answer; there are " + ", ".join(known),
            "command.unknown_value",
        )
    value = table[key]
    if value is None:
        raise fl.InputError(f"--value {key}: this answer has none", "command.no_value")
    return value if isinstance(value, str) else json.dumps(value)


def dump(document: dict[str, Plain]) -> str:
    """Return the text of an answer; NaN never gets into it."""
    head: dict[str, Plain] = {"format": "fluxloom-answer", "version": 1}
    return json.dumps({**head, **document}, indent=1, allow_nan=False, ensure_ascii=False)


def refuse(command: str, error: BaseException, code: int, wants_json: bool) -> int:
    """Report an error, on stderr or as the one document, and return the exit code."""
    message = str(error)
    faults: tuple[fl.Fault, ...] = ()
    kind = "file.system" if isinstance(error, OSError) else "command.failed"
    if isinstance(error, fl.FluxloomError):
        faults, kind = error.faults, error.code
    if wants_json:
        listed: list[Plain] = [dict(fault) for fault in faults or (fl.Fault(kind, message),)]
        print(dump({"command": command, "ok": False, "faults": listed}), flush=True)
    else:
        print(f"fluxloom: {message}", file=sys.stderr)
    return code

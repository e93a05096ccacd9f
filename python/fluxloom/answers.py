"""What the command line prints: answers and refusals, for people and for programs.

With ``--json`` stdout holds exactly one document, whatever the exit code.
"""

import contextlib
import json
import re
import sys
from collections.abc import Iterable, Iterator, Mapping, Sequence
from dataclasses import dataclass, field
from typing import NamedTuple

import fluxloom as fl

__all__ = ["Answer", "Form", "Plain", "refuse", "show"]

#: What may stand in an answer.
Plain = str | int | float | bool | None | Sequence["Plain"] | Mapping[str, "Plain"]


class Form(NamedTuple):
    """How an answer is to be printed."""

    json: bool
    value: str | None
    quiet: bool


@dataclass
class Answer:
    """What a command found: an exit code, a document, and lines for a person."""

    code: int
    document: dict[str, Plain]
    verdict: str = ""
    lines: list[str] = field(default_factory=list)
    notes: list[str] = field(default_factory=list)


def show(answer: Answer, command: str, form: Form) -> None:
    """Print an answer on stdout, if there is one, in the form that was asked for."""
    if form.value is not None:
        text = single(answer.document, command, form.value)
    elif form.json:
        text = dump({"command": command, "ok": True, **answer.document, "faults": []})
    elif form.quiet:
        text = answer.verdict
    else:
        text = "\n".join([answer.verdict, *answer.lines, *answer.notes])
    if sys.stdout is not None:
        print(text, flush=True)


def single(document: dict[str, Plain], command: str, key: str) -> str:
    """Return one number or text of an answer as it is to be printed.

    What the command found has plain names; what stands in further tables is
    reached with points and places: ``light.links.0.rabi_hz``.
    """
    found = document[command]
    further = {name: value for name, value in document.items() if isinstance(value, dict)}
    further.pop(command, None)
    known = dict(leaves(found, deep=False)) | dict(leaves(further))
    if key not in known:
        # Of a list the first entry shows what all have.
        shown = [name for name in known if not re.search(r"\.[1-9]\d*\b", name)]
        raise fl.InputError(
            f"--value {key} is not a number or text of this answer; there are " + ", ".join(shown),
            "command.unknown_value",
        )
    value = known[key]
    if value is None:
        raise fl.InputError(f"--value {key}: this answer has none", "command.no_value")
    return value if isinstance(value, str) else json.dumps(value)


def leaves(node: Plain, place: str = "", *, deep: bool = True) -> Iterator[tuple[str, Plain]]:
    """Yield every number and text below a table, or directly in it, with its place."""
    inner: Iterable[tuple[object, Plain]]
    if isinstance(node, dict):
        inner = node.items()
    elif isinstance(node, list):
        inner = enumerate(node)
    else:
        yield place, node
        return
    for name, value in inner:
        if deep or not isinstance(value, (dict, list)):
            yield from leaves(value, f"{place}.{name}".lstrip("."), deep=deep)


def dump(document: dict[str, Plain]) -> str:
    """Return the text of an answer: NaN never gets into it, and any terminal can print it."""
    head: dict[str, Plain] = {"format": "fluxloom-answer", "version": 1}
    return json.dumps({**head, **document}, indent=1, allow_nan=False)


def refuse(command: str, error: BaseException, code: int, wants_json: bool) -> int:
    """Report an error, on stderr or as the one document, and return the exit code."""
    message = str(error) or type(error).__name__
    faults: tuple[fl.Fault, ...] = ()
    kind = "file.system" if isinstance(error, OSError) else "command.failed"
    if isinstance(error, fl.FluxloomError):
        faults, kind = error.faults, error.code
    # stdout or stderr may be closed or full; the exit code still tells.
    with contextlib.suppress(OSError, AttributeError):
        if wants_json and sys.stdout is not None:
            listed: list[Plain] = [dict(fault) for fault in faults or (fl.Fault(kind, message),)]
            print(dump({"command": command, "ok": False, "faults": listed}), flush=True)
        elif sys.stderr is not None:
            text = message.encode("utf-8", "backslashreplace").decode("utf-8")
            print(f"fluxloom: {text}", file=sys.stderr, flush=True)
    return code

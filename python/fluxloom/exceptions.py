"""The exceptions of Fluxloom, all below :class:`FluxloomError`.

Every one carries a stable ``code`` such as ``"lattice.depth_out_of_range"``,
``details`` (the numbers behind the message, by name) and ``faults`` (one entry
per fault of the input, each with its place).
"""

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass
from typing import Self

__all__ = [
    "Fault",
    "FluxloomError",
    "FluxloomWarning",
    "InfeasibleError",
    "InputError",
    "NumericalError",
]


@dataclass(frozen=True)
class Fault:
    """One fault of an input; ``fault.code`` and ``fault["code"]`` are the same.

    Attributes
    ----------
    code : str
        Stable code, such as ``"file.unknown_key"``.
    message : str
        What was found, what is allowed, what to do.
    file : str or None
        Name of the file, if the input came from one.
    line : int or None
        Line in the file, counted from 1.
    path : str
        Path of the setting; empty for the whole input.
    did_you_mean : str or None
        The name that was probably meant.
    """

    code: str
    message: str
    file: str | None = None
    line: int | None = None
    path: str = ""
    did_you_mean: str | None = None

    def keys(self) -> Iterator[str]:
        """Names of the attributes, so that ``dict(fault)`` works."""
        return iter(("code", "file", "line", "path", "message", "did_you_mean"))

    def __getitem__(self, key: str) -> str | int | None:
        if key not in set(self.keys()):
            raise KeyError(key)
        value: str | int | None = getattr(self, key)
        return value


class FluxloomError(Exception):
    """Root of all errors that Fluxloom raises by itself.

    Attributes
    ----------
    code : str
        Stable code of the error; for several faults that of the first.
    details : dict
        The numbers and texts behind the message, by name.
    faults : tuple of Fault
        Every fault of the input, each with its place.
    """

    code: str
    details: dict[str, float | str]
    faults: tuple[Fault, ...]

    def __init__(
        self,
        message: str = "",
        code: str = "",
        details: Mapping[str, float | str] | None = None,
        faults: Sequence[Fault] = (),
    ) -> None:
        super().__init__(message)
        self.code = code
        self.details = dict(details or {})
        self.faults = tuple(faults)

    def __reduce__(self) -> tuple[type[Self], tuple[object, ...]]:
        return type(self), (str(self), self.code, self.details, self.faults)


class InputError(FluxloomError, ValueError):
    """The input makes no sense by itself: a value, a name, the text of a file."""


class InfeasibleError(FluxloomError):
    """No settings can reach what was asked: names the limits that bind."""


class NumericalError(FluxloomError, ArithmeticError):
    """A computation could not reach its accuracy."""


class FluxloomWarning(UserWarning):
    """Something a careful reader would want to know about a result."""

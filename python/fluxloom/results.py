"""Small results that are natural in Python: states, and values with their errors."""

import json
from dataclasses import dataclass
from os import PathLike
from pathlib import Path
from typing import Any, Generic, NamedTuple, Self, TypeVar

from fluxloom.exceptions import Fault, InputError

__all__ = ["CouplingError", "State", "Uncertain"]

_FORMAT = "fluxloom-uncertain"
_Value = TypeVar("_Value")
_Error = TypeVar("_Error")


class State(NamedTuple):
    """One hyperfine state; it equals the tuple ``(f, m)``.

    Attributes
    ----------
    f : float
        Total angular momentum F.
    m : float
        Its component along the field.

    Examples
    --------
    >>> import fluxloom as fl
    >>> state = fl.State(4.5, -3.5)
    >>> state == (4.5, -3.5), str(state)
    (True, '9/2,-7/2')
    """

    f: float
    m: float

    def __str__(self) -> str:
        return f"{_halves(self.f)},{_halves(self.m)}"


def _halves(number: float) -> str:
    return f"{number:g}" if number == int(number) else f"{2 * number:g}/2"


@dataclass(frozen=True)
class CouplingError:
    """Standard errors of a coupling's sizes.

    Attributes
    ----------
    rabi_hz : float
        Of ``abs(rabi_hz)``.
    effective_rabi_hz : float
        Of ``abs(effective_rabi_hz)``.
    """

    rabi_hz: float
    effective_rabi_hz: float


@dataclass(frozen=True, repr=False)
class Uncertain(Generic[_Value, _Error]):
    """A result with the standard error that it inherits from the atomic data.

    Everything that can be asked of the value can be asked of this, too.

    Attributes
    ----------
    value : float, complex, Polarisability, Scattering or Coupling
        What is returned without ``uncertainty=True``.
    standard_error : float, Polarisability, Scattering or CouplingError
        A number for a number, else an object with the same fields. Of a complex
        number it is the error of the size.
    unconfirmed : tuple of str
        Names of the numbers behind the result that no source confirms.
    """

    value: _Value
    standard_error: _Error
    unconfirmed: tuple[str, ...] = ()

    def __getattr__(self, name: str) -> Any:
        # Not for names of our own, which are missing only while unpickling.
        if name.startswith("_") or name in {"value", "standard_error", "unconfirmed"}:
            raise AttributeError(name)
        return getattr(self.value, name)

    def __repr__(self) -> str:
        return f"<Uncertain {self.value!r} +- {self.standard_error!r}>"

    def to_json(self) -> str:
        """Write the object as a JSON text."""
        return json.dumps(
            {
                "format": _FORMAT,
                "version": 1,
                "value": _plain(self.value),
                "standard_error": _plain(self.standard_error),
                "unconfirmed": list(self.unconfirmed),
            },
            allow_nan=False,
        )

    @classmethod
    def from_json(cls, text: str) -> Self:
        """Read the object from a JSON text; numbers come back bit for bit."""
        if not isinstance(text, str):
            raise TypeError(f"text must be a text, not {type(text).__name__}")
        try:
            read = dict(json.loads(text))
            head = (read.pop("format"), read.pop("version"))
            value, error = _object(read.pop("value")), _object(read.pop("standard_error"))
            unconfirmed = tuple(str(name) for name in read.pop("unconfirmed"))
        except (ValueError, KeyError, TypeError, AttributeError, RecursionError) as problem:
            raise _unreadable(f"not an uncertain result: {problem}") from None
        if head != (_FORMAT, 1) or read:
            raise _unreadable(f"not an uncertain result of version 1: found {head}, {sorted(read)}")
        return cls(value, error, unconfirmed)

    def save(self, path: str | PathLike[str]) -> None:
        """Write the JSON text to a file."""
        Path(path).write_text(self.to_json(), encoding="utf-8")

    @classmethod
    def load(cls, path: str | PathLike[str]) -> Self:
        """Read the object from a file that ``save`` wrote."""
        return cls.from_json(Path(path).read_text(encoding="utf-8"))


def _unreadable(message: str) -> InputError:
    return InputError(message, "file.not_valid", faults=[Fault("file.not_valid", message)])


def _plain(value: Any) -> Any:
    if isinstance(value, complex):
        return {"re": value.real, "im": value.imag}
    if isinstance(value, CouplingError):
        return {"rabi_hz": value.rabi_hz, "effective_rabi_hz": value.effective_rabi_hz}
    return value if isinstance(value, float) else json.loads(value.to_json())


def _object(read: Any) -> Any:
    from fluxloom import _core

    if isinstance(read, dict) and set(read) == {"re", "im"}:
        return complex(read["re"], read["im"])
    if isinstance(read, dict) and set(read) == {"rabi_hz", "effective_rabi_hz"}:
        return CouplingError(**read)
    kinds: dict[str, Any] = {
        "fluxloom-polarisabilities": _core.Polarisability,
        "fluxloom-scattering": _core.Scattering,
        "fluxloom-coupling": _core.Coupling,
    }
    if isinstance(read, dict):
        return kinds[read["format"]].from_json(json.dumps(read))
    return float(read)

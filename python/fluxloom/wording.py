"""Numbers as a physicist writes them, for tables and pictures."""

import math

__all__ = [
    "rad",
    "scientific",
    "signed_sum",
    "spread",
    "target",
    "to_tolerance",
    "two_digits",
    "with_minus",
]

MINUS = "\N{MINUS SIGN}"
PLUS_MINUS = "\N{PLUS-MINUS SIGN}"
_RAISED = str.maketrans("-0123456789", "⁻⁰¹²³⁴⁵⁶⁷⁸⁹")


def to_tolerance(value: float, tolerance: float) -> str:
    """Write a number with as many decimals as its tolerance deserves.

    Two decimals beyond the first digit of the tolerance, so that rounding never
    uses the tolerance up.

    Examples
    --------
    >>> from fluxloom.wording import to_tolerance
    >>> to_tolerance(0.375, 0.00135)
    '0.37500'
    """
    decimals = min(max(2 - math.floor(math.log10(tolerance)), 0), 9)
    return with_minus(f"{value:.{decimals}f}")


def two_digits(value: float) -> str:
    """Write a tolerance with two significant digits, which never come out as zero."""
    if value == 0.0:
        return "0"
    # Rounding first: 0.0996 has its first digit where 0.10 has it.
    value = float(f"{value:.1e}")
    place = math.floor(math.log10(abs(value)))
    if -5 <= place <= 7:
        return with_minus(f"{value:.{max(1 - place, 0)}f}")
    return scientific(f"{value:.1e}")


def spread(value: float, tolerance: float, unit: str) -> str:
    """Write a setting with its tolerance, as in the verdict: ``773.818 ± 0.76 nm``."""
    text = to_tolerance(value, tolerance)
    text = text.rstrip("0").rstrip(".") if "." in text else text
    return f"{text} {PLUS_MINUS} {two_digits(tolerance)} {unit}"


def rad(value: float) -> str:
    """Write a phase in radians with three significant digits."""
    if value != 0.0 and not 1e-3 <= abs(value) < 1e4:
        return scientific(f"{value:.1e}") + " rad"
    decimals = 3 if abs(value) < 1.0 else 2 if abs(value) < 100.0 else 0
    return with_minus(f"{value:.{decimals}f} rad")


def scientific(text: str) -> str:
    """Write ``-3.6e-07`` as one writes it by hand."""
    digits, _, power = text.partition("e")
    if not power or int(power) == 0:
        return with_minus(digits)
    times = "\N{MULTIPLICATION SIGN}"
    return f"{with_minus(digits)} {times} 10{str(int(power)).translate(_RAISED)}"


def target(flux: object) -> str:
    """Write a target flux, a fraction or a float."""
    return with_minus(f"{flux:.6g}" if isinstance(flux, float) else str(flux))


def signed_sum(branch: int, sense: int, flux: object) -> str:
    """Write a branch and a target as one reads them: ``1 + 3/8``."""
    text = target(flux)
    if text.startswith(MINUS):
        text, sense = text[1:], -sense
    return f"{with_minus(str(branch))} {'+' if sense > 0 else MINUS} {text}"


def with_minus(text: str) -> str:
    """Put minus signs where a number has hyphens."""
    return text.replace("-", MINUS)

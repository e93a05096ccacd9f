"""Directions, rotations and polarisation vectors."""

import numpy as np
from numpy.typing import ArrayLike, NDArray

Array = NDArray[np.float64]
Vector = NDArray[np.complex128]


def unit(vector: ArrayLike) -> Vector:
    found = np.asarray(vector, dtype=complex)
    return found / np.linalg.norm(found)


def rotation(axis: ArrayLike, angle_rad: float) -> Array:
    """Turns by the right-hand rule about an axis."""
    x, y, z = unit(axis).real
    turn = np.array([[0, -z, y], [z, 0, -x], [-y, x, 0]])
    return np.eye(3) + np.sin(angle_rad) * turn + (1 - np.cos(angle_rad)) * turn @ turn


def to_field_frame(direction: ArrayLike) -> Array:
    """Rows are right-handed axes whose third lies along the field; the identity for z."""
    z = unit(direction).real
    side = np.cross([0.0, 0.0, 1.0], z)
    sine = float(np.linalg.norm(side))
    if sine < 1e-15:
        return np.eye(3) if z[2] > 0 else np.diag([1.0, -1.0, -1.0])
    return rotation(side, float(np.arctan2(sine, z[2]))).T


def random_direction(random: np.random.Generator) -> Array:
    return unit(random.normal(size=3)).real


def random_transverse(random: np.random.Generator, direction: ArrayLike) -> Vector:
    """An elliptical polarisation at a right angle to a direction, of any phase."""
    along = unit(direction).real
    raw = random.normal(size=3) + 1j * random.normal(size=3)
    return unit(raw - (raw @ along) * along)

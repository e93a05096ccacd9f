"""Polarisation vectors as Python has them."""

import math
from collections.abc import Callable
from decimal import Decimal
from fractions import Fraction

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

import fluxloom as fl

X, Z = (1, 0, 0), (0, 0, 1)
HALF = math.sqrt(0.5)


def test_circular_light_along_z_is_sigma_about_z() -> None:
    # source: the agreed convention, -i(u* x u)_z = +1 for sigma+ about z.
    plus, minus = (fl.polarisation.circular(Z, sign) for sign in (+1, -1))
    np.testing.assert_allclose(plus, [HALF, 1j * HALF, 0], rtol=0, atol=1e-15)
    np.testing.assert_array_equal(minus, plus.conj())
    for u, sign in [(plus, 1), (minus, -1), (fl.polarisation.circular((0, 0, -2), -1), 1)]:
        spin = -1j * np.cross(u.conj(), u)
        np.testing.assert_allclose(spin, [0, 0, sign], rtol=0, atol=1e-15)


@given(
    st.tuples(*[st.floats(-1.0, 1.0)] * 3),
    st.tuples(*[st.floats(-1.0, 1.0)] * 3),
    st.floats(-45.0, 45.0),
)
def test_vectors_are_of_unit_length_and_lie_across(
    direction: tuple[float, ...], along: tuple[float, ...], chi: float
) -> None:
    try:
        u = fl.polarisation.elliptical(direction, along, chi)
    except fl.InputError as error:
        assert error.code in {"geometry.no_direction", "polarisation.parallel"}
        return
    k = np.array(direction) / max(map(abs, direction))
    k /= np.linalg.norm(k)
    assert np.vdot(u, u).real == pytest.approx(1.0, abs=2e-15)
    assert abs(k @ u) < 2e-15
    helicity = (-1j * np.cross(u.conj(), u) @ k).real
    assert helicity == pytest.approx(math.sin(math.radians(2 * chi)), abs=4e-15)
    # What they make is taken by a beam, and comes back the same.
    beam = fl.Beam(wavelength_nm=1064, power_mw=1, waist_um=50, direction=direction, polarisation=u)
    assert beam.polarisation == tuple(u.tolist())


def test_vectors_are_closed_arrays() -> None:
    for u in (
        fl.polarisation.linear(X, Z),
        fl.polarisation.circular(direction=np.array(X), helicity=np.int8(-1)),
        fl.polarisation.elliptical(
            [1, 0, 0], along=(0, Fraction(1), Decimal(2)), ellipticity_deg=9
        ),
    ):
        assert (u.dtype, u.shape, u.flags.writeable) == (np.complex128, (3,), False)
    assert fl.polarisation.linear(X, Z).tolist() == [0, 0, 1]
    assert fl.polarisation.elliptical(X, Z, 0).tolist() == fl.polarisation.linear(X, Z).tolist()


@pytest.mark.parametrize(
    ("call", "code", "message"),
    [
        (
            lambda: fl.polarisation.linear(Z, (0, 0, -3)),
            "polarisation.parallel",
            "along = [0, 0, -3] is parallel to direction = [0, 0, 1]: light has no field along "
            "its own direction, so give a vector across it",
        ),
        (
            lambda: fl.polarisation.linear((0, 0, 0), X),
            "geometry.no_direction",
            "direction = [0, 0, 0] has no direction: give three finite numbers that are not all "
            "zero",
        ),
        (
            lambda: fl.polarisation.circular(Z, 0),
            "polarisation.bad_helicity",
            "helicity = 0 is neither 1 nor -1: give 1 for angular momentum along direction, -1 "
            "for the opposite; between the two the light is elliptical",
        ),
        (
            lambda: fl.polarisation.elliptical(Z, X, -45.001),
            "polarisation.ellipticity_out_of_range",
            "ellipticity_deg = -45.001 is outside -45 <= ellipticity_deg <= 45; 0 is linear, "
            "+-45 circular; turn the long axis instead of going beyond",
        ),
    ],
)
def test_polarisations_that_cannot_be(call: Callable[[], object], code: str, message: str) -> None:
    with pytest.raises(fl.InputError) as caught:
        call()
    assert (caught.value.code, str(caught.value)) == (code, message)


@pytest.mark.parametrize("wrong", [None, True, "1", 1j, [1]])
def test_helicities_of_the_wrong_type(wrong: object) -> None:
    with pytest.raises(TypeError, match=r"^helicity must be a number"):
        fl.polarisation.circular(Z, wrong)

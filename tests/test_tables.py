"""Tables of levels and of curves over wavelengths."""

import math
import sys

import numpy as np
import pytest
from test_displays import Page

import fluxloom as fl
from fluxloom import tables

ISOTOPES = fl.Atom.available()


def levels(name: str = "40K", field_gauss: float = 30.0) -> fl.GroundLevels:
    return fl.Atom(name).ground_levels(field_gauss)


def quality(range_nm: tuple[float, float] = (766.0, 775.0), points: int = 91) -> fl.Quality:
    beams = [
        fl.Beam(
            wavelength_nm=769.0,
            power_mw=0.3,
            waist_um=200.0,
            direction=direction,
            polarisation=fl.polarisation.linear(direction, along),
        )
        for direction, along in [((0.27, 0.96, 0), (0, 0, 1)), ((-0.27, 0.96, 0), (1, 0, 0))]
    ]
    pair = fl.RamanPair.from_beams(absorb=beams[0], emit=beams[1])
    return pair.quality(
        fl.Atom("40K"),
        "9/2,-9/2",
        "9/2,-7/2",
        range_nm=range_nm,
        field_gauss=30.0,
        points=points,
    )


@pytest.mark.parametrize("field_gauss", [0.0, 30.0, 2000.0])
@pytest.mark.parametrize("name", ISOTOPES)
def test_levels_as_pandas(name: str, field_gauss: float) -> None:
    found = levels(name, field_gauss)
    frame = found.to_pandas()
    assert frame.equals(tables.levels_to_pandas(found))
    assert list(frame.columns) == [
        "f",
        "m",
        "energy_hz",
        "moment_hz_per_gauss",
        "curvature_hz_per_gauss2",
    ]
    assert set(frame.dtypes) == {np.dtype(np.float64)}
    spin = fl.Atom(name).nuclear_spin
    ground = 0.0 if name in ("87Sr", "171Yb", "173Yb") else 0.5
    assert len(frame) == round((2 * spin + 1) * (2 * ground + 1))
    assert not frame.duplicated(["f", "m"]).any()
    for row in frame.itertuples():
        assert row.energy_hz == found.energy_hz(row.f, row.m)
        assert row.moment_hz_per_gauss == found.moment_hz_per_gauss(row.f, row.m)
        assert row.curvature_hz_per_gauss2 == found.curvature_hz_per_gauss2(row.f, row.m)


def test_the_slopes_of_the_frame_are_those_of_its_energies() -> None:
    # Central differences over 0.1 G, which leave out the fourth derivative.
    low, mid, high = (levels("87Rb", x).to_pandas() for x in (29.9, 30.0, 30.1))
    rise = (high["energy_hz"] - low["energy_hz"]) / 0.2
    bend = (high["energy_hz"] + low["energy_hz"] - 2 * mid["energy_hz"]) / 0.01
    np.testing.assert_allclose(mid["moment_hz_per_gauss"], rise, rtol=1e-6, atol=1.0)
    np.testing.assert_allclose(mid["curvature_hz_per_gauss2"], bend, rtol=1e-3, atol=0.5)


def test_the_frame_is_a_copy() -> None:
    found = levels()
    frame = found.to_pandas()
    before = found.energies_hz.copy()
    frame["energy_hz"] = 0.0
    frame.loc[:, "f"] = -1.0
    np.testing.assert_array_equal(found.energies_hz, before)
    assert found.f.min() == 3.5


@pytest.mark.parametrize("name", ISOTOPES)
def test_the_page_of_levels_has_every_state_and_its_numbers(name: str) -> None:
    found = levels(name)
    page = Page(found._repr_html_())
    assert page.rows[0] == ["F,m", "energy/h (MHz)", "slope (kHz/G)", "curvature (Hz/G²)"]
    assert f"{name} at 30 G" in page.words
    assert [row[0] for row in page.rows[1:]] == [str(state) for state in found.states]
    for state, row in zip(found.states, page.rows[1:], strict=True):
        energy, slope, bend = (
            float(cell.replace(",", "").replace("\N{MINUS SIGN}", "-")) for cell in row[1:]
        )
        assert energy * 1e6 == pytest.approx(found.energy_hz(*state), abs=0.6)
        assert slope * 1e3 == pytest.approx(found.moment_hz_per_gauss(*state), abs=0.6)
        assert bend == pytest.approx(found.curvature_hz_per_gauss2(*state), abs=6e-4)


def test_the_page_is_static_and_takes_the_colours_of_where_it_stands() -> None:
    page = Page(levels()._repr_html_())
    assert set(page.tags) <= {"div", "table", "tr", "th", "td"}
    assert page.attributes == {"style"}
    for style in page.styles:
        properties = dict(rule.split(":", 1) for rule in style.split(";"))
        assert properties.get("color", "inherit") == "inherit"
        assert properties.get("background", "transparent") == "transparent"


def test_every_text_of_a_table_is_escaped() -> None:
    nasty = "<script>alert(\"1\")</script> & <b>'bold'</b>"
    text = tables.html_table(nasty, [nasty, "b"], [[nasty, "1"], ["2", nasty]], figures=(1,))
    assert "<script" not in text and "<b>" not in text
    page = Page(text)
    assert page.rows == [[nasty, "b"], [nasty, "1"], ["2", nasty]]
    assert page.words.startswith(nasty)


def test_fields_are_written_as_one_writes_them() -> None:
    for field_gauss, words in [(0.0, "at 0 G"), (19.712, "at 19.712 G"), (2000.0, "at 2000 G")]:
        assert words in Page(levels("87Rb", field_gauss)._repr_html_()).words


def test_quality_as_pandas() -> None:
    found = quality()
    frame = found.to_pandas()
    assert frame.equals(tables.quality_to_pandas(found))
    assert list(frame.columns) == ["wavelength_nm", "rabi_hz", "scattering_per_s", "ratio"]
    assert set(frame.dtypes) == {np.dtype(np.float64)}
    assert len(frame) == len(found.wavelengths_nm) > 80
    assert frame["wavelength_nm"].is_monotonic_increasing
    turned = 2 * math.pi * frame["rabi_hz"] / frame["scattering_per_s"]
    np.testing.assert_allclose(frame["ratio"], turned, rtol=1e-14)
    assert frame["ratio"].max() <= found.best_ratio


def test_what_is_too_near_to_a_line_has_no_row() -> None:
    # 40K D1 within 0.01 nm: a quarter of the points lie nearer than 100 linewidths.
    found = quality((770.098, 770.118), points=201)
    frame = found.to_pandas()
    assert 0 < len(frame) < 201
    assert not frame.isna().to_numpy().any()
    for low, high in found.excluded_nm:
        assert not frame["wavelength_nm"].between(low, high, inclusive="neither").any()


@pytest.mark.parametrize("ask", [lambda: levels().to_pandas(), lambda: quality().to_pandas()])
def test_without_pandas_the_extra_is_named(ask, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setitem(sys.modules, "pandas", None)
    with pytest.raises(ImportError, match=r'pandas: pip install "fluxloom\[tables\]"'):
        ask()


def test_couplings_and_rates_as_html() -> None:
    atom = fl.Atom("40K")
    along = {"wavelength_nm": 769.0, "power_mw": 0.4, "waist_um": 200.0}
    pair = fl.RamanPair.from_beams(
        absorb=fl.Beam(direction=(0, 1, 0), polarisation=(0, 0, 1), **along),
        emit=fl.Beam(direction=(1, 0, 0), polarisation=(0, 1, 0), **along),
    )
    lattice = fl.Lattice(wavelength_nm=1064.0, depth_er=6.0)
    link = pair.coupling(atom, "9/2,-9/2", "9/2,-5/2", field_gauss=30.0, lattice=lattice)
    page = Page(link._repr_html_())
    assert page.words.startswith("40K: 9/2,-9/2 to 9/2,-5/2")
    assert link.rule in page.words and all(text in page.words for text in link.alternatives)
    assert [row[0] for row in page.rows][:2] == ["Rabi frequency, free atoms", "in the lattice"]
    rates = atom.scattering_per_s(pair, 4.5, -4.5, field_gauss=30.0)
    page = Page(rates._repr_html_())
    assert page.words.startswith("40K in 9/2,-9/2")
    assert ["all photons", f"{rates.total:.4e}"] in page.rows
    assert len(page.rows) == 4 + sum(rate > 0 for rate in rates.to.values())

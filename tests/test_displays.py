"""Tables for notebooks, pandas and xarray."""

import math
import sys
from html.parser import HTMLParser

import numpy as np
import pytest

import fluxloom as fl
from fluxloom import wording

LATTICE = fl.Lattice(wavelength_nm=1064.0, depth_er=6.0)
CROSSING = fl.RamanPair(wavelength_nm=769.0, angle_deg=31.451)
COUNTER = fl.RamanPair(wavelength_nm=769.0)
MINUS, PLUS_MINUS, TIMES = "\N{MINUS SIGN}", "\N{PLUS-MINUS SIGN}", "\N{MULTIPLICATION SIGN}"

VOID = {"br", "hr", "img", "input", "meta", "link"}


class Page(HTMLParser):
    """Reads a page: its tags, its attributes, its rows of cells; refuses unclosed tags."""

    def __init__(self, text: str) -> None:
        super().__init__(convert_charrefs=True)
        self.tags: list[str] = []
        self.attributes: set[str] = set()
        self.styles: list[str] = []
        self.rows: list[list[str]] = []
        self.words = ""
        self._open: list[str] = []
        self.feed(text)
        self.close()
        assert self._open == []

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        self.tags.append(tag)
        self.attributes |= {name for name, _ in attrs}
        self.styles += [value or "" for name, value in attrs if name == "style"]
        assert tag not in VOID
        self._open.append(tag)
        if tag == "tr":
            self.rows.append([])
        if tag in ("td", "th"):
            self.rows[-1].append("")

    def handle_endtag(self, tag: str) -> None:
        assert self._open.pop() == tag

    def handle_data(self, data: str) -> None:
        self.words += data
        if {"td", "th"} & set(self._open):
            self.rows[-1][-1] += data

    @property
    def named(self) -> dict[str, str]:
        return {row[0]: row[1] for row in self.rows}


def check(raman: fl.RamanPair = COUNTER, target: object = "3/8", sites: int = 60, **options):
    return fl.check_flux(LATTICE, raman, target, sites=sites, **options)


def own_atom(source: str) -> fl.Atom:
    return fl.Atom("40K").with_data({"D1.dipole_au": 4.1075}, source=source)


def every_page() -> list[Page]:
    shown = [
        check(),
        check(CROSSING, legs=3, closed=True),
        check(fl.RamanPair(wavelength_nm=769.0, angle_deg=0.0)),
        LATTICE.bands(),
        *(fl.Atom(name).sources() for name in fl.Atom.available()),
    ]
    return [Page(item._repr_html_()) for item in shown]


def test_the_pages_are_static_and_take_the_colours_of_where_they_stand() -> None:
    for page in every_page():
        assert set(page.tags) <= {"div", "table", "tr", "th", "td", "span", "strong", "sub"}
        assert page.attributes == {"style"}
        for style in page.styles:
            properties = dict(rule.split(":", 1) for rule in style.split(";"))
            assert properties.get("color", "inherit") == "inherit"
            assert properties.get("background", "transparent") == "transparent"


def test_a_check_that_misses() -> None:
    judged = check()
    page = Page(judged._repr_html_())
    assert f"\N{BALLOT X} {judged.verdict}" in page.words
    assert page.named["flux"] == "1.38362 (folded 0.38362), in flux quanta"
    assert page.named["target"] == "flux = 1 + 3/8 + 0.008615"
    assert page.named["phase error"] == "3.19 rad over 60 sites, budget 0.500 rad"
    assert page.named["exact wavelength"] == f"773.818 {PLUS_MINUS} 0.76 nm"
    assert page.named["exact angle"] == f"167.206 {PLUS_MINUS} 0.97 deg"
    assert page.named["nearest fractions"].startswith("23/60 (0.104 rad), 18/47 (0.236 rad), ")
    assert page.named["nearest fractions"].count("rad") == 5
    assert page.named["kick overlap"] == f"{judged.kick_overlap:.4f}"
    assert page.named["diagonal ratio"] == f"{judged.diagonal_ratio:.4f}"
    assert "loop flux" not in page.named


def test_a_tube_has_its_closure() -> None:
    judged = check(CROSSING, legs=3, closed=True)
    page = Page(judged._repr_html_())
    assert f"\N{CHECK MARK} {judged.verdict}" in page.words
    assert page.named["loop flux"] == "1.12500 round 3 legs"
    assert page.named["closure mismatch"] == "0.12500"
    assert page.named["closure overlap"].startswith(f"{judged.closure_overlap:.4f}")
    assert "averages out over the cloud" in page.named["closure overlap"]
    closing = check(CROSSING, legs=8, closed=True)
    assert "acts on the cloud" in Page(closing._repr_html_()).named["closure overlap"]


def test_a_geometry_without_a_remedy_says_so() -> None:
    page = Page(check(fl.RamanPair(wavelength_nm=769.0, angle_deg=0.0))._repr_html_())
    assert page.named["exact wavelength"] == "none of this geometry"
    assert page.named["exact angle"] == f"31.451 {PLUS_MINUS} 0.12 deg"


@pytest.mark.parametrize("sites", [2, 60, 1000, 10**6])
def test_the_digits_follow_the_tolerance(sites: int) -> None:
    judged = check(sites=sites)
    shown = Page(judged._repr_html_()).named
    value, tolerance = shown["exact wavelength"].removesuffix(" nm").split(f" {PLUS_MINUS} ")
    assert float(tolerance) == pytest.approx(judged.wavelength_tolerance_nm, rel=0.051)
    assert abs(float(value) - judged.exact_wavelength_nm) < 0.01 * judged.wavelength_tolerance_nm
    half = 0.5 / (2 * math.pi * (sites - 1))
    assert abs(float(shown["flux"].split()[0]) - judged.flux) < 0.01 * half


def test_texts_are_escaped() -> None:
    nasty = "<script>alert(\"1\")</script> & <b>'bold'</b>"
    text = own_atom(nasty).sources()._repr_html_()
    assert "<script" not in text and "<b>" not in text
    page = Page(text)
    row = next(row for row in page.rows if row[0] == "D1.dipole_au")
    assert row[-1] == nasty


def test_the_sources_have_their_numbers_and_statuses() -> None:
    page = Page(own_atom("our own").sources()._repr_html_())
    assert page.rows[0] == ["name", "value", "unit", "status", "source"]
    table = {row[0]: row[1:] for row in page.rows[1:]}
    assert len(table) == len(own_atom("our own").sources())
    assert table["mass_u"][:2] == [f"39.963998165 {PLUS_MINUS} 0.000000060", "u"]
    assert table["g_i"][0] == f"(1.76490 {PLUS_MINUS} 0.00034) {TIMES} 10\u207b\u2074"
    assert table["D1.frequency_hz"][0] == f"389286184353000 {PLUS_MINUS} 73000"
    assert table["nuclear_spin"][0] == "4 (exact)"
    assert table["D1.dipole_au"] == [
        "4.1075",
        "a.u.",
        "\N{BLACK STAR} supplied by the user",
        "our own",
    ]
    statuses = {row[2] for row in table.values()}
    assert len({status[0] for status in statuses}) == len(statuses) == 4


@pytest.mark.parametrize("name", fl.Atom.available())
def test_every_source_is_shown_to_its_uncertainty(name: str) -> None:
    table = fl.Atom(name).sources()
    for row, cells in zip(table, Page(table._repr_html_()).rows[1:], strict=True):
        plain = cells[1].replace(MINUS, "-").removesuffix(" (exact)")
        power = 0
        if TIMES in plain:
            plain, raised = plain.split(f" {TIMES} 10")
            digits = "\u2070\u00b9\u00b2\u00b3\u2074\u2075\u2076\u2077\u2078\u2079\u207b"
            power = int(raised.translate(str.maketrans(digits, "0123456789-")))
        parts = [float(part) * 10.0**power for part in plain.strip("()").split(f" {PLUS_MINUS} ")]
        spread = row.uncertainty or 1e-8 * abs(row.value)
        assert abs(parts[0] - row.value) <= 0.051 * spread * (1 + 1e-6)
        if row.uncertainty:
            assert parts[1] == pytest.approx(row.uncertainty, rel=0.051)


def test_bands_show_edges_widths_and_gaps() -> None:
    # Few points, none at the centre of the zone: the edges are shown all the same.
    bands = LATTICE.bands(count=3, points=4)
    page = Page(bands._repr_html_())
    assert page.rows[0] == ["band", "lower edge", "upper edge", "width", "gap to the next"]
    edges = fl.band_energies_er([6.0], [0.0, 1.0], count=4)[0]
    low, high = edges.min(axis=0), edges.max(axis=0)
    for band, row in enumerate(page.rows[1:]):
        assert row[0] == str(band)
        shown = [float(cell) for cell in row[1:]]
        gap = low[band + 1] - high[band]
        np.testing.assert_allclose(
            shown, [low[band], high[band], high[band] - low[band], gap], rtol=1e-4
        )
    assert len(page.rows) == 4
    assert "ER" in page.words and "depth 6" in page.words


def test_bands_as_xarray() -> None:
    bands = LATTICE.bands(count=3, points=11)
    array = bands.to_xarray()
    assert array.dims == ("band", "quasimomentum")
    np.testing.assert_array_equal(array.values, bands.energies_er)
    np.testing.assert_array_equal(array.coords["quasimomentum"], np.linspace(-1, 1, 11))
    np.testing.assert_array_equal(array.coords["band"], [0, 1, 2])
    assert array.coords["quasimomentum"].attrs == {"units": "k_L"}
    assert array.name == "energy"
    assert array.attrs == {
        "units": "E_R",
        "depth_er": 6.0,
        "spacing_nm": 532.0,
        "error_er": bands.error_er,
        "fluxloom_version": fl.__version__,
    }
    # The copy may be changed; the bands may not.
    array.values[:] = 0.0
    assert bands.energies_er.all()


def test_sources_as_pandas() -> None:
    table = own_atom("<our own>").sources()
    frame = table.to_pandas()
    assert list(frame.columns) == ["name", "value", "uncertainty", "unit", "status", "source"]
    assert len(frame) == len(table)
    assert frame["value"].dtype == frame["uncertainty"].dtype == np.float64
    indexed = frame.set_index("name")
    assert indexed.loc["D1.dipole_au", "value"] == 4.1075
    assert math.isnan(indexed.loc["D1.dipole_au", "uncertainty"])
    assert indexed.loc["D1.dipole_au", "source"] == "<our own>"
    assert indexed.loc["D1.frequency_hz", "uncertainty"] == 73000.0


@pytest.mark.parametrize(
    ("package", "ask"),
    [
        ("xarray", lambda: LATTICE.bands().to_xarray()),
        ("pandas", lambda: fl.Atom("40K").sources().to_pandas()),
    ],
)
def test_a_missing_extra_is_named(package: str, ask, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setitem(sys.modules, package, None)
    with pytest.raises(ImportError, match=rf'{package}: pip install "fluxloom\[tables\]"'):
        ask()


@pytest.mark.parametrize(
    ("value", "text"),
    [
        (0.76, "0.76"),
        (0.0996, "0.10"),
        (36.4, "36"),
        (770.0, "770"),
        (4.5e-5, "0.000045"),
        (8e-8, f"8.0 {TIMES} 10\u207b\u2078"),
        (0.0, "0"),
    ],
)
def test_two_digits(value: float, text: str) -> None:
    assert wording.two_digits(value) == text


@pytest.mark.parametrize(
    ("value", "text"),
    [
        (3.19, "3.19 rad"),
        (-0.1224, f"{MINUS}0.122 rad"),
        (0.0, "0.000 rad"),
        (-1.34e-4, f"{MINUS}1.3 {TIMES} 10\u207b\u2074 rad"),
        (139.2, "139 rad"),
        (54321.0, f"5.4 {TIMES} 10\u2074 rad"),
    ],
)
def test_phases(value: float, text: str) -> None:
    assert wording.rad(value) == text


@pytest.mark.parametrize(
    ("branch", "sense", "target", "text"),
    [
        (1, 1, "3/8", "1 + 3/8"),
        (1, -1, "3/8", f"1 {MINUS} 3/8"),
        (-2, 1, "-3/8", f"{MINUS}2 {MINUS} 3/8"),
        (-2, -1, -0.375, f"{MINUS}2 + 0.375"),
        (0, 1, 0.5, "0 + 0.5"),
    ],
)
def test_sums_read_as_one_writes_them(branch: int, sense: int, target: object, text: str) -> None:
    assert wording.signed_sum(branch, sense, target) == text

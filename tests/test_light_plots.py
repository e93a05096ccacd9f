"""The picture of coupling over scattering: what it holds is counted and computed here."""

import json
import sys
from collections.abc import Iterator

import matplotlib

matplotlib.use("Agg")

import numpy as np
import pytest
from matplotlib import pyplot
from matplotlib.axes import Axes

import fluxloom as fl
from fluxloom import light_plots

POTASSIUM = fl.Atom("40K")
LINK = ("9/2,-9/2", "9/2,-7/2")
TIMES = "\N{MULTIPLICATION SIGN}"
# Vacuum wavelengths of the lines of 40K from F = 9/2, nm; source: Falke et al., Phys. Rev.
# A 74, 032503 (2006), and the ground state's A of -285.7308 MHz (both from memory). The
# level lies 2 A from the centre.
D2_NM, D1_NM = (
    299_792_458e-3 / (terahertz + 2 * 285.7308e-6) for terahertz in (391.01629605, 389.286184353)
)
RANGES = {
    "between the lines": (767.2, 769.6),
    "across both": (766.0, 775.0),
    "red of both": (772.0, 800.0),
    "about one": (769.9, 770.3),
    "wide": (400.0, 1200.0),
}


@pytest.fixture(autouse=True)
def closed_figures() -> Iterator[None]:
    before = dict(matplotlib.rcParams)
    assert pyplot.get_fignums() == []
    yield
    assert dict(matplotlib.rcParams) == before
    pyplot.close("all")


def beam(direction: tuple[float, float, float], along: tuple[float, float, float]) -> fl.Beam:
    return fl.Beam(
        wavelength_nm=769.0,
        power_mw=0.3,
        waist_um=200.0,
        direction=direction,
        polarisation=fl.polarisation.linear(direction, along),
    )


PAIR = fl.RamanPair.from_beams(
    absorb=beam((0.27, 0.96, 0.0), (0, 0, 1)), emit=beam((-0.27, 0.96, 0.0), (1, 0, 0))
)


def quality(range_nm: tuple[float, float]) -> fl.Quality:
    return PAIR.quality(POTASSIUM, *LINK, range_nm=range_nm, field_gauss=30.0, points=301)


def curve(ax: Axes) -> tuple[np.ndarray, np.ndarray]:
    (line,) = (line for line in ax.lines if line.get_gid() == "ratio")
    return np.asarray(line.get_xdata()), np.asarray(line.get_ydata())


def windows(ax: Axes) -> list[tuple[float, float]]:
    patches = [patch for patch in ax.patches if patch.get_gid() == "excluded"]
    return [(p.get_x(), p.get_x() + p.get_width()) for p in patches]


@pytest.mark.parametrize("name", RANGES)
def test_the_curve_is_interrupted_at_the_lines_alone(name: str) -> None:
    low, high = RANGES[name]
    found = quality((low, high))
    x, y = curve(light_plots.plot_quality(found))
    there = ~np.isnan(x)
    np.testing.assert_array_equal(x[there], found.wavelengths_nm)
    np.testing.assert_array_equal(y[there], found.ratio)
    lines = [nm for nm in (D2_NM, D1_NM) if low < nm < high]
    assert np.count_nonzero(np.isnan(x)) == len(lines)
    for nm in lines:
        place = int(np.searchsorted(found.wavelengths_nm, nm)) + lines.index(nm)
        assert np.isnan(x[place]) and np.isnan(y[place])


@pytest.mark.parametrize("name", RANGES)
def test_what_is_not_computed_is_shaded_and_can_be_seen(name: str) -> None:
    low, high = RANGES[name]
    ax = quality((low, high)).plot()
    lines = [nm for nm in (D2_NM, D1_NM) if low < nm < high]
    assert len(windows(ax)) == len(lines)
    for nm, (start, end) in zip(lines, windows(ax), strict=True):
        assert start < nm < end
        # 200 linewidths of 6 MHz and the hyperfine structure.
        assert 0.002 < end - start < 0.01
    for patch in ax.patches:
        assert patch.get_linewidth() > 0.5
    assert ("within 100 linewidths" in ax.get_xlabel()) is bool(lines)


def test_a_window_at_the_end_of_the_range_stays_inside_the_picture() -> None:
    for range_nm in [(D2_NM, 768.0), (768.0, D1_NM), (D2_NM - 0.003, D1_NM + 0.003)]:
        found = quality(range_nm)
        ax = found.plot()
        assert ax.get_xlim() == (found.wavelengths_nm[0], found.wavelengths_nm[-1])
        for start, end in windows(ax):
            assert ax.get_xlim()[0] <= start < end <= ax.get_xlim()[1]
        ax.figure.draw_without_rendering()


@pytest.mark.parametrize("name", RANGES)
def test_the_largest_ratio_is_marked_and_told(name: str) -> None:
    low, high = RANGES[name]
    found = quality((low, high))
    ax = found.plot()
    (dot,) = (line for line in ax.lines if line.get_gid() == "best")
    (x,), (y,) = dot.get_data()
    assert y >= np.nanmax(curve(ax)[1])
    title = ax.get_title()
    told = float(title.split(" at ")[1].split(" nm")[0])
    assert abs(told - x) <= 1e-3 * (high - low)
    assert ("an end of the range" in title) == (min(x - low, high - x) < 1e-6)
    size = title.removeprefix("Largest: ").split(" rad/photon")[0]
    if TIMES in size:
        digits, power = size.split(f" {TIMES} 10")
        size = f"{digits}e{power.translate(str.maketrans('⁰¹²³⁴⁵⁶⁷⁸⁹', '0123456789'))}"
    assert float(size) == pytest.approx(y, rel=6e-3)


def test_between_the_lines_the_best_is_no_end_of_the_range() -> None:
    assert "an end of the range" not in quality((767.2, 769.6)).plot().get_title()
    assert "an end of the range" in quality((769.2, 769.6)).plot().get_title()


def test_the_scale_is_logarithmic_where_ratios_differ_much() -> None:
    assert quality(RANGES["across both"]).plot().get_yscale() == "log"
    assert quality(RANGES["red of both"]).plot().get_yscale() == "linear"


def test_a_link_that_the_light_does_not_drive() -> None:
    document = json.loads(quality((766.0, 775.0)).to_json())
    nothing = [0.0] * len(document["ratio"])
    document |= {"rabi_hz": nothing, "ratio": nothing, "best_ratio": 0.0}
    ax = fl.Quality.from_json(json.dumps(document)).plot()
    assert ax.get_title() == "No coupling in this range"
    assert [line for line in ax.lines if line.get_gid() == "best"] == []
    ax.figure.draw_without_rendering()


def test_wavelengths_are_written_out() -> None:
    for range_nm in RANGES.values():
        ax = quality(range_nm).plot()
        ax.figure.draw_without_rendering()
        assert ax.xaxis.get_offset_text().get_text() == ""
        low, high = range_nm
        told = [float(label.get_text()) for label in ax.get_xticklabels()]
        assert sum(low <= nm <= high for nm in told) >= 3
        assert "(nm)" in ax.get_xlabel()
        assert "(rad/photon)" in ax.get_ylabel()


@pytest.mark.parametrize("name", RANGES)
def test_words_stay_inside_the_figure(name: str) -> None:
    ax = quality(RANGES[name]).plot()
    ax.figure.draw_without_rendering()
    whole = ax.figure.bbox
    for text in (ax.title, ax.xaxis.label, ax.yaxis.label):
        box = text.get_window_extent()
        assert whole.x0 <= box.x0 and box.x1 <= whole.x1
        assert whole.y0 <= box.y0 and box.y1 <= whole.y1


def test_axes_that_are_given_are_used() -> None:
    figure, given = pyplot.subplots()
    assert quality((767.2, 769.6)).plot(given) is given
    assert pyplot.get_fignums() == [figure.number]


def test_the_colours_follow_a_dark_style() -> None:
    with pyplot.style.context("dark_background"):
        ax = quality((766.0, 775.0)).plot()
        for patch in ax.patches:
            red, green, blue, alpha = patch.get_facecolor()
            assert min(red, green, blue) == 1.0 and alpha < 0.5
        ax.figure.draw_without_rendering()


def test_without_matplotlib_the_extra_is_named(monkeypatch: pytest.MonkeyPatch) -> None:
    found = quality((767.2, 769.6))
    monkeypatch.setitem(sys.modules, "matplotlib", None)
    with pytest.raises(ImportError, match=r'pip install "fluxloom\[plots\]"'):
        found.plot()

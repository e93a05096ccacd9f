"""Pictures: what they hold is counted and computed here without the package's help."""

import math
import subprocess
import sys
from collections.abc import Iterator
from itertools import combinations

import matplotlib

matplotlib.use("Agg")

import numpy as np
import pytest
from matplotlib import pyplot
from matplotlib.axes import Axes
from matplotlib.collections import PolyCollection
from matplotlib.text import Text

import fluxloom as fl
from fluxloom import plots

LATTICE = fl.Lattice(wavelength_nm=1064.0, depth_er=6.0)
CROSSING = fl.RamanPair(wavelength_nm=769.0, angle_deg=31.451)
COUNTER = fl.RamanPair(wavelength_nm=769.0)
CLOCK_LATTICE = fl.Lattice(wavelength_nm=813.4274, depth_er=6.0)
CLOCK = fl.RamanPair.from_directions(absorb=(1, 0, 0), absorb_wavelength_nm=698.4457)
TWO_COLOURS = fl.RamanPair.from_directions(
    absorb=(1, 0, 0), absorb_wavelength_nm=556.0, emit=(0.5, 0.8, 0), emit_wavelength_nm=555.0
)


@pytest.fixture(autouse=True)
def closed_figures() -> Iterator[None]:
    before = dict(matplotlib.rcParams)
    assert pyplot.get_fignums() == []
    yield
    assert dict(matplotlib.rcParams) == before
    pyplot.close("all")


def check(raman: fl.RamanPair = COUNTER, target: object = "3/8", sites: int = 60, **options):
    lattice = CLOCK_LATTICE if raman is CLOCK else LATTICE
    return fl.check_flux(lattice, raman, target, sites=sites, **options)


def lines(ax: Axes, gid: str) -> list[np.ndarray]:
    return [line.get_xydata() for line in ax.lines if line.get_gid() == gid]


def tolerance_heights(ax: Axes) -> list[float]:
    bands = [c for c in ax.collections if c.get_gid() == "tolerance"]
    assert all(isinstance(band, PolyCollection) for band in bands)
    return [float(np.ptp(band.get_paths()[0].vertices[:, 1])) for band in bands]


def insets(ax: Axes) -> list[Axes]:
    return [child for child in ax.child_axes if isinstance(child, Axes) and child.lines]


def accepted(ax: Axes, target: float) -> set[float]:
    """Every n +- target within the picture, by trying far more integers than needed."""
    low, high = ax.get_ylim()
    tried = {round(n + s * target, 9) for n in range(-400, 400) for s in (1, -1)}
    return {flux for flux in tried if low <= flux <= high}


def assert_labels_do_not_touch(texts: list[Text], ax: Axes) -> None:
    ax.figure.draw_without_rendering()
    boxes = [t.get_window_extent() for t in texts if t.get_visible() and t.get_text()]
    for one, other in combinations(boxes, 2):
        assert not one.overlaps(other)


@pytest.mark.parametrize("sites", [10, 60, 1000])
@pytest.mark.parametrize("target", ["3/8", "1/2", "0", 0.49, "-11/8"])
@pytest.mark.parametrize("raman", [CROSSING, COUNTER, COUNTER.swapped(), CLOCK, TWO_COLOURS])
def test_every_accepted_flux_of_the_picture_has_its_line(
    raman: fl.RamanPair, target: object, sites: int
) -> None:
    judged = check(raman, target, sites)
    ax = plots.flux_check(judged)
    drawn = [round(float(line[0, 1]), 9) for line in lines(ax, "branch")]
    assert len(drawn) == len(set(drawn))
    assert set(drawn) == accepted(ax, float(judged.target))
    assert set(drawn), "no accepted flux to be seen"
    half = 0.5 / (2 * math.pi * (sites - 1))
    heights = tolerance_heights(ax)
    assert len(heights) >= len(drawn)
    assert heights == pytest.approx([2 * half] * len(heights), rel=1e-9)


@pytest.mark.parametrize("raman", [CROSSING, COUNTER, CLOCK, COUNTER.swapped()])
def test_the_default_range_shows_today_the_hit_and_a_neighbour(raman: fl.RamanPair) -> None:
    judged = check(raman)
    ax = plots.flux_check(judged)
    low, high = ax.get_xlim()
    today = raman.wavelength_nm or raman.absorb_wavelength_nm
    assert low < today < high
    assert low < judged.exact_wavelength_nm < high
    reached = sorted(judged.flux * today / nm for nm in (low, high))
    within = [flux for flux in accepted(ax, 0.375) if reached[0] <= flux <= reached[1]]
    assert len(within) >= 2


def test_the_number_of_lines_over_a_given_range() -> None:
    # At 180 degrees the flux is 1064/wavelength: 0.532 to 2.66, with a margin of 8 %
    # and the tolerance. In 0.36..2.83 lie 3/8 5/8, 11/8 13/8, 19/8 21/8.
    ax = plots.flux_check(check(), range_nm=(400.0, 2000.0))
    assert ax.get_xlim() == (400.0, 2000.0)
    assert len(lines(ax, "branch")) == 6


def test_the_branches_are_named_at_the_edge() -> None:
    ax = plots.flux_check(check(), range_nm=(400.0, 2000.0))
    edge = next(axis for axis in ax.child_axes if not isinstance(axis, Axes) or not axis.lines)
    named = {
        round(float(place), 6): label.get_text()
        for place, label in zip(edge.get_yticks(), edge.get_yticklabels(), strict=True)
    }
    minus = "\N{MINUS SIGN}"
    assert named[1.375] == "1 + 3/8"
    assert named[0.625] == f"1 {minus} 3/8"
    assert named[2.625] == f"3 {minus} 3/8"
    assert_labels_do_not_touch(edge.get_yticklabels(), ax)


def test_crowded_branches_are_named_without_overlap() -> None:
    ax = plots.flux_check(check(target=0.49), range_nm=(200.0, 2000.0))
    edge = next(axis for axis in ax.child_axes if not isinstance(axis, Axes) or not axis.lines)
    assert len(lines(ax, "branch")) > len(edge.get_yticks())
    assert_labels_do_not_touch(edge.get_yticklabels(), ax)


@pytest.mark.parametrize(
    "raman", [CROSSING, fl.RamanPair(wavelength_nm=769.0, angle_deg=70.0, tilt_deg=25.0)]
)
def test_the_curve_of_a_crossing_pair_is_the_flux_function(raman: fl.RamanPair) -> None:
    ax = plots.flux_check(check(raman))
    curve = next(line for line in ax.lines if line.get_label() == "this geometry")
    wavelengths, fluxes = curve.get_xydata().T
    expected = fl.flux(
        spacing_nm=532.0,
        wavelength_nm=wavelengths,
        angle_deg=raman.angle_deg,
        tilt_deg=raman.tilt_deg,
    )
    np.testing.assert_allclose(fluxes, expected, rtol=1e-12)


def test_the_curve_of_two_colours_holds_the_second() -> None:
    ax = plots.flux_check(check(TWO_COLOURS))
    curve = next(line for line in ax.lines if line.get_label() == "this geometry")
    for wavelength, flux in curve.get_xydata()[::57]:
        tuned = TWO_COLOURS.replace(absorb_wavelength_nm=wavelength)
        assert flux == pytest.approx(tuned.flux(LATTICE), rel=1e-11)


@pytest.mark.parametrize(
    ("raman", "word", "marker"), [(CROSSING, "meets", "o"), (COUNTER, "misses", "X")]
)
def test_the_verdict_is_told_by_shape_and_word(raman: fl.RamanPair, word: str, marker: str) -> None:
    judged = check(raman)
    ax = plots.flux_check(judged)
    today = next(line for line in ax.lines if line.get_gid() == "today")
    assert today.get_marker() == marker
    assert today.get_label() == f"today: 769 nm, {word}"
    assert today.get_xydata().tolist() == [[769.0, judged.flux]]
    assert ax.get_title().startswith(f"{word.capitalize()} 3/8: ")
    assert "over 60 sites, budget 0.500 rad" in ax.get_title()


def test_the_hit_is_drawn_with_its_half_width() -> None:
    judged = check()
    ax = plots.flux_check(judged)
    exact = next(line for line in ax.lines if line.get_gid() == "exact")
    assert exact.get_xdata()[0] == judged.exact_wavelength_nm
    assert exact.get_ydata()[0] == pytest.approx(1.375, abs=1e-12)
    bar = next(bars for bars in ax.containers if bars.get_label().startswith("hits"))
    assert bar.get_label() == "hits: 773.818 \N{PLUS-MINUS SIGN} 0.76 nm"
    ends = bar.lines[2][0].get_segments()[0][:, 0]
    assert np.ptp(ends) / 2 == pytest.approx(judged.wavelength_tolerance_nm, rel=1e-12)


@pytest.mark.parametrize("raman", [CROSSING, COUNTER, COUNTER.swapped()])
def test_the_tolerance_can_be_seen_in_the_inset(raman: fl.RamanPair) -> None:
    ax = plots.flux_check(check(raman))
    (inset,) = insets(ax)
    share = tolerance_heights(inset)[0] / np.ptp(inset.get_ylim())
    assert 0.05 < share < 0.6
    assert ax.get_xlim()[0] < inset.get_xlim()[0] < 769.0 < inset.get_xlim()[1] < ax.get_xlim()[1]


@pytest.mark.parametrize("raman", [CROSSING, COUNTER, CLOCK, TWO_COLOURS.swapped()])
def test_legend_inset_title_and_labels_keep_apart(raman: fl.RamanPair) -> None:
    ax = plots.flux_check(check(raman))
    ax.figure.draw_without_rendering()
    legend = ax.get_legend().get_window_extent()
    frame = ax.get_window_extent()
    assert frame.x0 <= legend.x0 and legend.x1 <= frame.x1
    for inset in insets(ax):
        assert not legend.overlaps(inset.get_tightbbox())
    curve = next(line for line in ax.lines if line.get_label() == "this geometry")
    points = ax.transData.transform(curve.get_xydata())
    assert not any(legend.contains(x, y) for x, y in points)
    assert not any(
        inset.get_window_extent().contains(x, y) for inset in insets(ax) for x, y in points
    )
    title = ax.title.get_window_extent()
    assert 0.0 <= title.x0 and title.x1 <= ax.figure.bbox.width


def test_no_flux_is_a_flat_line_that_says_so() -> None:
    ax = plots.flux_check(check(fl.RamanPair(wavelength_nm=769.0, angle_deg=0.0)))
    curve = next(line for line in ax.lines if line.get_label() == "this geometry")
    assert not curve.get_ydata().any()
    assert any("flux 0 at every wavelength" in text.get_text() for text in ax.texts)
    assert len(lines(ax, "branch")) == 1
    assert insets(ax) == []


def test_a_tube_says_whether_its_loop_phase_acts() -> None:
    title = plots.flux_check(check(CROSSING, legs=3, closed=True)).get_title()
    assert "tube of 3 legs: its loop phase averages out over the cloud" in title
    closing = check(CROSSING, legs=8, closed=True)
    assert "acts on the cloud" in plots.flux_check(closing).get_title()


def test_a_budget_beyond_everything_accepts_everything() -> None:
    ax = plots.flux_check(check(phase_budget_rad=1e6))
    assert tolerance_heights(ax) == pytest.approx([1.0] * len(tolerance_heights(ax)))


@pytest.mark.parametrize(
    ("raman", "label"),
    [
        (COUNTER, "Raman wavelength (nm)"),
        (CLOCK, "wavelength of the link (nm)"),
        (TWO_COLOURS, "wavelength of the absorbed beam (nm), the other in proportion"),
    ],
)
def test_the_axes_have_units(raman: fl.RamanPair, label: str) -> None:
    ax = plots.flux_check(check(raman))
    assert ax.get_xlabel() == label
    assert ax.get_ylabel() == "unfolded flux (flux quanta)"


@pytest.mark.parametrize(
    ("range_nm", "code", "words"),
    [
        ((900.0, 800.0), "range.empty", "swap them"),
        ((800.0, 800.0), "range.empty", "swap them"),
        ((0.769, 0.780), "light.wavelength_out_of_range", "micrometres"),
        ((math.nan, 800.0), "light.wavelength_out_of_range", "finite"),
    ],
)
def test_a_range_that_makes_no_sense_is_refused(
    range_nm: tuple[float, float], code: str, words: str
) -> None:
    with pytest.raises(fl.InputError, match=words) as caught:
        plots.flux_check(check(), range_nm=range_nm)
    assert caught.value.code == code
    assert pyplot.get_fignums() == [], "a refusal leaves no empty figure"


def test_a_range_of_too_many_branches_is_refused() -> None:
    wide = fl.Lattice(wavelength_nm=1064.0, depth_er=6.0, angle_deg=0.5)
    judged = fl.check_flux(wide, COUNTER, "3/8", sites=60)
    with pytest.raises(fl.InputError, match="narrow it") as caught:
        plots.flux_check(judged, range_nm=(400.0, 800.0))
    assert caught.value.code == "range.too_wide"
    assert plots.flux_check(judged).get_title().startswith("Misses")


def test_today_outside_the_range_is_said() -> None:
    ax = plots.flux_check(check(), range_nm=(780.0, 790.0))
    assert any("(not shown)" in text.get_text() for text in ax.get_legend().get_texts())
    assert len(lines(ax, "branch")) == 1


def test_bands_hold_energies_gaps_and_depth() -> None:
    bands = LATTICE.bands(count=3, points=51)
    ax = plots.bands(bands)
    np.testing.assert_array_equal([line[:, 1] for line in lines(ax, "band")], bands.energies_er)
    assert [line[0, 1] for line in lines(ax, "depth")] == [6.0]
    assert len([patch for patch in ax.patches if patch.get_gid() == "gap"]) == 2
    assert ax.get_xlabel() == "quasimomentum ($k_L = \\pi/a$)"
    assert ax.get_ylabel() == "energy ($E_R$)"
    words = " ".join(text.get_text() for text in ax.texts)
    assert "$t$ = 0.0508 $E_R$" in words
    assert "Hz" not in words
    assert "gap 2.90 $E_R$" in words


def test_an_atom_gives_the_tunnelling_in_hertz() -> None:
    ax = plots.bands(LATTICE.bands(), atom=fl.Atom("40K"))
    # 0.050773 E_R of 4409.86 Hz
    assert any("223.9 Hz (40K)" in text.get_text() for text in ax.texts)


@pytest.mark.parametrize("depth_er", [2.0, 6.0, 20.0])
def test_the_lowest_band_stands_beside_hopping_alone(depth_er: float) -> None:
    lattice = LATTICE.replace(depth_er=depth_er)
    bands = lattice.bands(points=41)
    (inset,) = insets(plots.bands(bands))
    exact, hopping = (line.get_ydata() for line in inset.lines)
    q = np.linspace(-1, 1, 41)
    np.testing.assert_allclose(hopping, -2 * np.cos(np.pi * q), atol=1e-12)
    # A fine band's mean by the trapezoid rule is exact for a periodic function.
    fine = fl.band_energies_er([depth_er], np.linspace(-1, 1, 257)[:-1], count=1)[0, :, 0]
    expected = (bands.energies_er[0] - fine.mean()) / lattice.tunnelling_er()
    np.testing.assert_allclose(exact, expected, atol=1e-7)


def test_bands_too_flat_to_compare_say_so() -> None:
    ax = plots.bands(LATTICE.replace(depth_er=300.0).bands())
    assert insets(ax) == []
    assert any("flat to the accuracy" in text.get_text() for text in ax.texts)


def test_the_words_over_the_bands_keep_apart() -> None:
    ax = plots.bands(LATTICE.bands(), atom=fl.Atom("40K"))
    ax.figure.draw_without_rendering()
    (inset,) = insets(ax)
    words = next(
        text for text in ax.texts if "hopping" in text.get_text() or "$t$" in text.get_text()
    )
    assert not words.get_window_extent().overlaps(inset.get_tightbbox())
    top = ax.transData.transform((0.0, max(line[:, 1].max() for line in lines(ax, "band"))))[1]
    assert top < words.get_window_extent().y0
    assert top < inset.get_tightbbox().y0


@pytest.mark.parametrize("band", [0, 1])
def test_a_wannier_function_is_drawn_as_it_is(band: int) -> None:
    function = LATTICE.wannier(band=band)
    ax = plots.wannier(function)
    np.testing.assert_array_equal(ax.lines[-1].get_xdata(), function.x_nm)
    np.testing.assert_array_equal(ax.lines[-1].get_ydata(), function.amplitude)
    assert "(nm)" in ax.get_xlabel()
    assert "nm$^{-1/2}$" in ax.get_ylabel()
    assert ax.get_title() == f"Wannier function of band {band}"


def test_axes_that_are_given_are_used() -> None:
    figure, (left, middle, right) = pyplot.subplots(1, 3, figsize=(12, 4), layout="constrained")
    assert check().plot(left) is left
    assert LATTICE.bands().plot(middle) is middle
    assert plots.wannier(LATTICE.wannier(), right) is right
    assert pyplot.get_fignums() == [figure.number]
    figure.draw_without_rendering()


def test_without_axes_there_is_one_new_figure() -> None:
    assert check().plot().figure.number in pyplot.get_fignums()
    assert len(pyplot.get_fignums()) == 1


def test_narrow_axes_have_no_inset_and_a_title_that_fits() -> None:
    _, narrow = pyplot.subplots(figsize=(3.4, 2.8), layout="constrained")
    ax = plots.flux_check(check(), narrow)
    assert insets(ax) == []
    ax.figure.draw_without_rendering()
    title = ax.title.get_window_extent()
    assert 0.0 <= title.x0 and title.x1 <= ax.figure.bbox.width


def test_the_colours_follow_a_dark_style() -> None:
    with pyplot.style.context("dark_background"):
        ax = plots.flux_check(check())
        black = (0.0, 0.0, 0.0, 1.0)
        assert ax.get_facecolor() == black
        assert black in [patch.get_facecolor() for patch in ax.patches]
        ax.figure.draw_without_rendering()


def test_without_matplotlib_the_extra_is_named(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setitem(sys.modules, "matplotlib", None)
    for draw in (check().plot, LATTICE.bands().plot):
        with pytest.raises(ImportError, match=r'pip install "fluxloom\[plots\]"'):
            draw()


def test_importing_the_package_leaves_the_extras_alone() -> None:
    program = (
        "import sys, fluxloom, fluxloom.plots, fluxloom.displays; "
        "print([name for name in ('matplotlib', 'pandas', 'xarray') if name in sys.modules])"
    )
    done = subprocess.run(
        [sys.executable, "-c", program], capture_output=True, text=True, check=True
    )
    assert done.stdout.strip() == "[]"


def test_a_wannier_function_draws_itself() -> None:
    ax = LATTICE.wannier(sites=4).plot()
    assert "nm" in ax.get_xlabel()

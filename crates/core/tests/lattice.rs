//! Lattice quantities against published tables and independent computations.

#![allow(clippy::unwrap_used)]

use fluxloom_core::control::Unwatched;
use fluxloom_core::lattice::{BandGrid, BandsInput, Hop, Transfer, WannierInput, band_energies_er};
use fluxloom_core::{Atom, Lattice, LatticeInput};
use fluxloom_testkit::assert_near;
use proptest::prelude::*;

fn lattice(depth_er: f64) -> Lattice {
    Lattice::new(LatticeInput { wavelength_nm: 1064.0, depth_er, ..LatticeInput::RETRO }).unwrap()
}

fn hop(reach: i32, band: usize) -> Hop {
    Hop { reach, band }
}

/// Squared overlap of the lowest Wannier function with the ground state of the
/// harmonic well of the same curvature, by quadrature.
fn harmonic_overlap(depth_er: f64) -> f64 {
    let lattice = lattice(depth_er);
    let input = WannierInput { band: 0, points_per_site: 64, sites: 16 };
    let wannier = lattice.wannier(input, &Unwatched).unwrap();
    // V = s z^2 near the site, z = pi x/a: exp(-sqrt(s) z^2/2), normalised in z.
    let scale = std::f64::consts::PI / lattice.spacing_nm();
    let norm = (depth_er.sqrt() / std::f64::consts::PI).powf(0.25) * scale.sqrt();
    let step = wannier.x_nm[1] - wannier.x_nm[0];
    let sum: f64 = wannier
        .x_nm
        .iter()
        .zip(&wannier.amplitude)
        .map(|(x, w)| w * norm * (-0.5 * depth_er.sqrt() * (scale * x).powi(2)).exp())
        .sum();
    (sum * step).powi(2)
}

#[test]
fn table_of_tunnelling_and_widths() {
    // source: Bloch, Dalibard, Zwerger, Rev. Mod. Phys. 80, 885 (2008), Table I
    // (from memory, confirmed by recomputation): depth, 4t, width, |t2|/t, overlap.
    let table = [
        (3.0, 0.444_109, 0.451_894, 0.101_075, 0.9719),
        (5.0, 0.263_069, 0.264_211, 0.051_641, 0.9836),
        (10.0, 0.076_730, 0.076_747, 0.011_846, 0.9938),
        (15.0, 0.026_075, 0.026_076, 0.003_459, 0.9964),
        (20.0, 0.009_965, 0.009_965, 0.001_184, 0.9975),
    ];
    for (depth_er, four_t, width, ratio, overlap) in table {
        let lattice = lattice(depth_er);
        let t1 = lattice.tunnelling_er(hop(1, 0)).unwrap();
        let t2 = lattice.tunnelling_er(hop(2, 0)).unwrap();
        let bands = lattice.bands(BandsInput::default(), &Unwatched).unwrap();
        assert_near(4.0 * t1, four_t, 0.6e-6, "4t");
        assert_near(bands.width_er(0).unwrap(), width, 0.6e-6, "width");
        assert!(t2 < 0.0, "t2 = {t2}");
        assert_near(-t2 / t1, ratio, 0.6e-6, "|t2|/t");
        assert_near(harmonic_overlap(depth_er), overlap, 0.6e-4, "harmonic overlap");
    }
}

#[test]
fn independent_values_at_ten_recoils() {
    // source: computed independently of this project (numpy and mpmath), no publication.
    let lattice = lattice(10.0);
    let bands = lattice.bands(BandsInput::default(), &Unwatched).unwrap();
    assert_near(lattice.tunnelling_er(hop(1, 0)).unwrap(), 0.019_182_452_147_2, 1e-13, "t1");
    assert_near(lattice.tunnelling_er(hop(3, 0)).unwrap(), 4.254_522_984_77e-6, 1e-16, "t3");
    assert_near(bands.gap_er(0, Some(1.0)).unwrap(), 4.572_262_252_28, 2e-11, "gap at q = 1");
    assert_near(bands.gap_er(0, Some(0.0)).unwrap(), 5.645_552_708_78, 2e-11, "gap at q = 0");
    assert_near(bands.gap_er(0, None).unwrap(), 4.572_262_252_28, 2e-11, "smallest gap");
    assert_near(lattice.onsite_integral(0, &Unwatched).unwrap(), 0.647_880_771_371, 1e-11, "w^4");
    let overlap =
        |kick, reach| lattice.kick_overlap(kick, Transfer { reach, ..Transfer::ON_SITE }).unwrap();
    assert_near(overlap(0.5, 0), 0.975_563_077_2, 1e-10, "O_0(0.5)");
    assert_near(overlap(4.0 / 3.0, 0), 0.840_497_702_4, 1e-10, "O_0(4/3)");
    assert_near(overlap(4.0 / 3.0, 1), 0.012_155_754_0, 1e-10, "O_1(4/3)");
}

#[test]
fn overlaps_are_sums_over_the_tabulated_functions() {
    // Closed form on both sides: the same integral in momentum and in real space.
    for (depth_er, kick) in [(1.5, 0.9), (6.0, 0.75), (12.0, 2.7673), (30.0, 4.1)] {
        let lattice = lattice(depth_er);
        let k_l = std::f64::consts::PI / lattice.spacing_nm();
        let table = |band| {
            lattice
                .wannier(WannierInput { band, points_per_site: 64, sites: 48 }, &Unwatched)
                .unwrap()
        };
        let zero = table(0);
        let step = zero.x_nm[1] - zero.x_nm[0];
        for reach in [0_i32, 1, 2] {
            let shift = 64 * usize::try_from(reach).unwrap();
            // Real part of exp(-i kappa d a/2) <w_d|exp(i kappa x)|w_0>.
            let sum: f64 = (shift..zero.x_nm.len())
                .map(|k| {
                    let x = zero.x_nm[k] - 0.5 * f64::from(reach) * lattice.spacing_nm();
                    zero.amplitude[k - shift] * zero.amplitude[k] * (kick * k_l * x).cos()
                })
                .sum();
            let found = lattice.kick_overlap(kick, Transfer { reach, ..Transfer::ON_SITE });
            assert_near(found.unwrap(), sum * step, 1e-9, "O_d");
        }
        if depth_er < 6.0 {
            continue;
        }
        for to_band in [1, 2] {
            let other = table(to_band);
            let sum: f64 = zero
                .amplitude
                .iter()
                .zip(&other.amplitude)
                .zip(&zero.x_nm)
                .map(|((a, b), x)| {
                    let phase = kick * k_l * x;
                    a * b * if to_band == 1 { phase.sin() } else { phase.cos() }
                })
                .sum();
            let up = Transfer { to_band, ..Transfer::ON_SITE };
            let down = Transfer { band: to_band, ..Transfer::ON_SITE };
            assert_near(lattice.kick_overlap(kick, up).unwrap(), sum * step, 1e-8, "up");
            assert_near(lattice.kick_overlap(kick, down).unwrap(), sum * step, 1e-8, "down");
        }
    }
}

#[test]
fn wannier_functions_are_orthonormal_and_decay() {
    for (depth_er, band) in [(2.0, 0), (6.0, 0), (10.0, 1), (25.0, 2), (50.0, 3)] {
        let input = WannierInput { band, points_per_site: 32, sites: 60 };
        let wannier = lattice(depth_er).wannier(input, &Unwatched).unwrap();
        let w = &wannier.amplitude;
        let step = wannier.x_nm[1] - wannier.x_nm[0];
        for reach in 0..4 {
            let shift = 32 * reach;
            let product: f64 = (shift..w.len()).map(|k| w[k] * w[k - shift]).sum::<f64>() * step;
            let expected = if reach == 0 { 1.0 } else { 0.0 };
            assert_near(product, expected, 1e-9, "orthonormality");
        }
        // Parity about the site, and the sign rule.
        let middle = w.len() / 2;
        let sign = if band % 2 == 0 { 1.0 } else { -1.0 };
        for k in 1..middle {
            assert_near(w[middle - k], sign * w[middle + k], 1e-12, "parity");
        }
        let rule = if band % 2 == 0 { w[middle] } else { w[middle + 1] };
        assert!(rule > 0.0, "sign of band {band}");
        // Exponential decay (Kohn 1959): each site further out is smaller by a steady factor.
        let size = |site: usize| {
            let start = middle + 32 * site;
            w[start..start + 32].iter().fold(0.0_f64, |m, v| m.max(v.abs()))
        };
        assert!(size(2) < 0.5 * size(1) && size(4) < 0.5 * size(3), "decay of band {band}");
    }
}

#[test]
fn signs_of_tunnelling_alternate_between_bands() {
    let lattice = lattice(8.0);
    assert!(lattice.tunnelling_er(hop(1, 0)).unwrap() > 0.0);
    assert!(lattice.tunnelling_er(hop(1, 1)).unwrap() < 0.0);
    assert!(lattice.tunnelling_er(hop(1, 2)).unwrap() > 0.0);
    let mean = -lattice.tunnelling_er(hop(0, 0)).unwrap();
    let bands = lattice.bands(BandsInput { count: 1, points: 3 }, &Unwatched).unwrap();
    let (edge, centre) = (bands.energies_er()[[0, 0]], bands.energies_er()[[0, 1]]);
    assert!(centre < mean && mean < edge);
}

#[test]
fn tunnelling_keeps_its_digits_in_deep_lattices() {
    // source: asymptotic width of Mathieu bands, DLMF 28.8.2 (from memory), for band 0:
    // b1 - a0 ~ 2^5 sqrt(2/pi) q^(3/4) exp(-4 sqrt q), q = s/4; the first
    // correction is 3/(16 sqrt q)-like, so the ratio tends to 1 from below.
    let ratio = |depth_er: f64| {
        let q = depth_er / 4.0;
        let leading =
            32.0 * std::f64::consts::FRAC_2_PI.sqrt() * q.powf(0.75) * (-4.0 * q.sqrt()).exp();
        4.0 * lattice(depth_er).tunnelling_er(hop(1, 0)).unwrap() / leading
    };
    let (near, far) = (ratio(100.0), ratio(400.0));
    assert!(0.93 < near && near < 1.0, "{near}");
    assert!(near < far && far < 1.0, "{near} {far}");
    // The correction halves as the square root of the depth doubles.
    assert_near((1.0 - near) / (1.0 - far), 2.0, 0.1, "first correction");
    assert_near(ratio(1000.0), 1.0, 0.02, "s = 1000");
}

#[test]
fn bands_that_all_but_touch() {
    // Nearly free motion: E = q^2 unfolded, whose Fourier coefficients are closed
    // forms: t_r = -(-1)^r 2/(pi r)^2 for the lowest band, up to terms of order s.
    for reach in 1..5 {
        let sign = if reach % 2 == 0 { -1.0 } else { 1.0 };
        let expected = sign * 2.0 / (std::f64::consts::PI * f64::from(reach)).powi(2);
        let found = lattice(1e-6).tunnelling_er(hop(reach, 0)).unwrap();
        assert_near(found, expected, 1e-6, "free");
    }
    // Both ways of summing over the zone agree where both work.
    for (depth_er, band) in [(0.2, 0), (3.0, 1), (9.0, 2), (16.0, 3)] {
        let (hop1, hop2) = (hop(1, band), hop(2, band));
        let energies = |q: &[f64]| {
            let grid = BandGrid { depths_er: &[depth_er], quasimomenta: q, count: band + 1 };
            band_energies_er(grid, &Unwatched).unwrap()
        };
        let points = 40_000;
        let q: Vec<f64> = (0..points).map(|k| (f64::from(k) + 0.5) / f64::from(points)).collect();
        let found = energies(&q);
        for (hop, reach) in [(hop1, 1.0), (hop2, 2.0)] {
            let sum: f64 = q
                .iter()
                .enumerate()
                .map(|(k, q)| found[[0, k, band]] * (std::f64::consts::PI * reach * q).cos())
                .sum();
            let expected = -sum / f64::from(points);
            assert_near(lattice(depth_er).tunnelling_er(hop).unwrap(), expected, 2e-9, "t");
        }
    }
    // Free motion in the fourth band, E = (4 - q)^2, has t_1 = -14/pi^2.
    let free = -14.0 / std::f64::consts::PI.powi(2);
    assert_near(lattice(6.0).tunnelling_er(hop(1, 3)).unwrap(), free, 0.03, "band 3 at 6 E_R");
    assert!(lattice(6.0).kick_overlap(0.75, Transfer { to_band: 3, ..Transfer::ON_SITE }).is_ok());
}

#[test]
fn effective_mass_from_finite_differences_and_free_limit() {
    for depth_er in [0.3, 2.0, 6.0, 15.0] {
        let lattice = lattice(depth_er);
        let h = 1e-3;
        let grid = BandGrid { depths_er: &[depth_er], quasimomenta: &[0.0, h, 2.0 * h], count: 1 };
        let e = band_energies_er(grid, &Unwatched).unwrap();
        let at = |k: usize| e[[0, k, 0]];
        // Fourth-order difference of an even function.
        let second = (32.0 * (at(1) - at(0)) - 2.0 * (at(2) - at(0))) / (12.0 * h * h);
        let mass = lattice.effective_mass(0).unwrap();
        assert!((mass * second / 2.0 - 1.0).abs() < 1e-5, "{depth_er} {mass}");
    }
    // Second-order perturbation theory in the depth: m*/m = 1 + s^2/32.
    assert_near(lattice(0.02).effective_mass(0).unwrap(), 1.0 + 1.25e-5, 1e-9, "shallow");
    assert!(lattice(6.0).effective_mass(1).unwrap() < 0.0);
}

#[test]
fn energies_against_an_independent_library() {
    // source: tests/reference/band_energies.json, made by scipy (Mathieu functions
    // and a dense eigensolver); the script stands beside it.
    let reference = fluxloom_testkit::reference("band_energies.json");
    for case in reference["cases"].as_array().unwrap() {
        let number = |value: &serde_json::Value| value.as_f64().unwrap();
        let depth_er = number(&case["depth_er"]);
        let quasimomentum = number(&case["quasimomentum"]);
        let expected: Vec<f64> =
            case["energies_er"].as_array().unwrap().iter().map(number).collect();
        let grid = BandGrid {
            depths_er: &[depth_er],
            quasimomenta: &[quasimomentum],
            count: expected.len(),
        };
        let found = band_energies_er(grid, &Unwatched).unwrap();
        for (band, energy) in expected.iter().enumerate() {
            assert_near(found[[0, 0, band]], *energy, 2e-12 * (1.0 + energy.abs()), "energy");
        }
    }
}

#[test]
fn many_depths_agree_with_one_at_a_time() {
    let depths: Vec<f64> = (0..4000).map(|k| 0.003 + 0.0251 * f64::from(k)).collect();
    let quasimomenta = [0.0, 1e-6, 0.5, 1.0 - 1e-5, 1.0, -0.31];
    let grid = BandGrid { depths_er: &depths, quasimomenta: &quasimomenta, count: 5 };
    let together = band_energies_er(grid, &Unwatched).unwrap();
    for (place, depth) in depths.iter().enumerate().step_by(37) {
        let single = BandGrid { depths_er: &[*depth], quasimomenta: &quasimomenta, count: 5 };
        let alone = band_energies_er(single, &Unwatched).unwrap();
        for (q, _) in quasimomenta.iter().enumerate() {
            for band in 0..5 {
                let (a, b) = (together[[place, q, band]], alone[[0, q, band]]);
                assert_near(a, b, 5e-12, "interpolated against direct");
            }
        }
    }
}

#[test]
fn hopeless_questions_are_refused() {
    let free = lattice(1e-4).kick_overlap(0.5, Transfer::ON_SITE).unwrap_err();
    assert_eq!(free.code(), "lattice.not_localised");
    let far = lattice(6.0).kick_overlap(0.5, Transfer { reach: 1, band: 0, to_band: 1 });
    assert_eq!(far.unwrap_err().code(), "lattice.reach_between_bands");
    assert!(lattice(6.0).kick_overlap(f64::NAN, Transfer::ON_SITE).is_err());
    let grid = BandGrid { depths_er: &[6.0, f64::NAN], quasimomenta: &[0.0], count: 4 };
    let error = band_energies_er(grid, &Unwatched).unwrap_err();
    assert!(error.to_string().starts_with("depths_er[1] = NaN"), "{error}");
    let bands = lattice(6.0).bands(BandsInput { count: 2, points: 5 }, &Unwatched).unwrap();
    assert!(bands.width_er(2).is_err());
}

#[test]
fn serialised_lattices_come_back_exactly_or_not_at_all() {
    let lattice = lattice(0.1 + 0.2);
    let text = serde_json::to_string(&lattice).unwrap();
    assert_eq!(serde_json::from_str::<Lattice>(&text).unwrap(), lattice);
    let bad = text.replace("180.0", "0.0");
    assert!(serde_json::from_str::<Lattice>(&bad).is_err());
    let atom = Atom::new("40K").unwrap();
    assert!(lattice.depth_hz(&atom) > 0.0);
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(64))]

    #[test]
    fn the_overlap_of_no_kick_is_the_identity(depth_er in 0.5..60.0_f64, reach in -3..4_i32) {
        let found = lattice(depth_er).kick_overlap(0.0, Transfer { reach, ..Transfer::ON_SITE });
        let expected = if reach == 0 { 1.0 } else { 0.0 };
        prop_assert!((found.unwrap() - expected).abs() < 1e-12);
    }

    #[test]
    fn the_overlap_is_even_in_the_kick(depth_er in 0.5..60.0_f64, kick in 0.0..9.0_f64) {
        let lattice = lattice(depth_er);
        let at = |kick| lattice.kick_overlap(kick, Transfer::ON_SITE).unwrap();
        prop_assert!((at(kick) - at(-kick)).abs() < 1e-12);
        prop_assert!(at(kick).abs() <= 1.0 + 1e-12);
    }
}

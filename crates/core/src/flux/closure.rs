//! Tubes: the flux round the loop of legs, and whether a loop phase means anything.
//!
//! Round the loop of a tube the local phase is 2 pi Phi_loop n + theta on site
//! n. If Phi_loop is whole, theta acts alike on every site. Otherwise it acts
//! only as far as a cloud over N sites overlaps with itself displaced in
//! momentum by the closure mismatch mu, the distance to the nearest integer:
//! |sin(pi N mu)/(N sin(pi mu))| for a uniform cloud.

/// Flux round the loop, in flux quanta: the sum over its links, with their signs.
#[must_use]
pub fn loop_flux(link_fluxes: &[f64]) -> f64 {
    link_fluxes.iter().sum()
}

/// Distance of a loop flux from the nearest integer, 0 to 1/2.
#[must_use]
pub fn closure_mismatch(loop_flux: f64) -> f64 {
    (loop_flux - loop_flux.round()).abs()
}

/// Overlap of a uniform cloud over `sites` sites with itself, displaced by `mismatch`.
#[must_use]
pub fn closure_overlap(mismatch: f64, sites: u32) -> f64 {
    let count = f64::from(sites);
    let half = std::f64::consts::PI * mismatch;
    if half.abs() < 1e-8 / count {
        return 1.0;
    }
    ((count * half).sin() / (count * half.sin())).abs()
}

#[cfg(test)]
mod tests {
    use super::*;
    use fluxloom_testkit::assert_near;

    #[test]
    fn overlap_is_the_geometric_sum() {
        // Closed form on the right, the sum it stands for on the left.
        for (mismatch, sites) in [(0.0, 7_u32), (1e-12, 60), (0.01, 60), (0.125, 60), (0.5, 3)] {
            let (mut re, mut im) = (0.0, 0.0);
            for n in 0..sites {
                let phase = std::f64::consts::TAU * mismatch * f64::from(n);
                re += phase.cos() / f64::from(sites);
                im += phase.sin() / f64::from(sites);
            }
            assert_near(closure_overlap(mismatch, sites), re.hypot(im), 1e-12, "overlap");
        }
        assert_near(closure_mismatch(loop_flux(&[0.375; 3])), 0.125, 1e-15, "three legs");
    }
}

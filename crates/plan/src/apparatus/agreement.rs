//! Depth and power of the lattice say the same thing twice, and must agree.
//!
//! The depth that the stated power makes goes as P sqrt(r)/(w1 w2) for a beam
//! sent back with the fraction r of its power, and as the root of the product of
//! P/(w1 w2) for two. Its standard error comes from those of powers, waists and r,
//! as far as the file states them; together with that of the stated depth (stated,
//! or common practice) it is what a disagreement is measured by. The stated depth
//! is the one that is used. Where the table lacks what the computed depth needs
//! (the polarisability of all other lines, or lines near the light), a
//! disagreement is told and never refused.

use fluxloom_core::atom::State;
use fluxloom_core::lattice::{lattice_depth_er, lattice_power_mw};

use super::Apparatus;
use super::balance::short;
use crate::Error;
use crate::files::Faults;

pub(super) const DEPTH: &str = "lattice.depth_er";

/// A disagreement by more combined standard errors than this is told.
const TOLD: f64 = 1.0;
/// One by more than this is a fault.
const REFUSED: f64 = 3.0;

/// Relative standard error of a depth that is stated as exact.
const EXACT: f64 = 1e-3;

/// Depth as stated and as the beams make it.
#[derive(Debug, Clone)]
pub(crate) struct Agreement {
    /// The state that the depth is computed for.
    pub state: State,
    pub stated_er: f64,
    pub computed_er: f64,
    /// Whether the table has what the computed depth needs: the polarisability of
    /// all lines, and those near the light.
    is_tabulated: bool,
    /// Standard errors of both depths together.
    pub error_er: f64,
    /// Powers of the beams that make the lattice: path, today, and what the
    /// stated depth takes; none where no power makes a lattice.
    powers: Vec<(String, f64, Option<f64>)>,
}

impl Agreement {
    /// Difference in combined standard errors.
    pub(crate) fn distance(&self) -> f64 {
        let apart = (self.computed_er - self.stated_er).abs();
        if apart == 0.0 { 0.0 } else { apart / self.error_er }
    }

    /// Both depths and how far apart they are.
    fn told(&self) -> String {
        let powers: Vec<String> = self
            .powers
            .iter()
            .map(|(path, today, _)| format!("{path} = {}", short(*today)))
            .collect();
        let distance = self.distance();
        format!(
            "{DEPTH} = {}, but {} make{} {} for {}, {} combined standard errors of {} away",
            short(self.stated_er),
            powers.join(" and "),
            if powers.len() == 1 { "s" } else { "" },
            short(self.computed_er),
            self.state,
            if distance < 100.0 { format!("{distance:.1}") } else { "more than 100".to_owned() },
            short(self.error_er)
        )
    }

    /// What a user is told of depths that differ, but may.
    pub(crate) fn caution(&self) -> Option<String> {
        (self.distance() > TOLD).then(|| {
            let table = if self.is_tabulated {
                ""
            } else {
                "; the table lacks lines that matter here, so the computed one may be what is wrong"
            };
            format!(
                "{}: the stated depth is used; measure it anew, or the power{table}",
                self.told()
            )
        })
    }

    /// What a file is refused for; not where the table itself may be what is wrong.
    fn fault(&self) -> Option<String> {
        if self.distance() <= REFUSED || !self.is_tabulated {
            return None;
        }
        let needed: Vec<String> = self
            .powers
            .iter()
            .filter_map(|(path, _, needed)| Some(format!("{path} = {}", short((*needed)?))))
            .collect();
        let needed = if needed.is_empty() {
            "no power of these beams makes a lattice".to_owned()
        } else {
            format!("{} would give the stated depth", needed.join(" and "))
        };
        Some(format!(
            "{}: {needed}; correct what is wrong, or state how well depth, power and waist are \
             known, as {{ value = {}, standard_error = ... }}",
            self.told(),
            short(self.stated_er)
        ))
    }
}

impl Apparatus {
    /// Depth of the lattice that the stated powers make, in lattice recoils, for
    /// [`Apparatus::depth_state`] at the field of today.
    ///
    /// # Errors
    /// As [`Apparatus::lattice_beams`] and
    /// [`fluxloom_core::lattice::lattice_depth_er`].
    pub fn depth_from_power_er(&self) -> Result<f64, Error> {
        let beams = self.lattice_beams()?;
        Ok(lattice_depth_er(&self.atom()?, &beams, self.depth_state()?, &self.bias())?)
    }

    /// The state that the depth is computed for: `cloud.start`, or the one with
    /// the largest F and m = -F.
    ///
    /// # Errors
    /// None for an apparatus that was read.
    pub fn depth_state(&self) -> Result<State, Error> {
        if let Ok(state) = self.state("cloud.start") {
            return Ok(state);
        }
        let f = self.atom()?.manifolds().into_iter().fold(0.0, f64::max);
        Ok(State::from_pair((f, -f))?)
    }

    /// Both depths, if the file states what the second one takes and light of
    /// this colour has one.
    pub(crate) fn agreement(&self) -> Option<Agreement> {
        if !self.has_light("lattice") {
            return None;
        }
        let computed_er = self.depth_from_power_er().ok()?;
        let stated_er = self.number(DEPTH).ok()?;
        let (stated_error_er, _) = self.standard_error(DEPTH).ok()??;
        // A number that is called exact is not better known than this.
        let stated_error_er = stated_error_er.max(EXACT * stated_er);
        let error_er = stated_error_er.hypot(computed_er * self.relative_error()?);
        let state = self.depth_state().ok()?;
        let powers = self.needed_powers(state, (stated_er, computed_er))?;
        let atom = self.atom().ok()?;
        let bluest = self.lattice_beams().ok()?.map(|beam| beam.wavelength_nm());
        let is_tabulated =
            atom.has_residual() && !bluest.iter().any(|nm| atom.is_beyond_lines(*nm));
        Some(Agreement { state, stated_er, computed_er, is_tabulated, error_er, powers })
    }

    /// Powers today, and those that the stated depth takes.
    fn needed_powers(
        &self,
        state: State,
        (stated_er, computed_er): (f64, f64),
    ) -> Option<Vec<(String, f64, Option<f64>)>> {
        let mut powers = Vec::new();
        for path in self.lattice_powers() {
            let today = self.number(&path).ok()?;
            powers.push((path, today, None));
        }
        let is_dark = powers.iter().all(|(_, today, _)| *today == 0.0);
        // All powers grow together, and the depth with them.
        let per_today = (computed_er > 0.0).then(|| stated_er / computed_er);
        let from_dark = if is_dark { self.power_from_dark_mw(state, stated_er) } else { None };
        for (_, today, needed) in &mut powers {
            let power = per_today.map(|factor| *today * factor).or(from_dark);
            *needed = power.filter(|power| power.is_finite());
        }
        Some(powers)
    }

    /// What the stated depth takes of beams that have no power today: one and what
    /// of it is sent back, or two that are equally strong.
    fn power_from_dark_mw(&self, state: State, stated_er: f64) -> Option<f64> {
        let [first, second] = self.lattice_beams().ok()?;
        let first = first.with_power_mw(1.0).ok()?;
        let second = match self.pair("lattice").as_slice() {
            [one] => first.reflected(self.number(&at_return(one)).ok()?).ok()?,
            _ => second.with_power_mw(1.0).ok()?,
        };
        let for_state = (state, &self.bias());
        lattice_power_mw(&self.atom().ok()?, &[first, second], stated_er, for_state).ok()
    }

    /// Relative standard error of the computed depth from the file's own.
    fn relative_error(&self) -> Option<f64> {
        let stated =
            |path: &str| self.number(&format!("{path}.standard_error")).ok().unwrap_or_default();
        let beams = self.pair("lattice");
        let share = if beams.len() == 1 { 1.0 } else { 0.5 };
        let mut squares = 0.0;
        let mut add = |part: f64| squares += part * part;
        for beam in &beams {
            let at = |key: &str| format!("beams.{beam}.{key}");
            let power = self.number(&at("power_mw")).ok()?;
            if power > 0.0 {
                add(share * stated(&at("power_mw")) / power);
            }
            let waists = self.one_or_two(&at("waist_um")).ok()?;
            let error = stated(&at("waist_um"));
            match waists {
                // One number that counts twice.
                [one, two] if one == two => add(2.0 * share * error / one),
                [one, two] => {
                    add(share * error / one);
                    add(share * error / two);
                }
            }
            let returned = self.number(&at_return(beam)).unwrap_or(1.0);
            if beams.len() == 1 && returned > 0.0 {
                add(0.5 * stated(&at_return(beam)) / returned);
            }
        }
        Some(squares.sqrt())
    }

    /// The settings that the computed depth rests on, powers aside.
    pub(super) fn depth_inputs(&self) -> Vec<String> {
        let fixed = [
            "lattice.beams",
            "lattice.angle_deg",
            "lattice.axis",
            "lattice.plane_normal",
            "cloud.atom",
            "cloud.start",
            "field.magnitude_gauss",
            "field.direction",
        ];
        let mut paths: Vec<String> = fixed.map(str::to_owned).to_vec();
        for beam in self.pair("lattice") {
            for key in
                ["laser", "waist_um", "polarisation_deg", "ellipticity_deg", "return_fraction"]
            {
                paths.push(format!("beams.{beam}.{key}"));
            }
            if let Ok(laser) = self.text(&format!("beams.{beam}.laser")) {
                paths.push(format!("lasers.{laser}.wavelength_nm"));
            }
        }
        paths
    }

    /// The powers of the lattice beams.
    pub(super) fn lattice_powers(&self) -> Vec<String> {
        self.pair("lattice").iter().map(|beam| format!("beams.{beam}.power_mw")).collect()
    }
}

fn at_return(beam: &str) -> String {
    format!("beams.{beam}.return_fraction")
}

/// Reports depth and power that cannot both be right. Where one of the settings
/// they rest on is at fault already, nothing can be learnt from comparing them.
pub(super) fn check(apparatus: &Apparatus, faults: &mut Faults) {
    if !faults.is_whole() {
        return;
    }
    let head = ["format", "version", DEPTH].map(str::to_owned);
    let settings = apparatus.depth_inputs().into_iter().chain(apparatus.lattice_powers());
    if head.into_iter().chain(settings).any(|path| faults.spoils(&path) || faults.expects(&path)) {
        return;
    }
    if let Some(message) = apparatus.agreement().and_then(|agreement| agreement.fault()) {
        let line = apparatus.tree.find(&["lattice", "depth_er"]).and_then(|node| node.line);
        faults.add("apparatus.depth_disagrees", line, DEPTH, message);
    }
}

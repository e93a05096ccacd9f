//! The beams of a file as light: which way they go, and what is polarised how.
//!
//! A direction comes from the pair that a beam belongs to. In the plane of the
//! pair, with the lattice axis a, the normal n and c = n x a, beams that cross at
//! the full angle A with the tilt T go along
//!
//! ```text
//! k1, k2 = (+-sin(A/2) cos T - cos(A/2) sin T) a + (+-sin(A/2) sin T + cos(A/2) cos T) c
//! ```
//!
//! so that k1 - k2 lies at T from the axis and k1 + k2 across it. Lattice beams
//! have no tilt; one alone goes along the axis. Polarisation angles count from the
//! plane of the pair, so that light stays transverse when the pair is turned.

use fluxloom_core::degrees::{cos_deg, sin_deg};
use fluxloom_core::light::Bias;
use fluxloom_core::light::polarisation::{Bench, from_bench};
use fluxloom_core::vector::{cross, dot, unit};
use fluxloom_core::{Beam, BeamInput};

use super::place::fault;
use super::{Apparatus, Origin, keys};
use crate::Error;
use crate::files::{nearest, path};

/// Where a beam goes, and the normal of the plane it lies in; unit vectors.
#[derive(Debug, Clone, Copy)]
pub(super) struct Seat {
    pub direction: [f64; 3],
    normal: [f64; 3],
}

/// What a beam of light is made of, with an example of how it is written.
const LIGHT: [(&str, &str); 3] =
    [("power_mw", "40.0"), ("waist_um", "120.0"), ("polarisation_deg", "90.0")];

/// Beams in two pairs are one beam if their directions agree to this.
const SAME_DIRECTION: f64 = 1e-9;

impl Apparatus {
    /// A beam as it stands today, focused on the atoms. Of two radii the first
    /// lies in the plane of the pair, the second along its normal.
    ///
    /// # Errors
    /// [`Error::Faults`]: `apparatus.unknown_beam`, `apparatus.beam_without_direction`
    /// for one that is in no pair, `apparatus.beam_in_two_pairs` for one whose
    /// pairs send it different ways, `apparatus.not_stated` if its power, waist
    /// or polarisation is not there.
    pub fn beam(&self, name: &str) -> Result<Beam, Error> {
        let names = self.names("beams");
        let at = path::join("beams", name);
        if !names.iter().any(|known| known == name) {
            let message = match names.as_slice() {
                [] => format!("{}: this apparatus has no beams: add one", path::short(&at)),
                _ => format!(
                    "{}: there is no such beam; [beams] has {}",
                    path::short(&at),
                    path::listed(&names)
                ),
            };
            let meant = nearest(name, names.iter().map(String::as_str)).map(str::to_owned);
            return Err(one("apparatus.unknown_beam", &at, message, meant));
        }
        let mut seats = Vec::new();
        for pair in ["raman", "lattice"] {
            let beams = self.pair(pair);
            if let Some(place) = beams.iter().position(|beam| beam == name) {
                seats.extend(self.seats(pair)?.get(place).copied());
            }
        }
        let away = |a: &Seat, b: &Seat| {
            let turned = cross(a.direction, b.direction);
            dot(turned, turned).sqrt() > SAME_DIRECTION || dot(a.direction, b.direction) < 0.0
        };
        match seats.as_slice() {
            [] => {
                let message = format!(
                    "{at} is named in neither raman.beams nor lattice.beams, and its direction is \
                     that of its place in a pair: name it in one of them"
                );
                Err(one("apparatus.beam_without_direction", &at, message, None))
            }
            [first, second] if away(first, second) => {
                let message = format!(
                    "{at} is named in raman.beams and in lattice.beams, and their angles send it \
                     two ways: give each pair its own beam, or angles that agree"
                );
                Err(one("apparatus.beam_in_two_pairs", &at, message, None))
            }
            [seat, ..] => self.lit(name, *seat),
        }
    }

    /// The two beams of the lattice: crossing beams in the order of
    /// `lattice.beams`, or a beam and its reflection with `return_fraction` of
    /// its power.
    ///
    /// # Errors
    /// [`Error::Faults`] (`apparatus.not_stated`) if power, waist or
    /// polarisation of one is not there.
    pub fn lattice_beams(&self) -> Result<[Beam; 2], Error> {
        let (names, seats) = (self.list("lattice.beams")?, self.seats("lattice")?);
        match (names.as_slice(), seats.as_slice()) {
            ([one], [seat]) => {
                let beam = self.lit(one, *seat)?;
                let part = self.number(&format!("beams.{one}.return_fraction"))?;
                Ok([beam, beam.reflected(part)?])
            }
            ([one, two], [first, second]) => Ok([self.lit(one, *first)?, self.lit(two, *second)?]),
            // The reader saw to it that there are one or two.
            _ => {
                let message = "lattice.beams takes one beam or two".to_owned();
                Err(one("apparatus.wrong_kind", "lattice.beams", message, None))
            }
        }
    }

    /// The bias field of today; none where the file states no strength.
    #[must_use]
    pub fn bias(&self) -> Bias {
        Bias {
            field_gauss: self.number("field.magnitude_gauss").unwrap_or(0.0),
            field_direction: self.field_direction(),
        }
    }

    /// Whether the beams of a pair are there and state what light needs.
    pub(crate) fn has_light(&self, pair: &str) -> bool {
        let beams = self.pair(pair);
        !beams.is_empty() && beams.iter().all(|beam| self.missing(beam).is_empty())
    }

    /// The names of the beams of a pair; empty where there is none.
    pub(super) fn pair(&self, pair: &str) -> Vec<String> {
        self.list(&path::join(pair, "beams")).unwrap_or_default()
    }

    /// What a beam does not state of its light, with examples.
    fn missing(&self, beam: &str) -> Vec<(&'static str, &'static str)> {
        let stated = |key: &str| matches!(self.origin(&format!("beams.{beam}.{key}")), Ok(origin) if origin != Origin::NotStated);
        LIGHT.into_iter().filter(|(key, _)| !stated(key)).collect()
    }

    /// Where the beams of a pair go, in the order of its `beams`.
    ///
    /// # Errors
    /// As for a setting that is not stated.
    pub(super) fn seats(&self, pair: &str) -> Result<Vec<Seat>, Error> {
        let at = |key: &str| path::join(pair, key);
        let along = unit(self.vector("lattice.axis")?, "lattice.axis")?;
        let normal = unit(self.vector(&at("plane_normal"))?, &at("plane_normal"))?;
        // What a normal leans along the axis is typing, and is taken out.
        let across = unit(cross(normal, along), &at("plane_normal"))?;
        let normal = cross(along, across);
        if self.pair(pair).len() == 1 {
            return Ok(vec![Seat { direction: along, normal }]);
        }
        let angle_deg = self.number(&at("angle_deg"))?;
        let tilt_deg = if pair == "raman" { self.number("raman.tilt_deg")? } else { 0.0 };
        let (sine, cosine) = (sin_deg(0.5 * angle_deg), cos_deg(0.5 * angle_deg));
        let (turn_sine, turn_cosine) = (sin_deg(tilt_deg), cos_deg(tilt_deg));
        let seat = |sign: f64| Seat {
            direction: combined(
                [
                    sign * sine * turn_cosine - cosine * turn_sine,
                    sign * sine * turn_sine + cosine * turn_cosine,
                ],
                [along, across],
            ),
            normal,
        };
        Ok(vec![seat(1.0), seat(-1.0)])
    }

    /// A beam at its place.
    pub(super) fn lit(&self, name: &str, Seat { direction, normal }: Seat) -> Result<Beam, Error> {
        let at = |key: &str| format!("beams.{name}.{key}");
        let missing = self.missing(name);
        if let Some((first, _)) = missing.first() {
            return Err(unlit(name, &at(first), &missing));
        }
        let bench = Bench {
            polarisation_deg: self.number(&at("polarisation_deg"))?,
            ellipticity_deg: self.number(&at("ellipticity_deg"))?,
        };
        let waist_um = self.one_or_two(&at("waist_um"))?;
        let [first, second] = waist_um;
        Ok(Beam::new(BeamInput {
            wavelength_nm: self.wavelength_of_beam_nm(name)?,
            power_mw: self.number(&at("power_mw"))?,
            waist_um,
            direction,
            polarisation: from_bench(direction, normal, bench)?,
            waist_axis: (first != second).then(|| cross(normal, direction)),
            ..BeamInput::CENTRED
        })?)
    }
}

/// The error of a beam that does not state its light.
fn unlit(name: &str, at: &str, missing: &[(&str, &str)]) -> Error {
    let keys: Vec<&str> = missing.iter().map(|(key, _)| *key).collect();
    let about = |key: &str| {
        keys::all().find(|row| row.pattern == format!("beams.*.{key}")).map_or("", |row| row.about)
    };
    let lines: Vec<String> = missing
        .iter()
        .map(|(key, example)| format!("{key} = {example} ({})", about(key)))
        .collect();
    let message = format!(
        "beams.{name} states no {}, without which its light cannot be computed: add, for example, \
         {} to [beams.{name}]",
        keys.join(", no "),
        lines.join(" and ")
    );
    one("apparatus.not_stated", at, message, None)
}

fn combined([a, b]: [f64; 2], [one, two]: [[f64; 3]; 2]) -> [f64; 3] {
    let ([ox, oy, oz], [tx, ty, tz]) = (one, two);
    [a * ox + b * tx, a * oy + b * ty, a * oz + b * tz]
}

fn one(code: &str, at: &str, message: String, meant: Option<String>) -> Error {
    Error::Faults(vec![fault(code, at, message, meant)])
}

//! What a program learns about an error: its code, its family, its numbers.

use super::{Detail, Error, Kind};

impl Error {
    /// The stable code, such as `lattice.depth_out_of_range`.
    #[must_use]
    pub fn code(&self) -> &'static str {
        match self {
            Self::OutOfRange { limit, .. } => limit.code,
            Self::NotWhole { .. } => "count.not_whole",
            Self::EmptyRange { .. } => "range.empty",
            Self::NoDirection { .. } | Self::NoPolarisation { .. } => "geometry.no_direction",
            Self::NotTransverse { .. } => "beam.not_transverse",
            Self::BadFlux { code, .. } | Self::Contradiction { code, .. } => code,
            Self::UnknownAtom { .. } => "atom.unknown",
            Self::BadState { .. } => "state.not_a_state",
            Self::NoSuchState { .. } => "state.unknown",
            Self::OnResonance { .. } => "light.on_resonance",
            Self::NoLattice { .. } => "lattice.no_interference",
            Self::PowerOutOfReach { .. } => "lattice.power_out_of_reach",
            Self::TuneOutCount { found_nm, .. } if found_nm.is_empty() => "light.no_tune_out",
            Self::TuneOutCount { .. } => "light.several_tune_outs",
            Self::UnknownData { .. } => "atom.unknown_data",
            Self::BadData { .. } => "atom.bad_data",
            Self::NoBeams => "raman.no_beams",
            Self::TooManySolutions { .. } => "flux.too_many_solutions",
            Self::MemoryOverLimit { .. } => "memory.over_limit",
            Self::NotLocalised { .. } => "lattice.not_localised",
            Self::Cancelled => "run.cancelled",
        }
    }

    /// The family of the error.
    #[must_use]
    pub fn kind(&self) -> Kind {
        match self {
            Self::NotLocalised { .. } => Kind::Numerical,
            Self::NoLattice { .. } | Self::PowerOutOfReach { .. } => Kind::Infeasible,
            Self::Cancelled => Kind::Cancelled,
            _ => Kind::Input,
        }
    }

    /// The numbers and texts behind the message.
    #[must_use]
    pub fn details(&self) -> Vec<(&'static str, Detail)> {
        use Detail::{Number, Text};
        match self {
            Self::OutOfRange { limit, field, value } | Self::NotWhole { limit, field, value } => {
                vec![
                    ("field", Text(field.clone())),
                    ("value", Number(*value)),
                    ("low", Number(limit.low)),
                    ("high", Number(limit.high)),
                ]
            }
            Self::EmptyRange { field, low, high } => {
                vec![("field", Text(field.clone())), ("low", Number(*low)), ("high", Number(*high))]
            }
            Self::NoDirection { field, .. } | Self::NoPolarisation { field, .. } => {
                vec![("field", Text(field.clone()))]
            }
            Self::NotTransverse { field, lean_deg, .. } => {
                vec![("field", Text(field.clone())), ("lean_deg", Number(*lean_deg))]
            }
            Self::BadFlux { text, .. } => {
                vec![("field", Text("flux".into())), ("value", Text(text.clone()))]
            }
            Self::UnknownAtom { name, suggestion, .. } => {
                named(("value", name), suggestion.as_deref())
            }
            Self::BadState { text, .. } => vec![("value", Text(text.clone()))],
            Self::NoSuchState { atom, state, known } => vec![
                ("atom", Text(atom.clone())),
                ("value", Text(state.clone())),
                ("known", Text(known.clone())),
            ],
            Self::OnResonance { wavelength_nm, line, detuning_hz, window_hz, outside_nm } => vec![
                ("wavelength_nm", Number(*wavelength_nm)),
                ("line", Text(line.clone())),
                ("detuning_hz", Number(*detuning_hz)),
                ("window_hz", Number(*window_hz)),
                ("below_nm", Number(outside_nm.0)),
                ("above_nm", Number(outside_nm.1)),
            ],
            Self::PowerOutOfReach { state, depth_er, power_mw, most_mw } => vec![
                ("state", Text(state.clone())),
                ("depth_er", Number(*depth_er)),
                ("power_mw", Number(*power_mw)),
                ("high", Number(*most_mw)),
            ],
            Self::NoLattice { state, wavelength_nm } => {
                vec![("state", Text(state.clone())), ("wavelength_nm", Number(*wavelength_nm))]
            }
            Self::TuneOutCount { range_nm, found_nm, nearest_nm, .. } => {
                let mut details = vec![("low", Number(range_nm.0)), ("high", Number(range_nm.1))];
                let listed = if found_nm.is_empty() { nearest_nm } else { found_nm };
                let listed: Vec<String> = listed.iter().map(f64::to_string).collect();
                details.push(("tune_outs_nm", Text(listed.join(", "))));
                details
            }
            Self::UnknownData { atom, key, suggestion } => {
                let mut details = named(("value", key), suggestion.as_deref());
                details.push(("atom", Text(atom.clone())));
                details
            }
            Self::BadData { atom, key, value, .. } => vec![
                ("atom", Text(atom.clone())),
                ("field", Text(key.clone())),
                ("value", Number(*value)),
            ],
            Self::TooManySolutions { field, low, high, count, .. } => vec![
                ("field", Text(field.clone())),
                ("low", Number(*low)),
                ("high", Number(*high)),
                ("count", Number(*count)),
            ],
            Self::MemoryOverLimit { asked_bytes, limit_bytes } => {
                vec![("asked_bytes", Number(*asked_bytes)), ("limit_bytes", Number(*limit_bytes))]
            }
            Self::NotLocalised { band, depth_er, .. } => {
                #[allow(clippy::cast_precision_loss)]
                let band = *band as f64;
                vec![("band", Number(band)), ("depth_er", Number(*depth_er))]
            }
            Self::NoBeams | Self::Contradiction { .. } | Self::Cancelled => Vec::new(),
        }
    }
}

fn named(name: (&'static str, &str), suggestion: Option<&str>) -> Vec<(&'static str, Detail)> {
    let mut details = vec![(name.0, Detail::Text(name.1.to_owned()))];
    if let Some(suggestion) = suggestion {
        details.push(("did_you_mean", Detail::Text(suggestion.to_owned())));
    }
    details
}

//! Random texts, damaged files and numbers of any size.

use fluxloom_plan::apparatus::Apparatus;
use proptest::prelude::*;
use serde_json::json;

use crate::{BAY, bay, bay_with, change};

/// Tern Bay after some accidents.
fn damaged() -> impl Strategy<Value = String> {
    let accident = (0_usize..5, 0..BAY.len(), 0..BAY.len(), any::<char>());
    prop::collection::vec(accident, 1..6).prop_map(|accidents| {
        let mut chars: Vec<char> = BAY.chars().collect();
        for (kind, at, other, letter) in accidents {
            let (at, other) = (at % chars.len().max(1), other % chars.len().max(1));
            match kind {
                _ if chars.is_empty() => {}
                0 => chars.truncate(at.max(1)),
                1 => chars.swap(at, other),
                2 => chars[at] = letter,
                3 => chars
                    .insert(at, ['=', '[', ']', '"', '\n', '.', ',', '{', '-', '#'][other % 10]),
                _ => {
                    let text: String = chars.iter().collect();
                    let count = text.lines().count().max(1);
                    let kept = text.lines().enumerate().filter(|(i, _)| *i != at % count);
                    chars = kept.flat_map(|(_, line)| line.chars().chain(['\n'])).collect();
                }
            }
        }
        chars.into_iter().collect()
    })
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 200, failure_persistence: None, ..ProptestConfig::default() })]

    #[test]
    fn no_text_is_a_surprise(text in any::<String>()) {
        let _ = Apparatus::from_toml(&text);
        let _ = Apparatus::from_json(&text);
    }

    #[test]
    fn damage_is_found_or_harmless(text in damaged()) {
        match Apparatus::from_toml(&text) {
            Ok(ap) => prop_assert_eq!(Apparatus::from_json(&ap.to_json()).unwrap(), ap),
            Err(error) => {
                prop_assert!(!error.faults().is_empty());
                for fault in error.faults() {
                    prop_assert!(fault.line.is_none_or(|line| line <= text.matches('\n').count() + 1));
                    prop_assert!(!fault.message.is_empty() && !fault.code.is_empty());
                }
            }
        }
    }

    #[test]
    fn numbers_keep_all_their_bits(depth in 1e-300..1000.0_f64, power in 0.0..800.0_f64) {
        let changes = [("lattice.depth_er", json!(depth)), ("beams.lattice.power_mw", json!(power))];
        // Without a waist any depth goes with any power.
        let bay = Apparatus::from_toml(&bay_with("waist_um = 120.0 ", "# ")).unwrap();
        let ap = change(&bay, &changes).unwrap();
        let toml = Apparatus::from_toml(&ap.to_toml()).unwrap();
        let json = Apparatus::from_json(&ap.to_json()).unwrap();
        for back in [&ap, &toml, &json] {
            prop_assert_eq!(back.number("lattice.depth_er").unwrap().to_bits(), depth.to_bits());
            prop_assert_eq!(back.number("beams.lattice.power_mw").unwrap().to_bits(), power.to_bits());
        }
    }

    #[test]
    fn no_path_is_a_surprise(path in "[a-z_.\"*9/,]{0,30}", value in -1e3..1e3_f64) {
        let _ = bay().get(&path);
        let _ = change(&bay(), &[(path.as_str(), json!(value))]);
    }
}

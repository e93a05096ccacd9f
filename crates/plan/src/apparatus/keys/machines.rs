//! Rows about what the control system plays and reads: modulators,
//! synthesisers, antennas, analogue channels, timing, detection.

use fluxloom_core::limits::{FIELD_GAUSS, TIME_S};

use super::Kind::{Choice, Count, Flag, Name, NonZero, Number, Range, Setting, Vector};
use super::Need::{Default, Optional, Required};
use super::Standard::{Number as N, Text as T, Whole as W};
use super::{Key, ranges as r};

const SYNTHESISER: &str = "common practice: direct digital synthesis at 1 GS/s with 32-bit frequency (0.23 Hz), \
     16-bit phase and 14-bit amplitude words";

/// Settings that a slow analogue channel can play.
pub(crate) const PLAYABLE: &[&str] = &["beams.*.power_mw", "field.magnitude_gauss"];

pub(super) const KEYS: &[Key] = &[
    Key::new("modulators.*.beam", Name("beams"), Required, "the beam it acts on"),
    Key::new("modulators.*.centre_hz", Number(r::CARRIER_HZ), Required, "the centre of its band"),
    Key::new("modulators.*.bandwidth_hz", Number(r::CARRIER_HZ), Optional, "the full band"),
    Key::new(
        "modulators.*.order",
        NonZero(r::ORDER),
        Default(W(1), "first order, shifted up, unless said"),
        "the diffraction order; its sign shifts up or down",
    ),
    Key::new(
        "modulators.*.passes",
        Count(r::PASSES),
        Default(W(1), "a single pass unless said"),
        "how often the light passes",
    ),
    Key::new(
        "modulators.*.sidebands",
        Choice(&["one", "both"]),
        Default(T("one"), "one sideband unless said"),
        "whether the unwanted partner is there",
    ),
    Key::new(
        "modulators.*.max_tones",
        Count(r::TONES),
        Default(W(1), "one tone unless said"),
        "the most tones at once",
    ),
    Key::new("modulators.*.synthesiser", Name("synthesisers"), Optional, "what drives it"),
    Key::new(
        "synthesisers.*.clock_hz",
        Number(r::CARRIER_HZ),
        Default(N(1e9), SYNTHESISER),
        "the clock",
    ),
    Key::new(
        "synthesisers.*.frequency_bits",
        Count(r::BITS),
        Default(W(32), SYNTHESISER),
        "bits of a frequency word",
    ),
    Key::new(
        "synthesisers.*.phase_bits",
        Count(r::BITS),
        Default(W(16), SYNTHESISER),
        "bits of a phase word",
    ),
    Key::new(
        "synthesisers.*.amplitude_bits",
        Count(r::BITS),
        Default(W(14), SYNTHESISER),
        "bits of an amplitude word",
    ),
    Key::new(
        "synthesisers.*.time_step_s",
        Number(r::STEP_S),
        Optional,
        "the grid on which words can change",
    ),
    Key::new(
        "synthesisers.*.phase_continuous",
        Flag,
        Optional,
        "whether the phase runs on when the frequency changes",
    ),
    Key::new(
        "synthesisers.*.reference",
        Name("synthesisers"),
        Optional,
        "the synthesiser whose clock reference it shares",
    ),
    Key::new(
        "radio.*.range_hz",
        Range(r::FREQUENCY_HZ, None),
        Optional,
        "the frequencies it can be driven at",
    ),
    Key::new(
        "radio.*.max_amplitude_gauss",
        Number(FIELD_GAUSS),
        Optional,
        "the largest field amplitude at the atoms",
    ),
    Key::new("radio.*.direction", Vector, Optional, "the direction of its field"),
    Key::new("radio.*.synthesiser", Name("synthesisers"), Optional, "what drives it"),
    Key::new(
        "channels.*.drives",
        Setting(PLAYABLE),
        Required,
        "the setting it plays, such as \"field.magnitude_gauss\"",
    ),
    Key::new("channels.*.bits", Count(r::BITS), Optional, "bits of its words"),
    Key::new(
        "channels.*.full_scale_mw",
        Number(r::FULL_SCALE_MW),
        Optional,
        "the value at its largest word",
    ),
    Key::new(
        "channels.*.full_scale_gauss",
        Number(r::FULL_SCALE_GAUSS),
        Optional,
        "the value at its largest word",
    ),
    Key::new("channels.*.time_step_s", Number(r::STEP_S), Optional, "the grid of its changes"),
    Key::new("channels.*.slew_mw_per_s", Number(r::RATE), Optional, "its fastest change"),
    Key::new("channels.*.slew_gauss_per_s", Number(r::RATE), Optional, "its fastest change"),
    Key::new("timing.trigger_step_s", Number(r::STEP_S), Optional, "the grid of triggers"),
    Key::new(
        "timing.dead_time_s",
        Number(TIME_S),
        Optional,
        "the time lost after a change of tones",
    ),
    Key::new("timing.max_duration_s", Number(r::DURATION_S), Optional, "the longest sequence"),
    Key::new(
        "detection.method",
        Choice(&["absorption", "fluorescence"]),
        Optional,
        "how atoms are counted",
    ),
    Key::new(
        "detection.expansion_s",
        Number(TIME_S),
        Optional,
        "the time of free expansion before the picture",
    ),
    Key::new(
        "detection.gradient_gauss_per_cm",
        Number(r::GRADIENT),
        Optional,
        "the gradient that separates the legs while the cloud falls",
    ),
    Key::new("detection.pixel_um", Number(r::SIZE_UM), Optional, "a pixel in the object plane"),
    Key::new(
        "detection.max_optical_depth",
        Number(r::OPTICAL_DEPTH),
        Optional,
        "the largest optical depth that can be told",
    ),
    Key::new(
        "detection.count_noise_per_pixel",
        Number(r::ATOMS_RMS),
        Optional,
        "rms number of atoms in a pixel",
    ),
    Key::new(
        "detection.efficiency",
        Number(r::EFFICIENCY),
        Optional,
        "the fraction of atoms that is seen",
    ),
];

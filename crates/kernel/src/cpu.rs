//! Choice of the CPU level at run time.
//!
//! The environment variable `FLUXLOOM_CPU=baseline` forces the portable code,
//! for comparisons and for machines that misreport themselves. It is read once.

use std::sync::OnceLock;

/// A set of vector instructions that the loops are compiled for.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Level {
    /// What every CPU of the target has.
    Baseline,
    /// x86-64 with AVX2: four doubles at a time.
    Avx2,
    /// x86-64 with AVX-512: eight doubles at a time.
    Avx512,
}

impl Level {
    /// The name as shown in version reports.
    #[must_use]
    pub fn name(self) -> &'static str {
        match self {
            Self::Baseline => "baseline",
            Self::Avx2 => "avx2",
            Self::Avx512 => "avx512",
        }
    }
}

/// The level used by every loop of this process.
#[must_use]
pub fn level() -> Level {
    static LEVEL: OnceLock<Level> = OnceLock::new();
    *LEVEL.get_or_init(|| {
        let forced = std::env::var("FLUXLOOM_CPU").unwrap_or_default();
        if forced.eq_ignore_ascii_case("baseline") { Level::Baseline } else { detect() }
    })
}

#[cfg(target_arch = "x86_64")]
fn detect() -> Level {
    if std::arch::is_x86_feature_detected!("avx512f")
        && std::arch::is_x86_feature_detected!("avx512dq")
    {
        Level::Avx512
    } else if std::arch::is_x86_feature_detected!("avx2") {
        Level::Avx2
    } else {
        Level::Baseline
    }
}

#[cfg(not(target_arch = "x86_64"))]
fn detect() -> Level {
    Level::Baseline
}

/// Defines `fn name(level, args...)`, which runs `body(args...)` compiled for `level`.
///
/// `body` must be `#[inline(always)]`, so that it takes on the instructions of
/// the function it is inlined into.
macro_rules! dispatch {
    ($(#[$doc:meta])* fn $name:ident($($arg:ident: $kind:ty),* $(,)?) = $body:path) => {
        $(#[$doc])*
        fn $name(level: $crate::cpu::Level, $($arg: $kind),*) {
            #[cfg(target_arch = "x86_64")]
            {
                #[target_feature(enable = "avx2")]
                fn avx2($($arg: $kind),*) {
                    $body($($arg),*);
                }
                #[target_feature(enable = "avx512f,avx512dq")]
                fn avx512($($arg: $kind),*) {
                    $body($($arg),*);
                }
                match level {
                    // SAFETY: `Level` beyond the baseline comes only from `cpu::level`,
                    // which found these instructions on this CPU.
                    $crate::cpu::Level::Avx512 => return unsafe { avx512($($arg),*) },
                    // SAFETY: as above.
                    $crate::cpu::Level::Avx2 => return unsafe { avx2($($arg),*) },
                    $crate::cpu::Level::Baseline => {}
                }
            }
            #[cfg(not(target_arch = "x86_64"))]
            let _ = level;
            $body($($arg),*);
        }
    };
}
pub(crate) use dispatch;

//! Units of potential.

/// How many mV one of `unit` is; `None` when it is no unit of potential. Case is free, so a megavolt
/// can't be said; none was ever recorded from a body.
pub(super) fn millivolts_per(unit: &str) -> Option<f64> {
    match unit.trim().to_lowercase().as_str() {
        "mv" | "millivolt" | "millivolts" => Some(1.0),
        // U+00B5 (micro sign) and U+03BC (Greek mu) both occur.
        "uv" | "\u{b5}v" | "\u{3bc}v" | "microvolt" | "microvolts" => Some(1e-3),
        "nv" | "nanovolt" | "nanovolts" => Some(1e-6),
        "v" | "volt" | "volts" => Some(1e3),
        _ => None,
    }
}

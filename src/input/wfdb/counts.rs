//! From values back to whole counts.

use crate::input::ExportError;
use crate::recording::{Samples, Signal};

/// Bits of a stored count.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub(super) enum Width {
    Bits16,
    Bits24,
    Bits32,
}

impl Width {
    /// Also the number of the storage format.
    pub fn bits(self) -> u32 {
        match self {
            Width::Bits16 => 16,
            Width::Bits24 => 24,
            Width::Bits32 => 32,
        }
    }

    /// The code for "no sample".
    fn invalid(self) -> i32 {
        (-1i64 << (self.bits() - 1)) as i32
    }

    /// The largest magnitude that is used. The limit itself is left free: a reader would take it for clipped.
    fn largest(self) -> i64 {
        (1i64 << (self.bits() - 1)) - 2
    }
}

/// A signal in counts.
pub(super) struct Counts {
    /// Counts per unit.
    pub gain: f64,
    /// The count of 0.
    pub baseline: i64,
    /// The narrowest format that holds them.
    pub width: Width,
    /// `None` in a gap.
    counts: Vec<Option<i32>>,
}

/// Decimal places that are looked for in values without a resolution.
const MOST_DECIMALS: i32 = 9;

impl Counts {
    /// One count for each step of the source; for decimal text, of its last digit.
    pub fn of(signal: &Signal) -> Result<Self, ExportError> {
        let samples = &signal.samples;
        let (low, high) = samples.extremes().unwrap_or((0.0, 0.0));
        let gain = match signal.resolution {
            Some(step) => per_unit(step),
            None => decimal_gain(samples).unwrap_or_else(|| finest_gain(low, high)),
        };
        let phase = phase(samples, gain);
        let steps = |value: f64| (value * gain - phase).round();
        let [lowest, highest] = [low, high].map(steps);
        let Some((width, zero)) = narrowest(lowest, highest) else {
            return Err(ExportError::Range { signal: signal.name.clone() });
        };
        let count = |index: usize| Some((steps(samples.at(index)?) - zero) as i32);
        let counts = (0..samples.len()).map(count).collect();
        Ok(Self { gain, baseline: -(zero as i64), width, counts })
    }

    /// The stored count; the code for "no sample" in a gap and behind the end.
    pub fn at(&self, index: usize, width: Width) -> i32 {
        self.counts.get(index).copied().flatten().unwrap_or(width.invalid())
    }

    /// The sum of `length` stored counts, 16 bits of it, as a signed number.
    pub fn checksum(&self, width: Width, length: usize) -> i16 {
        (0..length).fold(0i16, |sum, index| sum.wrapping_add(self.at(index, width) as i16))
    }
}

/// How far the samples lie from whole steps, -0.5 to 0.5. A source may have no count for 0, but the header holds
/// a whole one: all samples move by the same, rather than each to its side. Samples that lie on no common steps
/// each go to the nearest.
fn phase(samples: &Samples, gain: f64) -> f64 {
    let mut steps = samples.runs().flat_map(|(_, run)| run).map(|value| value * gain);
    let Some(first) = steps.next() else { return 0.0 };
    let apart = |step: f64| (step - first) - (step - first).round();
    if steps.all(|step| apart(step).abs() < 1e-3) { first - first.round() } else { 0.0 }
}

/// The narrowest format that holds the range, and the value that is stored as 0. That is 0 itself where it
/// fits, and the middle of the range where it doesn't.
fn narrowest(lowest: f64, highest: f64) -> Option<(Width, f64)> {
    let middle = ((lowest + highest) / 2.0).round();
    for width in [Width::Bits16, Width::Bits24, Width::Bits32] {
        let largest = width.largest() as f64;
        let fits =
            |zero: &f64| lowest - zero >= -largest && highest - zero <= largest && zero.abs() < 2f64.powi(52);
        if let Some(zero) = [0.0, middle].into_iter().find(fits) {
            return Some((width, zero));
        }
    }
    None
}

/// Steps per unit, without the digits that only rounding left behind it.
fn per_unit(step: f64) -> f64 {
    let gain = 1.0 / step;
    let short = format!("{gain:.11e}").parse().unwrap_or(gain);
    if (gain - short).abs() <= 1e-14 * gain { short } else { gain }
}

/// The power of ten that makes all values whole.
fn decimal_gain(samples: &Samples) -> Option<f64> {
    (0..=MOST_DECIMALS).map(|decimals| 10f64.powi(decimals)).find(|gain| {
        samples.runs().flat_map(|(_, run)| run).all(|value| {
            let scaled = value * gain;
            (scaled - scaled.round()).abs() <= 1e-6 && scaled.abs() <= Width::Bits32.largest() as f64
        })
    })
}

/// Half of what 32 bits hold.
fn finest_gain(low: f64, high: f64) -> f64 {
    let largest = low.abs().max(high.abs());
    if largest > 0.0 { f64::from(1 << 30) / largest } else { 1.0 }
}

//! Biquad sections, forward and backward.

use super::{ChainError, FilterChain};
use crate::units::{Hertz, SampleRate};
use biquad::{Biquad, Coefficients, DirectForm2Transposed, Q_BUTTERWORTH_F64, Type};
use std::f64::consts::PI;

/// Bandwidth of the mains rejection. Narrow, so that a QRS leaves little ringing, and wide enough
/// for the drift of a mains supply (own choice, held by a test: under 25 µV on a 1 mV QRS).
const MAINS_BANDWIDTH: f64 = 0.6;

/// A chain as sections for one sampling rate.
pub(super) struct ZeroPhase {
    sections: Vec<Section>,
}

struct Section {
    coefficients: Coefficients<f64>,
    /// Whether a constant passes (low-pass, notch) or not (high-pass).
    passes_constant: bool,
    /// Samples until its response has died away.
    settling: usize,
}

impl ZeroPhase {
    /// Designs the sections of a chain.
    pub fn design(chain: FilterChain, rate: SampleRate) -> Result<Self, ChainError> {
        let corners = [chain.low_cut, chain.high_cut, chain.mains];
        for corner in corners.into_iter().flatten() {
            if !FilterChain::realises(corner, rate) {
                return Err(ChainError::CornerTooHigh { corner, rate });
            }
        }
        if let (Some(low_cut), Some(high_cut)) = (chain.low_cut, chain.high_cut)
            && low_cut >= high_cut
        {
            return Err(ChainError::Crossed { low_cut, high_cut });
        }
        let mut sections = Vec::new();
        let seconds = |time: f64| (time * rate.get()).ceil() as usize;
        if let Some(corner) = chain.mains {
            let quality = corner.get() / MAINS_BANDWIDTH;
            sections.extend(section(Type::Notch, rate, corner, quality, seconds(1.5 / MAINS_BANDWIDTH)));
        }
        if let Some(corner) = chain.low_cut {
            let per_pass = per_pass(corner, rate, -0.25);
            sections.extend(section(
                Type::HighPass,
                rate,
                per_pass,
                Q_BUTTERWORTH_F64,
                seconds(1.0 / corner.get()),
            ));
        }
        if let Some(corner) = chain.high_cut {
            let per_pass = per_pass(corner, rate, 0.25);
            sections.extend(section(
                Type::LowPass,
                rate,
                per_pass,
                Q_BUTTERWORTH_F64,
                seconds(4.0 / corner.get()),
            ));
        }
        Ok(Self { sections })
    }

    /// Filters one stretch in place.
    pub fn run(&self, values: &mut [f64]) {
        for section in &self.sections {
            section.run(values);
        }
    }
}

/// The corner that each of two passes must have, so that both together are 3 dB down at `corner`.
/// A second-order Butterworth section has |H|² = 1 / (1 + r⁴), r the ratio of the warped frequencies,
/// and |H|² = 1/√2 where r⁴ = √2 − 1; the sign of `power` tells low-pass from high-pass.
fn per_pass(corner: Hertz, rate: SampleRate, power: f64) -> Hertz {
    let warped = (PI * corner.get() / rate.get()).tan() * (2f64.sqrt() - 1.0).powf(-power);
    Hertz::new(warped.atan() * rate.get() / PI).unwrap_or(corner)
}

/// `None` only for a corner that [`ZeroPhase::design`] has already refused.
fn section(
    kind: Type<f64>,
    rate: SampleRate,
    corner: Hertz,
    quality: f64,
    settling: usize,
) -> Option<Section> {
    let passes_constant = !matches!(kind, Type::HighPass);
    // `Coefficients::from_params` of biquad 0.5.0 divides by 2 · rate instead of rate / 2.
    let of_nyquist = 2.0 * corner.get() / rate.get();
    let coefficients = Coefficients::from_normalized_params(kind, of_nyquist, quality).ok()?;
    Some(Section { coefficients, passes_constant, settling })
}

impl Section {
    fn run(&self, values: &mut [f64]) {
        let length = values.len();
        if length < 2 {
            if !self.passes_constant {
                values.fill(0.0);
            }
            return;
        }
        // Continued at both ends by its own point reflection, so that neither level nor slope jumps.
        let pad = self.settling.min(length - 1);
        let mut padded = Vec::with_capacity(length + 2 * pad);
        let (first, last) = (values[0], values[length - 1]);
        padded.extend((1..=pad).rev().map(|index| 2.0 * first - values[index]));
        padded.extend_from_slice(values);
        padded.extend((1..=pad).map(|index| 2.0 * last - values[length - 1 - index]));
        self.pass(padded.iter_mut());
        self.pass(padded.iter_mut().rev());
        values.copy_from_slice(&padded[pad..pad + length]);
    }

    fn pass<'a>(&self, values: impl Iterator<Item = &'a mut f64>) {
        let mut state = DirectForm2Transposed::<f64>::new(self.coefficients);
        let mut level = None;
        for value in values {
            // Started at its own first value, as if it had stood there for ever.
            let level = *level.get_or_insert(*value);
            let filtered = state.run(*value - level);
            *value = if self.passes_constant { filtered + level } else { filtered };
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    const RATE: SampleRate = SampleRate::new(500.0).unwrap();

    fn chain(low_cut: Option<f64>, high_cut: Option<f64>, mains: Option<f64>) -> FilterChain {
        let hertz = |value: f64| Hertz::new(value).unwrap();
        FilterChain { low_cut: low_cut.map(hertz), high_cut: high_cut.map(hertz), mains: mains.map(hertz) }
    }

    fn filtered(chain: FilterChain, signal: impl Fn(f64) -> f64) -> Vec<f64> {
        let mut values: Vec<f64> = (0..5000).map(|n| signal(n as f64 / 500.0)).collect();
        ZeroPhase::design(chain, RATE).unwrap().run(&mut values);
        values
    }

    fn amplitude(chain: FilterChain, frequency: f64) -> f64 {
        let values = filtered(chain, |t| (2.0 * PI * frequency * t).sin());
        // Over whole seconds in the middle: the in-phase part; zero phase leaves no other.
        let part = |wave: fn(f64) -> f64| -> f64 {
            (1500..3500).map(|n| values[n] * wave(2.0 * PI * frequency * n as f64 / 500.0)).sum::<f64>()
                / 1000.0
        };
        assert!(part(f64::cos).abs() < 2e-3, "phase is not zero at {frequency} Hz: {}", part(f64::cos));
        part(f64::sin)
    }

    // Source: definition of the corner frequency, −3 dB = 1/√2; zero phase as the design demands.
    #[test]
    fn corners_are_3_db_down_over_both_passes_and_the_phase_is_zero() {
        for corner in [0.5, 1.0] {
            assert!((amplitude(chain(Some(corner), None, None), corner) - 0.5f64.sqrt()).abs() < 0.005);
        }
        for corner in [40.0, 100.0, 150.0] {
            assert!((amplitude(chain(None, Some(corner), None), corner) - 0.5f64.sqrt()).abs() < 0.005);
        }
        assert!((amplitude(chain(Some(0.5), Some(150.0), None), 10.0) - 1.0).abs() < 0.002);
    }

    // Source of the noise: IEC 60601-2-51, annex II: 25 µV at 50 and 60 Hz.
    #[test]
    fn mains_is_rejected_also_when_it_drifts_and_at_the_ends() {
        for mains in [50.0, 60.0] {
            for drift in [0.0, 0.1] {
                let values = filtered(chain(None, None, Some(mains)), |t| {
                    0.025 * (2.0 * PI * (mains + drift) * t).sin()
                });
                let largest = |range: std::ops::Range<usize>| {
                    values[range].iter().fold(0.0, |high: f64, value| high.max(value.abs()))
                };
                assert!(largest(1000..4000) < 0.004, "{mains} + {drift} Hz leaves {}", largest(1000..4000));
                assert!(largest(0..5000) < 0.0255, "{mains} + {drift} Hz at the ends: {}", largest(0..5000));
            }
        }
    }

    // Source: own limit, 25 µV, on QRS complexes of 1 mV: narrow and broad, mono- and biphasic.
    #[test]
    fn mains_rejection_rings_less_than_25_microvolt_on_a_1_mv_qrs() {
        let gauss = |t: f64, width: f64| (-(t / width).powi(2) / 2.0).exp();
        for width in [0.006, 0.008, 0.010, 0.015, 0.020] {
            for biphasic in [false, true] {
                let qrs = |t: f64| {
                    if biphasic { -(t / width) * gauss(t, width) * 1.6487 } else { gauss(t, width) }
                };
                let train = |t: f64| qrs((t % 0.8) - 0.4);
                for mains in [50.0, 60.0] {
                    let values = filtered(chain(None, None, Some(mains)), train);
                    let ringing =
                        (0..5000).map(|n| (values[n] - train(n as f64 / 500.0)).abs()).fold(0.0, f64::max);
                    assert!(ringing < 0.025, "{ringing:.4} mV at a width of {width} s, {mains} Hz");
                }
            }
        }
    }

    #[test]
    fn corners_that_the_rate_does_not_allow_are_refused() {
        let slow = SampleRate::new(100.0).unwrap();
        assert!(matches!(
            ZeroPhase::design(chain(None, Some(150.0), None), slow),
            Err(ChainError::CornerTooHigh { .. })
        ));
        assert!(matches!(
            ZeroPhase::design(chain(Some(40.0), Some(30.0), None), RATE),
            Err(ChainError::Crossed { .. })
        ));
    }

    #[test]
    fn the_shortest_stretches_are_filtered_without_a_fault() {
        for length in 0..5 {
            let mut values = vec![1.0; length];
            ZeroPhase::design(chain(Some(0.5), Some(150.0), Some(50.0)), RATE).unwrap().run(&mut values);
            assert!(values.iter().all(|value| value.abs() < 1e-9));
        }
    }
}

//! Frontal axes.

use super::{Measured, Reading, Reason};
use crate::average::RepresentativeBeat;
use crate::recording::Lead;
use crate::units::{Degrees, Millivolts, Seconds};

/// The frontal axis from the net areas of I and aVF, in any unit: atan2(2 · aVF, √3 · I), since the
/// augmented leads are smaller than the bipolar ones by √3/2 (Novosel et al. 1999).
/// `None` when both are zero.
pub fn frontal_axis(net_i: f64, net_avf: f64) -> Option<Degrees> {
    if net_i == 0.0 && net_avf == 0.0 {
        return None;
    }
    Degrees::new((2.0 * net_avf).atan2(3f64.sqrt() * net_i).to_degrees()).map(Degrees::normalised)
}

/// The axis of one wave of the representative beat, between `from` and `to` relative to its fiducial.
pub(super) fn of_wave(beat: &RepresentativeBeat, from: Seconds, to: Seconds) -> Measured<Degrees> {
    let (Some(i), Some(avf)) = (beat.lead(Lead::I), beat.lead(Lead::AVF)) else {
        return Measured::NotMeasurable(Reason::LeadsAbsent("I or aVF"));
    };
    let index = |time: Seconds| {
        (beat.fiducial.0 as f64 + beat.rate.samples(time)).round().clamp(0.0, i.len() as f64 - 1.0) as usize
    };
    let (from, to) = (index(from), index(to));
    if to <= from {
        return Measured::NotMeasurable(Reason::LeadsDisagree);
    }
    let (net_i, net_avf) = (net_area(i, from, to), net_area(avf, from, to));
    // The mean net deflection of a wave must stand above what noise alone would give.
    let noise = [Lead::I, Lead::AVF]
        .iter()
        .filter_map(|&lead| beat.noise(lead))
        .fold(SMALLEST_NOISE, |largest, noise| largest.max(noise));
    let width = (to - from) as f64;
    let size = (net_i / width).hypot(net_avf / width);
    if size < 2.0 * noise.get() {
        return Measured::NotMeasurable(Reason::BelowNoise { noise });
    }
    match frontal_axis(net_i, net_avf) {
        Some(value) => Measured::Value(Reading::bare(value)),
        None => Measured::NotMeasurable(Reason::BelowNoise { noise }),
    }
}

/// No average is trusted below this (own choice, a few steps of a usual converter).
const SMALLEST_NOISE: Millivolts = Millivolts::literal(0.002);

/// The area over the straight line between both ends, in mV times samples.
fn net_area(signal: &[f64], from: usize, to: usize) -> f64 {
    let (first, last) = (signal[from], signal[to]);
    (from..=to)
        .map(|index| {
            let part = (index - from) as f64 / (to - from) as f64;
            signal[index] - first - (last - first) * part
        })
        .sum()
}

#[cfg(test)]
mod tests {
    use super::*;

    // Source: computed from the formula of Novosel et al. 1999, to 0.01°.
    #[test]
    fn worked_examples_are_reproduced_to_a_hundredth() {
        for (i, avf, expected) in [
            (0.6, 0.8, 57.00),
            (0.5, 0.5, 49.11),
            (0.8, -0.6, -40.89),
            (-0.4, 0.9, 111.05),
            (-0.3, -0.4, -123.00),
        ] {
            let axis = frontal_axis(i, avf).unwrap().get();
            assert!((axis - expected).abs() <= 0.01, "({i}, {avf}): {axis}");
        }
        assert_eq!(frontal_axis(0.0, 0.0), None);
    }
}

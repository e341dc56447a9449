//! The stretch of the beat that holds the QRS, over all leads together: outward from the largest spatial
//! velocity until it stays below a threshold (spatial velocity: CSE practice; Laguna et al. 1994). The
//! threshold grows less than the QRS does, as readers mark.

use super::shape::Shape;
use super::slopes::{slope, spatial};
use crate::units::Seconds;

/// First and last sample; `None` when the beat has no valid samples around its fiducial.
pub(super) fn core(shape: &Shape) -> Option<(usize, usize)> {
    let slopes: Vec<Vec<f64>> =
        shape.beat.signals.iter().map(|signal| slope(signal, shape.rate, Seconds::literal(0.005))).collect();
    let velocity = spatial(&slopes);
    let (from, to) = (shape.moved(shape.fiducial, -80.0), shape.moved(shape.fiducial, 80.0));
    let steepest = (from..=to).max_by(|&a, &b| velocity[a].total_cmp(&velocity[b]))?;
    let threshold = 14.0 * (velocity[steepest] / 200.0).powf(0.25);
    let onset = walk(&velocity, steepest, shape.moved(shape.fiducial, -150.0), threshold, shape.steps(8.0));
    let offset = walk(&velocity, steepest, shape.moved(shape.fiducial, 190.0), threshold, shape.steps(16.0));
    (offset > onset).then_some((onset, offset))
}

/// From `start` towards `limit`: the last position above `threshold` before it stays below for `quiet`.
fn walk(velocity: &[f64], start: usize, limit: usize, threshold: f64, quiet: usize) -> usize {
    let mut edge = start;
    let mut below = 0;
    let mut index = start;
    while index != limit && below < quiet {
        index = if limit < start { index - 1 } else { index + 1 };
        if velocity[index] < threshold {
            below += 1;
        } else {
            below = 0;
            edge = index;
        }
    }
    edge
}

//! What the ST segment and the T wave look like without a P: smooth.
//!
//! A cubic B-spline with wide knots is projected out of the signals and of every candidate alike, so
//! that a candidate must be sharper than the repolarisation to explain anything.

/// An orthonormal basis of the smooth curves over a window.
pub(super) struct Background {
    basis: Vec<Vec<f64>>,
}

impl Background {
    /// For `length` samples with knots `knot` samples apart, each sample weighted.
    pub fn new(length: usize, knot: f64, weights: &[f64]) -> Self {
        let pieces = (length as f64 / knot).round().max(1.0) as usize;
        let step = (length.max(2) - 1) as f64 / pieces as f64;
        let mut basis: Vec<Vec<f64>> = Vec::new();
        for index in 0..pieces + 3 {
            let centre = (index as f64 - 1.0) * step;
            let mut column: Vec<f64> = (0..length)
                .zip(weights)
                .map(|(sample, weight)| weight * cubic((sample as f64 - centre) / step))
                .collect();
            // Twice, or rounding leaves the columns askew.
            for _ in 0..2 {
                for other in &basis {
                    let part = dot(&column, other);
                    subtract(&mut column, other, part);
                }
            }
            let size = dot(&column, &column).sqrt();
            if size > 1e-6 {
                column.iter_mut().for_each(|value| *value /= size);
                basis.push(column);
            }
        }
        Self { basis }
    }

    /// Takes the smooth part out of a weighted signal.
    pub fn remove(&self, signal: &mut [f64]) {
        for column in &self.basis {
            let part = dot(signal, column);
            subtract(signal, column, part);
        }
    }
}

/// The cubic B-spline of unit spacing about zero.
fn cubic(x: f64) -> f64 {
    let x = x.abs();
    if x < 1.0 {
        2.0 / 3.0 - x * x + x * x * x / 2.0
    } else if x < 2.0 {
        (2.0 - x).powi(3) / 6.0
    } else {
        0.0
    }
}

/// The inner product.
pub(super) fn dot(a: &[f64], b: &[f64]) -> f64 {
    a.iter().zip(b).map(|(x, y)| x * y).sum()
}

fn subtract(from: &mut [f64], what: &[f64], times: f64) {
    for (value, other) in from.iter_mut().zip(what) {
        *value -= times * other;
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn slow_curves_are_removed_and_sharp_ones_stay() {
        let weights = vec![1.0; 80];
        let background = Background::new(80, 20.0, &weights);
        let mut slow: Vec<f64> = (0..80).map(|n| (n as f64 / 79.0 * std::f64::consts::PI).sin()).collect();
        background.remove(&mut slow);
        assert!(dot(&slow, &slow) < 1e-3);
        let mut sharp: Vec<f64> = (0..80).map(|n| (-((n as f64 - 40.0) / 4.0).powi(2)).exp()).collect();
        let before = dot(&sharp, &sharp);
        background.remove(&mut sharp);
        assert!(dot(&sharp, &sharp) > 0.2 * before);
    }
}

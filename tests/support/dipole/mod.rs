//! A heart as one moving dipole, seen by eight electrodes' leads: recordings with known truth.
//!
//! Each wave is a sum of raised cosines in the heart vector X (left), Y (down), Z (back), so that its first and
//! last moment are known exactly. Dower's matrix gives the leads I, II, V1–V6 (Dower et al., J Electrocardiol
//! 1980;13:91; the citation is from memory); III, aVR, aVL and aVF follow from I and II. Nothing here uses the
//! program that it tests.

mod heart;
mod noise;
mod recipe;
mod strip;

pub use heart::{Bump, Vector, Wave};
pub use noise::SplitMix64;
pub use recipe::Recipe;
pub use strip::{Beat, Breath, Strip, Truth, WaveTruth};

/// The leads that a strip renders, in this order.
pub const LEADS: [&str; 8] = ["I", "II", "V1", "V2", "V3", "V4", "V5", "V6"];

/// The rows of the matrix for [`LEADS`], columns X, Y, Z.
pub const DOWER: [[f64; 3]; 8] = [
    [0.632, -0.235, 0.059],
    [0.235, 1.066, -0.132],
    [-0.515, 0.157, -0.917],
    [0.044, 0.164, -1.387],
    [0.882, 0.098, -1.277],
    [1.213, 0.127, -0.601],
    [1.125, 0.127, -0.086],
    [0.831, 0.076, 0.230],
];

/// A heart vector in one of [`LEADS`], in mV.
pub fn seen_in(lead: usize, vector: Vector) -> f64 {
    DOWER[lead].iter().zip(vector).map(|(factor, component)| factor * component).sum()
}

/// All twelve leads in standard order, of the eight of [`LEADS`], in the unit of the input.
pub fn twelve(eight: [f64; 8]) -> [f64; 12] {
    let [i, ii, v1, v2, v3, v4, v5, v6] = eight;
    [i, ii, ii - i, -(i + ii) / 2.0, i - ii / 2.0, ii - i / 2.0, v1, v2, v3, v4, v5, v6]
}

#[cfg(test)]
mod tests {
    use super::*;

    // Source: Kors et al., Eur Heart J 1990;11:1083, whose regression goes the other way; the two matrices are
    // independent, so they agree only roughly.
    #[test]
    fn the_matrix_agrees_roughly_with_a_regression_made_the_other_way() {
        let kors = [
            [-0.13, 0.05, -0.01, 0.14, 0.06, 0.54, 0.38, -0.07],
            [0.06, -0.02, -0.05, 0.06, -0.17, 0.13, -0.07, 0.93],
            [-0.43, -0.06, -0.14, -0.20, -0.11, 0.31, 0.11, -0.23],
        ];
        for (axis, row) in kors.iter().enumerate() {
            let mut vector = [0.0; 3];
            vector[axis] = 1.0;
            let leads: Vec<f64> = [2, 3, 4, 5, 6, 7, 0, 1].map(|lead| seen_in(lead, vector)).to_vec();
            let back: f64 = row.iter().zip(&leads).map(|(factor, lead)| factor * lead).sum();
            assert!((back - 1.0).abs() < 0.15, "axis {axis}: {back}");
        }
    }

    #[test]
    fn a_wave_begins_and_ends_where_it_says() {
        let wave = Wave::of(&[Bump { onset: 0.010, duration: 0.080, peak: 0.4, vector: [0.0, 1.0, 0.0] }]);
        assert_eq!(wave.at(0.010), [0.0; 3]);
        assert!(wave.at(0.0101)[1] > 0.0 && wave.at(0.0899)[1] > 0.0);
        assert!((wave.at(0.042)[1] - 1.0).abs() < 1e-12);
        assert_eq!(wave.at(0.0901), [0.0; 3]);
        assert_eq!((wave.onset(), wave.offset()), (0.010, 0.090));
    }
}

//! Waves of the heart vector.

use std::f64::consts::PI;

/// Components X (to the left), Y (down), Z (to the back), in mV.
pub type Vector = [f64; 3];

/// A raised cosine in one direction; zero outside its span, with no step in value or slope at its ends.
#[derive(Clone, Copy, Debug)]
pub struct Bump {
    /// Seconds from the wave's reference.
    pub onset: f64,
    /// Seconds.
    pub duration: f64,
    /// Where its peak lies, as a fraction of its duration.
    pub peak: f64,
    /// The heart vector at the peak.
    pub vector: Vector,
}

/// A sum of bumps.
#[derive(Clone, Debug, Default)]
pub struct Wave(Vec<Bump>);

impl Bump {
    fn height(&self, time: f64) -> f64 {
        let part = (time - self.onset) / self.duration;
        if part <= 0.0 || part >= 1.0 {
            return 0.0;
        }
        let turn = if part < self.peak { part / self.peak } else { (1.0 - part) / (1.0 - self.peak) };
        (1.0 - (PI * turn).cos()) / 2.0
    }
}

impl Wave {
    /// A wave of these bumps.
    pub fn of(bumps: &[Bump]) -> Self {
        Self(bumps.to_vec())
    }

    /// The same wave, its times multiplied.
    pub fn stretched(&self, factor: f64) -> Self {
        self.mapped(|bump| Bump { onset: bump.onset * factor, duration: bump.duration * factor, ..bump })
    }

    /// The same wave, its potentials multiplied.
    pub fn scaled(&self, factor: f64) -> Self {
        self.mapped(|bump| Bump { vector: bump.vector.map(|component| component * factor), ..bump })
    }

    fn mapped(&self, change: impl Fn(Bump) -> Bump) -> Self {
        Self(self.0.iter().copied().map(change).collect())
    }

    /// The heart vector at a time.
    pub fn at(&self, time: f64) -> Vector {
        let mut sum = [0.0; 3];
        for bump in &self.0 {
            let height = bump.height(time);
            for (slot, component) in sum.iter_mut().zip(bump.vector) {
                *slot += height * component;
            }
        }
        sum
    }

    /// The first moment of the first bump.
    pub fn onset(&self) -> f64 {
        self.0.iter().map(|bump| bump.onset).fold(f64::INFINITY, f64::min)
    }

    /// The last moment of the last bump.
    pub fn offset(&self) -> f64 {
        self.0.iter().map(|bump| bump.onset + bump.duration).fold(f64::NEG_INFINITY, f64::max)
    }

    /// Septum, free wall, base: 100 ms from 0, with the slow first and last moments that real ones have.
    pub fn qrs() -> Self {
        Self::of(&[
            Bump { onset: 0.000, duration: 0.054, peak: 0.66, vector: [-0.14, -0.04, -0.32] },
            Bump { onset: 0.021, duration: 0.054, peak: 0.54, vector: [0.98, 0.86, 0.02] },
            Bump { onset: 0.048, duration: 0.052, peak: 0.40, vector: [-0.16, -0.20, 0.66] },
        ])
    }

    /// A sinus P: right atrium, then left; 104 ms from 0.
    pub fn sinus_p() -> Self {
        Self::of(&[
            Bump { onset: 0.000, duration: 0.072, peak: 0.52, vector: [0.035, 0.085, -0.055] },
            Bump { onset: 0.034, duration: 0.070, peak: 0.48, vector: [0.070, 0.060, 0.060] },
        ])
    }

    /// A P from a place low in the right atrium; 96 ms from 0.
    pub fn premature_p() -> Self {
        Self::of(&[
            Bump { onset: 0.000, duration: 0.066, peak: 0.48, vector: [0.050, 0.030, -0.070] },
            Bump { onset: 0.030, duration: 0.066, peak: 0.50, vector: [0.075, 0.035, 0.050] },
        ])
    }

    /// A retrograde P over the septum: upwards, a little to the front; 68 ms from 0.
    pub fn retrograde_p() -> Self {
        Self::of(&[
            Bump { onset: 0.000, duration: 0.056, peak: 0.50, vector: [-0.012, -0.140, -0.085] },
            Bump { onset: 0.020, duration: 0.048, peak: 0.50, vector: [0.018, -0.070, -0.045] },
        ])
    }

    /// A T wave that rises slowly and falls faster, `duration` long from 0.
    pub fn t(duration: f64) -> Self {
        Self::of(&[
            Bump { onset: 0.0, duration, peak: 0.62, vector: [0.24, 0.20, -0.15] },
            Bump {
                onset: 0.18 * duration,
                duration: 0.74 * duration,
                peak: 0.60,
                vector: [0.05, 0.05, -0.06],
            },
        ])
    }
}

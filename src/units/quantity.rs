//! Scalar quantities.

use std::ops::{Add, Div, Mul, Neg, Sub};

macro_rules! quantity {
    ($(#[$doc:meta])* $name:ident) => {
        $(#[$doc])*
        #[derive(Clone, Copy, Debug, Default, PartialEq, PartialOrd)]
        pub struct $name(f64);

        impl $name {
            /// Zero of this unit.
            pub const ZERO: Self = Self(0.0);

            /// `None` when `value` is not finite.
            pub const fn new(value: f64) -> Option<Self> {
                if value.is_finite() { Some(Self(value)) } else { None }
            }

            /// A constant of the source text. In a `const`, a value that is not finite stops the build.
            pub const fn literal(value: f64) -> Self {
                assert!(value.is_finite(), "a quantity must be finite");
                Self(value)
            }

            /// The bare number, in the unit of the type's name.
            pub const fn get(self) -> f64 {
                self.0
            }

            /// The magnitude.
            pub const fn abs(self) -> Self {
                Self(self.0.abs())
            }

            /// The larger of two.
            pub const fn max(self, other: Self) -> Self {
                Self(self.0.max(other.0))
            }

            /// The smaller of two.
            pub const fn min(self, other: Self) -> Self {
                Self(self.0.min(other.0))
            }

            // An overflow of finite operands saturates, so that the type's promise holds.
            fn saturated(value: f64) -> Self {
                debug_assert!(!value.is_nan());
                Self(value.clamp(f64::MIN, f64::MAX))
            }
        }

        impl Add for $name {
            type Output = Self;
            fn add(self, other: Self) -> Self {
                Self::saturated(self.0 + other.0)
            }
        }

        impl Sub for $name {
            type Output = Self;
            fn sub(self, other: Self) -> Self {
                Self::saturated(self.0 - other.0)
            }
        }

        impl Neg for $name {
            type Output = Self;
            fn neg(self) -> Self {
                Self(-self.0)
            }
        }

        impl Mul<f64> for $name {
            type Output = Self;
            fn mul(self, factor: f64) -> Self {
                Self::saturated(self.0 * factor)
            }
        }

        impl Div for $name {
            /// A plain ratio, which is not finite when the divisor is zero.
            type Output = f64;
            fn div(self, other: Self) -> f64 {
                self.0 / other.0
            }
        }
    };
}

quantity!(
    /// A length on paper, in mm.
    Millimetres
);
quantity!(
    /// An electric potential, in mV.
    Millivolts
);
quantity!(
    /// A time or a duration, in s. Times count from the first sample of the recording.
    Seconds
);
quantity!(
    /// A frequency, in Hz.
    Hertz
);
quantity!(
    /// A rate of beats, in 1/min.
    PerMinute
);
quantity!(
    /// An angle in the frontal plane, in degrees: 0 points to the patient's left, +90 down.
    Degrees
);
quantity!(
    /// Paper speed, in mm/s.
    PaperSpeed
);
quantity!(
    /// Amplitude scale, in mm/mV.
    Gain
);

impl Seconds {
    /// From milliseconds; `None` when not finite.
    pub const fn from_ms(ms: f64) -> Option<Self> {
        Self::new(ms / 1000.0)
    }

    /// In milliseconds.
    pub const fn ms(self) -> f64 {
        self.0 * 1000.0
    }
}

impl Millimetres {
    /// 25.4 mm are 72 points, exactly.
    pub const fn points(self) -> f64 {
        self.0 * 72.0 / 25.4
    }
}

impl Degrees {
    /// The same direction in (−180, 180].
    pub fn normalised(self) -> Self {
        let turned = self.0.rem_euclid(360.0);
        Self(if turned > 180.0 { turned - 360.0 } else { turned })
    }
}

impl Mul<PaperSpeed> for Seconds {
    type Output = Millimetres;
    fn mul(self, speed: PaperSpeed) -> Millimetres {
        Millimetres::saturated(self.0 * speed.0)
    }
}

impl Mul<Gain> for Millivolts {
    type Output = Millimetres;
    fn mul(self, gain: Gain) -> Millimetres {
        Millimetres::saturated(self.0 * gain.0)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    // Source: facts of the paper scale, 25 mm/s and 10 mm/mV (textbook usage).
    #[test]
    fn a_large_box_is_200_ms_and_half_a_millivolt() {
        assert_eq!(Seconds::literal(0.2) * PaperSpeed::literal(25.0), Millimetres::literal(5.0));
        assert_eq!(Millivolts::literal(0.5) * Gain::literal(10.0), Millimetres::literal(5.0));
    }

    // Source: computed, 25.4 mm to the inch and 72 points to the inch.
    #[test]
    fn ten_seconds_are_708_66142_points() {
        let width = Seconds::literal(10.0) * PaperSpeed::literal(25.0);
        assert!((width.points() - 708.661_42).abs() < 1e-5);
    }

    #[test]
    fn a_quantity_is_never_nan_nor_infinite() {
        assert_eq!(Millivolts::new(f64::NAN), None);
        assert_eq!(Millivolts::new(f64::INFINITY), None);
        assert!((Millivolts::literal(f64::MAX) * 2.0).get().is_finite());
    }

    #[test]
    fn angles_normalise_to_half_open_turn() {
        assert_eq!(Degrees::literal(-180.0).normalised(), Degrees::literal(180.0));
        assert_eq!(Degrees::literal(270.0).normalised(), Degrees::literal(-90.0));
    }
}

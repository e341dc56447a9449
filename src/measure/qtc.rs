//! QT corrected for rate.

use super::{Measured, Reading, Reason};
use crate::units::{PerMinute, Seconds};

/// Above this rate no corrected QT is given: Bazett / Fridericia = RR^(−1/6), so at 120/min the two
/// differ by 12 %, and the more the faster (own limit; that Bazett over-corrects fast rates is
/// published, PMC8275798).
pub const HIGHEST_RATE: PerMinute = PerMinute::literal(120.0);

/// QT / RR^½ (Bazett 1920), both in s; `None` unless RR is above zero.
pub fn bazett(qt: Seconds, rr: Seconds) -> Option<Seconds> {
    corrected(qt, rr, 1.0 / 2.0)
}

/// QT / RR^⅓ (Fridericia 1920), both in s; `None` unless RR is above zero.
pub fn fridericia(qt: Seconds, rr: Seconds) -> Option<Seconds> {
    corrected(qt, rr, 1.0 / 3.0)
}

fn corrected(qt: Seconds, rr: Seconds, power: f64) -> Option<Seconds> {
    if rr <= Seconds::ZERO {
        return None;
    }
    Seconds::new(qt.get() / rr.get().powf(power))
}

/// A corrected QT with the reasons that it inherits from QT, RR and the rhythm.
pub(super) fn measured(
    qt: &Measured<Seconds>,
    rr: &Measured<Seconds>,
    stable: bool,
    formula: fn(Seconds, Seconds) -> Option<Seconds>,
) -> Measured<Seconds> {
    qt.and_then(|qt| {
        rr.and_then(|rr| {
            if !stable {
                return Measured::NotMeasurable(Reason::UnstableRr);
            }
            if 60.0 / rr.value.get() > HIGHEST_RATE.get() {
                return Measured::NotMeasurable(Reason::RateAbove(HIGHEST_RATE));
            }
            match formula(qt.value, rr.value) {
                Some(value) => {
                    let part = |of_qt: Option<Seconds>| of_qt.map(|part| value * (part / qt.value));
                    Measured::Value(Reading {
                        value,
                        spread: part(qt.spread),
                        expected_error: part(qt.expected_error),
                    })
                }
                None => Measured::NotMeasurable(Reason::UnstableRr),
            }
        })
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    fn at(qt_ms: f64, rr_s: f64) -> (f64, f64) {
        let (qt, rr) = (Seconds::from_ms(qt_ms).unwrap(), Seconds::new(rr_s).unwrap());
        (bazett(qt, rr).unwrap().ms(), fridericia(qt, rr).unwrap().ms())
    }

    // Source: computed from the formulas, to 0.01 ms.
    #[test]
    fn computed_examples_are_reproduced_to_a_hundredth() {
        for (qt, rr, expected) in [
            (400.0, 60.0 / 70.0, (432.05, 421.09)),
            (280.0, 60.0 / 180.0, (484.97, 403.83)),
            (320.0, 0.512, (447.21, 400.00)),
        ] {
            let (bazett, fridericia) = at(qt, rr);
            assert!((bazett - expected.0).abs() <= 0.01, "{bazett}");
            assert!((fridericia - expected.1).abs() <= 0.01, "{fridericia}");
        }
    }

    // Source: PMC8275798, figure 1, read there.
    #[test]
    fn the_published_examples_are_reproduced_to_a_fifth_of_a_millisecond() {
        for (qt, rate, expected) in [(405.0, 52.7, (379.4, 387.7)), (395.0, 85.9, (472.7, 445.2))] {
            let (bazett, fridericia) = at(qt, 60.0 / rate);
            assert!((bazett - expected.0).abs() <= 0.2, "{bazett}");
            assert!((fridericia - expected.1).abs() <= 0.2, "{fridericia}");
        }
    }

    #[test]
    fn at_the_highest_rate_the_formulas_differ_by_an_eighth() {
        let (bazett, fridericia) = at(300.0, 60.0 / HIGHEST_RATE.get());
        assert!((bazett / fridericia - 1.122).abs() < 0.001);
    }
}

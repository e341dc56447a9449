//! A value, or the reason why there is none.

use crate::units::{Millivolts, PerMinute};
use std::fmt;

/// A measurement's outcome. There is no default and no way to read a value that isn't there.
#[derive(Clone, Debug, PartialEq)]
pub enum Measured<T> {
    /// It was measured.
    Value(Reading<T>),
    /// It could not be; the reason is printed in its place.
    NotMeasurable(Reason),
}

/// A measured value.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Reading<T> {
    /// The value.
    pub value: T,
    /// Standard deviation over the beats; `None` where there is only one.
    pub spread: Option<T>,
    /// About two thirds of the errors against a reader are smaller; `None` where it is not known.
    pub expected_error: Option<T>,
}

impl<T> Reading<T> {
    /// A value of which nothing more is known.
    pub fn bare(value: T) -> Self {
        Self { value, spread: None, expected_error: None }
    }
}

/// Why there is no value. The text is short enough for a table cell.
#[derive(Clone, Debug, PartialEq)]
pub enum Reason {
    /// Fewer beats than needed.
    TooFewBeats {
        /// Needed.
        needed: usize,
        /// Found.
        found: usize,
    },
    /// No P wave stands before the QRS.
    NoPBeforeQrs,
    /// P waves and QRS complexes have no steady relation.
    PNotRelatedToQrs,
    /// The rhythm is irregular and without a repeated P.
    IrregularWithoutP,
    /// The rhythm is paced.
    Paced,
    /// RR varies too much.
    UnstableRr,
    /// The end of T can't be told.
    TEndUnreliable,
    /// The rate is above the one where correction formulas spread.
    RateAbove(PerMinute),
    /// The leads that are needed are absent.
    LeadsAbsent(&'static str),
    /// The deflection is below the noise.
    BelowNoise {
        /// The noise.
        noise: Millivolts,
    },
    /// The leads disagree on where it begins or ends.
    LeadsDisagree,
    /// Gaps cover what would be measured.
    Gaps,
    /// What stands before the QRS may be the retrograde P that is suspected.
    RetrogradePSuspected,
    /// A retrograde P was not looked for, or none is suspected.
    NoRetrogradeP,
}

impl<T> Measured<T> {
    /// The reading, if there is one.
    pub fn reading(&self) -> Option<&Reading<T>> {
        match self {
            Measured::Value(reading) => Some(reading),
            Measured::NotMeasurable(_) => None,
        }
    }

    /// Computes another quantity from this one; the reason is inherited.
    pub fn and_then<U>(&self, next: impl FnOnce(&Reading<T>) -> Measured<U>) -> Measured<U> {
        match self {
            Measured::Value(reading) => next(reading),
            Measured::NotMeasurable(reason) => Measured::NotMeasurable(reason.clone()),
        }
    }
}

impl<T: Copy> Measured<T> {
    /// The value, if there is one.
    pub fn value(&self) -> Option<T> {
        self.reading().map(|reading| reading.value)
    }
}

impl fmt::Display for Reason {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Reason::TooFewBeats { needed, found } => write!(f, "{found} beats, {needed} needed"),
            Reason::NoPBeforeQrs => write!(f, "no separate P found"),
            Reason::PNotRelatedToQrs => write!(f, "P and QRS not related"),
            Reason::IrregularWithoutP => write!(f, "irregular, no repeated P"),
            Reason::Paced => write!(f, "paced rhythm"),
            Reason::UnstableRr => write!(f, "RR not stable"),
            Reason::TEndUnreliable => write!(f, "end of T not reliable"),
            Reason::RateAbove(rate) => write!(f, "formulas diverge above {:.0}/min", rate.get()),
            Reason::LeadsAbsent(leads) => write!(f, "lead {leads} absent"),
            Reason::BelowNoise { noise } => write!(f, "below noise of {:.0} µV", noise.get() * 1000.0),
            Reason::LeadsDisagree => write!(f, "leads disagree"),
            Reason::Gaps => write!(f, "gaps in the recording"),
            Reason::RetrogradePSuspected => write!(f, "a retrograde P is suspected"),
            Reason::NoRetrogradeP => write!(f, "no retrograde P suspected"),
        }
    }
}

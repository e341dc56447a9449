//! The measurement table: one quantity a row, in plain words, rounded to what can be stood behind.

use super::Case;
use crate::findings::Search;
use crate::measure::{Measured, Reason};
use crate::units::{Degrees, PerMinute, Seconds};

/// One row of the measurement table.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Row {
    /// The quantity, in plain words.
    pub quantity: &'static str,
    /// Its unit, as printed.
    pub unit: &'static str,
    /// What came of it.
    pub entry: Entry,
}

/// What stands in a row.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Entry {
    /// A value, rounded, and how sure it is as far as that is known; all in the same unit.
    Value {
        /// The number.
        value: String,
        /// About two thirds of the errors are smaller.
        expected_error: Option<String>,
        /// Standard deviation of the values of the single beats.
        over_beats: Option<String>,
    },
    /// Why there is no value.
    Reason(String),
}

/// The rows of a case, in the order of the beat: rate, then onset to offset, then axes.
pub fn table(case: &Case) -> Vec<Row> {
    let all = &case.analysis.measurements;
    let ms = |quantity, measured: &Measured<Seconds>| row(quantity, "ms", measured, |value| value.ms());
    let axis = |quantity, measured: &Measured<Degrees>| row(quantity, "°", measured, |value| value.get());
    vec![
        row("Ventricular rate", "1/min", &all.ventricular_rate, |rate: PerMinute| rate.get()),
        ms("RR interval", &all.rr),
        ms("P duration", &all.p_duration),
        ms("PR interval", &all.pr),
        ms("QRS duration", &all.qrs),
        ms("QT interval", &all.qt),
        ms("QTc Bazett", &all.qtc_bazett),
        ms("QTc Fridericia", &all.qtc_fridericia),
        axis("P axis", &all.p_axis),
        axis("QRS axis", &all.qrs_axis),
        axis("T axis", &all.t_axis),
        rp(&case.analysis.findings.retrograde_p),
    ]
}

fn whole(value: f64) -> String {
    let rounded = value.round();
    // U+2212, as printed; and never a negative zero.
    if rounded < 0.0 { format!("−{:.0}", -rounded) } else { format!("{:.0}", rounded.abs()) }
}

fn row<T: Copy>(
    quantity: &'static str,
    unit: &'static str,
    measured: &Measured<T>,
    number: impl Fn(T) -> f64,
) -> Row {
    let entry = match measured {
        Measured::Value(reading) => Entry::Value {
            value: whole(number(reading.value)),
            expected_error: reading.expected_error.map(|error| whole(number(error))),
            over_beats: reading.spread.map(|spread| whole(number(spread))),
        },
        Measured::NotMeasurable(reason) => Entry::Reason(reason.to_string()),
    };
    Row { quantity, unit, entry }
}

fn rp(search: &Search) -> Row {
    Row {
        quantity: "RP interval",
        unit: "ms",
        entry: match rp_interval(search) {
            Ok((rp, error)) => Entry::Value {
                value: whole(rp.ms()),
                expected_error: error.map(|error| whole(error.ms())),
                over_beats: None,
            },
            Err(reason) => Entry::Reason(reason),
        },
    }
}

/// The RP interval with its expected error (one standard deviation), or why there is none.
///
/// # Errors
/// The reason, as printed.
pub fn rp_interval(search: &Search) -> Result<(Seconds, Option<Seconds>), String> {
    match search {
        Search::NotDone(why) => Err(format!("not searched: {why}")),
        Search::Done(done) => match done.rp {
            Some(rp) => Ok((rp, done.rp_expected_error)),
            None if done.suspected.is_empty() => Err(Reason::NoRetrogradeP.to_string()),
            None => Err("the P begins inside the QRS".to_owned()),
        },
    }
}

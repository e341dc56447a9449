//! When a retrograde P is looked for at all. Every condition is stated with its number and its limit.

use super::{Subject, WhyNot};
use crate::beats::{Beats, Rhythm};
use crate::measure::Measured;
use crate::units::{PerMinute, Seconds};

/// Tachycardia is above this rate (common practice).
pub const SLOWEST: PerMinute = PerMinute::literal(100.0);
/// A QRS of this duration or more is broad (from memory of AHA/ACCF/HRS 2009 part III).
pub const BROAD: Seconds = Seconds::literal(0.120);
/// Beyond it a QRS is searched up to here: its duration is measured to some 10 ms, and a P at its end
/// lengthens it.
pub const BROAD_MARGIN: Seconds = Seconds::literal(0.010);
/// Fewest beats in the average (own choice: the noise falls with their root).
pub const FEWEST_BEATS: usize = 5;
/// Fewest of the leads that carry independent information (own choice).
pub const FEWEST_LEADS: usize = 3;
/// Largest noise left in the average, in µV (own choice: half of the smallest P that was searched for
/// with success).
pub const LARGEST_NOISE_UV: f64 = 15.0;

/// The conditions as met, as printed.
pub(super) fn passed(subject: &Subject) -> Result<Vec<String>, WhyNot> {
    let rate = match &subject.measurements.ventricular_rate {
        Measured::Value(reading) => reading.value,
        Measured::NotMeasurable(_) => {
            return Err(WhyNot::TooFewBeats { needed: FEWEST_BEATS, found: subject.beats.all.len() });
        }
    };
    if rate <= SLOWEST {
        return Err(WhyNot::NotTachycardia(rate));
    }
    let range = match &subject.beats.rhythm {
        Rhythm::Regular(range) => range,
        Rhythm::Irregular(range) => {
            return Err(WhyNot::Irregular { spread: (range.max - range.min) / range.mean });
        }
        Rhythm::Uncertain(_) => {
            return Err(WhyNot::TooFewBeats { needed: FEWEST_BEATS, found: subject.beats.all.len() });
        }
    };
    let dominant = subject.beats.of(Beats::DOMINANT).count();
    if subject.beats.of(Beats::DOMINANT).filter(|beat| beat.paced).count() * 2 > dominant {
        return Err(WhyNot::Paced);
    }
    let Some(qrs) = subject.measurements.qrs.value() else { return Err(WhyNot::QrsNotMeasurable) };
    if qrs >= BROAD + BROAD_MARGIN {
        return Err(WhyNot::BroadQrs(qrs));
    }
    let used = subject.representative.map_or(0, |beat| beat.used.len());
    let Some(beat) = subject.representative.filter(|_| used >= FEWEST_BEATS) else {
        return Err(WhyNot::TooFewBeats { needed: FEWEST_BEATS, found: used });
    };
    let leads =
        beat.names.iter().flatten().filter(|lead| crate::recording::Lead::INDEPENDENT.contains(lead)).count();
    if leads < FEWEST_LEADS {
        return Err(WhyNot::TooFewLeads(leads));
    }
    let mut noises: Vec<f64> = beat.residual_noise.iter().flatten().map(|noise| noise.get()).collect();
    let noise = crate::beats::median(&mut noises) * 1000.0;
    if noise > LARGEST_NOISE_UV {
        return Err(WhyNot::TooNoisy(crate::units::Millivolts::literal(noise / 1000.0)));
    }
    Ok(vec![
        format!("rate {:.0}/min, above {:.0}", rate.get(), SLOWEST.get()),
        format!("RR {:.0} to {:.0} ms, regular", range.min.ms(), range.max.ms()),
        if qrs < BROAD {
            format!("QRS {:.0} ms, below {:.0}", qrs.ms(), BROAD.ms())
        } else {
            let margin = BROAD_MARGIN.ms();
            format!(
                "QRS {:.0} ms, within {margin:.0} of {:.0}: a P at its end lengthens it",
                qrs.ms(),
                BROAD.ms()
            )
        },
        format!("{used} beats averaged, at least {FEWEST_BEATS}"),
        format!("noise of the average {noise:.0} µV, at most {LARGEST_NOISE_UV:.0}"),
    ])
}

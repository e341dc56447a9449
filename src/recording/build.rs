//! From decoded signals to the twelve leads.

use super::limb::{DEPENDENT, derive};
use super::names::lead_of;
use super::{
    Absence, Channel, Decoded, Extra, Lead, Note, PerLead, Quantity, Recording, Refusal, Samples, Signal,
};
use crate::units::{SampleRate, Span, Spans};

/// Rates that are accepted, in samples per second.
const RATES: std::ops::RangeInclusive<f64> = 100.0..=8000.0;

impl Recording {
    /// Finds the twelve leads among the signals, derives III, aVR, aVL and aVF from I and II where the
    /// source does not hold them, and notes what a reader must know.
    ///
    /// Potentials that are none of the twelve become [`Recording::extra`]; a recording may hold nothing else.
    ///
    /// # Errors
    /// When no signal is a potential, a lead is named twice, all is flat, or the rate is out of range.
    pub fn from_decoded(decoded: Decoded) -> Result<Self, Refusal> {
        let Decoded { source, signals, subject, occasion, mut notes } = decoded;
        let mut found: PerLead<Option<Signal>> = PerLead::from_fn(|_| None);
        let mut others = Vec::new();
        let mut names = Vec::new();
        for signal in signals {
            if let Quantity::Other(unit) = &signal.quantity {
                names.push(format!("{} in {unit}", signal.name));
                continue;
            }
            let Some(named) = lead_of(&signal.name) else {
                others.push(signal);
                continue;
            };
            if named.modified {
                notes.push(Note::information(format!("{} is shown as lead {}", signal.name, named.lead)));
            }
            if found[named.lead].replace(signal).is_some() {
                return Err(Refusal::LeadTwice { lead: named.lead });
            }
        }
        let (rate, length) = common(&found, &others).ok_or(Refusal::NoVoltage { found: names })?;
        if !RATES.contains(&rate.get()) {
            return Err(Refusal::RateOutOfRange(rate));
        }
        let mut leads = PerLead::from_fn(|lead| match found[lead].take() {
            Some(signal) => channel(signal.samples, rate, length),
            None => Channel::Absent(Absence::NotRecorded),
        });
        if let (Some(one), Some(two)) =
            (leads[Lead::I].samples().cloned(), leads[Lead::II].samples().cloned())
        {
            for lead in DEPENDENT {
                if leads[lead] == Channel::Absent(Absence::NotRecorded)
                    && let Some(samples) = derive(lead, &one, &two)
                {
                    leads[lead] = Channel::Derived(samples);
                }
            }
        }
        let mut extra = Vec::new();
        for signal in others {
            if let Channel::Recorded(samples) = channel(signal.samples, rate, length) {
                extra.push(Extra { name: signal.name, samples });
            }
        }
        if leads.iter().all(|(_, channel)| channel.samples().is_none()) && extra.is_empty() {
            return Err(Refusal::AllFlat);
        }
        Ok(Self { source, subject, occasion, rate, length, leads, extra, notes })
    }
}

/// The rate that most leads have (the higher of two), else that of most other potentials; and the longest
/// of those.
fn common(found: &PerLead<Option<Signal>>, others: &[Signal]) -> Option<(SampleRate, usize)> {
    let leads: Vec<&Samples> =
        found.iter().filter_map(|(_, signal)| Some(&signal.as_ref()?.samples)).collect();
    let others: Vec<&Samples> = others.iter().map(|signal| &signal.samples).collect();
    let signals = if leads.is_empty() { others } else { leads };
    let votes = |rate: SampleRate| signals.iter().filter(|samples| samples.rate() == rate).count();
    let rate = signals.iter().map(|samples| samples.rate()).max_by(|a, b| {
        (votes(*a), a.get()).partial_cmp(&(votes(*b), b.get())).unwrap_or(std::cmp::Ordering::Equal)
    })?;
    let length =
        signals.iter().filter(|samples| samples.rate() == rate).map(|samples| samples.len()).max()?;
    Some((rate, length))
}

fn channel(samples: Samples, rate: SampleRate, length: usize) -> Channel {
    if samples.rate() != rate {
        return Channel::Absent(Absence::OtherRate(samples.rate()));
    }
    match samples.extremes() {
        None => Channel::Absent(Absence::AllGaps),
        Some((low, high)) if low == high => Channel::Absent(Absence::Flat),
        Some(_) => Channel::Recorded(padded(samples, length)),
    }
}

/// A shorter signal has a gap at its end.
fn padded(samples: Samples, length: usize) -> Samples {
    if samples.len() == length {
        return samples;
    }
    let end = Spans::from_unordered(vec![Span { start: samples.len(), end: length }]);
    let mut values = samples.values_with_gaps().to_vec();
    values.resize(length, 0.0);
    Samples::new(samples.rate(), values, samples.gaps().union(&end))
        .with_saturated(samples.saturated().clone())
}

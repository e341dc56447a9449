//! From decoded signals to the twelve leads.

use super::limb::{DEPENDENT, check, derive};
use super::names::lead_of;
use super::{
    Absence, Channel, Decoded, Extra, Lead, Note, PerLead, Quantity, Recording, Refusal, Samples, Signal,
    age, plausible,
};
use crate::units::{SampleRate, Span, Spans};

/// Rates that are accepted, in samples per second.
const RATES: std::ops::RangeInclusive<f64> = 100.0..=8000.0;

impl Recording {
    /// Finds the twelve leads among the signals, derives III, aVR, aVL and aVF from I and II where the
    /// source does not hold them, checks them where it does, and notes what a reader must know.
    ///
    /// Potentials that are none of the twelve become [`Recording::extra`]; a recording may hold nothing else
    /// (see [`Recording::printable`]). The age is computed where the source states the birth date only.
    ///
    /// # Errors
    /// When no signal is a potential, a lead is named twice, all is flat, or the rate is out of range.
    pub fn from_decoded(decoded: Decoded) -> Result<Self, Refusal> {
        let Decoded { source, signals, mut subject, occasion, mut notes } = decoded;
        let Sorted { mut leads, others, left_out } = Sorted::of(signals, &mut notes)?;
        let (rate, length) = common(&leads, &others).ok_or(Refusal::NoVoltage { found: left_out.clone() })?;
        if !RATES.contains(&rate.get()) {
            return Err(Refusal::RateOutOfRange(rate));
        }
        if !left_out.is_empty() {
            notes.push(Note::information(format!("no ECG signal and left out: {}", left_out.join(", "))));
        }
        let step = largest_step(&leads);
        let mut leads = PerLead::from_fn(|lead| match leads[lead].take() {
            Some(signal) => channel(signal.samples, rate, length),
            None => Channel::Absent(Absence::NotRecorded),
        });
        complete_limb_leads(&mut leads, step, &mut notes);
        let extra = extra(others, rate, length, &mut notes);
        if leads.iter().all(|(_, channel)| channel.samples().is_none()) && extra.is_empty() {
            return Err(Refusal::AllFlat);
        }
        notes.extend(plausible::note(&PerLead::from_fn(|lead| leads[lead].samples())));
        notes.extend(age::complete(&mut subject, &occasion));
        Ok(Self { source, subject, occasion, rate, length, leads, extra, notes })
    }

    /// Whether a sheet can be printed: at least one of the twelve leads is there.
    ///
    /// # Errors
    /// The refusal that says why none is there.
    pub fn printable(&self) -> Result<(), Refusal> {
        if self.present().next().is_some() {
            return Ok(());
        }
        let named = |channel: &Channel| !matches!(channel, Channel::Absent(Absence::NotRecorded));
        if self.leads.iter().any(|(_, channel)| named(channel)) {
            return Err(Refusal::AllFlat);
        }
        Err(Refusal::NoKnownLead {
            found: self.extra.iter().map(|extra| shown(&extra.name).to_owned()).collect(),
        })
    }
}

/// The signals by what they are.
struct Sorted {
    leads: PerLead<Option<Signal>>,
    /// Potentials that are none of the twelve.
    others: Vec<Signal>,
    /// What is no potential, with its unit.
    left_out: Vec<String>,
}

impl Sorted {
    fn of(signals: Vec<Signal>, notes: &mut Vec<Note>) -> Result<Self, Refusal> {
        let mut sorted = Self { leads: PerLead::from_fn(|_| None), others: Vec::new(), left_out: Vec::new() };
        let (mut modified, mut uncalibrated) = (Vec::new(), Vec::new());
        for signal in signals {
            match &signal.quantity {
                Quantity::Other(unit) => {
                    let unit = if unit == Quantity::NO_UNIT { "no unit stated" } else { unit };
                    sorted.left_out.push(format!("{} ({unit})", shown(&signal.name)));
                    continue;
                }
                Quantity::UncalibratedVoltage => uncalibrated.push(shown(&signal.name).to_owned()),
                Quantity::Voltage => {}
            }
            match lead_of(&signal.name) {
                None => sorted.others.push(signal),
                Some(named) if named.modified => modified.push((named.lead, signal)),
                Some(named) => {
                    if sorted.leads[named.lead].replace(signal).is_some() {
                        return Err(Refusal::LeadTwice { lead: named.lead });
                    }
                }
            }
        }
        // A modified lead only stands in for one that is not there itself.
        for (lead, signal) in modified {
            if sorted.leads[lead].is_some() {
                sorted.others.push(signal);
                continue;
            }
            notes.push(Note::information(format!(
                "{} is shown as lead {lead}; its electrodes sit on the torso",
                signal.name
            )));
            sorted.leads[lead] = Some(signal);
        }
        if !uncalibrated.is_empty() {
            notes.push(Note::caution(format!(
                "the source states no calibration of {}: amplitudes in mV can't be relied on",
                uncalibrated.join(", ")
            )));
        }
        Ok(sorted)
    }
}

/// A name for messages.
fn shown(name: &str) -> &str {
    if name.is_empty() { "a signal without a name" } else { name }
}

/// The rate that most leads have (the higher of two), else that of most other potentials; and the longest
/// of those.
fn common(leads: &PerLead<Option<Signal>>, others: &[Signal]) -> Option<(SampleRate, usize)> {
    let leads: Vec<&Samples> =
        leads.iter().filter_map(|(_, signal)| Some(&signal.as_ref()?.samples)).collect();
    let others: Vec<&Samples> = others.iter().map(|signal| &signal.samples).collect();
    let signals = if leads.is_empty() { others } else { leads };
    let votes = |rate: SampleRate| signals.iter().filter(|samples| samples.rate() == rate).count();
    let rate = signals
        .iter()
        .map(|samples| samples.rate())
        .max_by(|a, b| votes(*a).cmp(&votes(*b)).then(a.get().total_cmp(&b.get())))?;
    let length =
        signals.iter().filter(|samples| samples.rate() == rate).map(|samples| samples.len()).max()?;
    Some((rate, length))
}

/// The largest step of the limb leads; `None` when one of them has none.
fn largest_step(leads: &PerLead<Option<Signal>>) -> Option<f64> {
    let limb = leads.iter().filter(|(lead, _)| lead.is_limb()).filter_map(|(_, signal)| signal.as_ref());
    limb.map(|signal| signal.resolution).reduce(|a, b| Some(a?.max(b?))).flatten()
}

/// Derives what is missing, or flat although I and II are not, and checks what is recorded.
fn complete_limb_leads(leads: &mut PerLead<Channel>, step: Option<f64>, notes: &mut Vec<Note>) {
    let recorded = PerLead::from_fn(|lead| leads[lead].samples());
    notes.extend(check(&recorded, step));
    let (Some(one), Some(two)) = (recorded[Lead::I].cloned(), recorded[Lead::II].cloned()) else { return };
    for lead in DEPENDENT {
        let absence = match &leads[lead] {
            Channel::Absent(absence) => absence.clone(),
            _ => continue,
        };
        let Some(samples) = derive(lead, &one, &two) else { continue };
        if absence != Absence::NotRecorded {
            notes.push(Note::caution(format!(
                "lead {lead} is {absence}; it is derived from I and II instead"
            )));
        }
        leads[lead] = Channel::Derived(samples);
    }
}

/// The other potentials of the common rate that are not flat.
fn extra(others: Vec<Signal>, rate: SampleRate, length: usize, notes: &mut Vec<Note>) -> Vec<Extra> {
    let mut extra = Vec::new();
    for Signal { name, samples, .. } in others {
        match channel(samples, rate, length) {
            Channel::Recorded(samples) | Channel::Derived(samples) => extra.push(Extra { name, samples }),
            Channel::Absent(absence) => {
                notes.push(Note::information(format!("{} is left out: {absence}", shown(&name))))
            }
        }
    }
    extra
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

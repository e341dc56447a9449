//! From counts to signals in mV.

use super::checks::Checks;
use super::comments::Stated;
use super::groups::{Group, frames};
use super::header::Header;
use super::signal_line::SignalLine;
use super::storage::Storage;
use crate::input::clipping;
use crate::input::files::Files;
use crate::input::voltage::millivolts_per;
use crate::input::{Error, Fault};
use crate::recording::{Note, Quantity, Samples, Signal};
use crate::units::{SampleRate, Span, Spans};
use std::path::Path;

/// header(5): "If the gain is zero or missing, this indicates that the signal amplitude is uncalibrated; in such
/// cases, a value of 200 […] may be assumed" (r).
const DEFAULT_GAIN: f64 = 200.0;

/// Every signal of the header, in its order.
pub(super) fn read(
    path: &Path,
    header: &Header,
    files: &mut Files,
    notes: &mut Vec<Note>,
) -> Result<Vec<Signal>, Error> {
    let groups = Group::open_all(path, header, files)?;
    let frames = frames(header, &groups).map_err(|fault| fault.within(path))?;
    for group in &groups {
        group.require(frames, path)?;
        notes.extend(group.surplus(frames));
    }
    let mut signals = Vec::with_capacity(header.signals.len());
    let mut checks = Checks::default();
    for group in groups {
        let (lines, storage) = (group.lines, group.storage);
        for (line, counts) in lines.iter().zip(group.decode(frames)) {
            if storage != Storage::Null {
                checks.compare(line, &counts);
            }
            let rate = rate(line, header.record.rate).map_err(|fault| fault.within(path))?;
            let length = frames as usize * line.samples_per_frame as usize;
            signals.push(signal(line, storage, &counts, rate, length));
        }
    }
    checks.report(notes);
    unit_notes(header, notes);
    Ok(signals)
}

/// What comments state of signals: scales that are not calibrated, and clipped spans, which then stand for
/// all that was found.
pub(super) fn apply(stated: &Stated, signals: &mut [Signal]) {
    for &index in &stated.uncalibrated {
        if let Some(signal) = signals.get_mut(index)
            && signal.quantity == Quantity::Voltage
        {
            signal.quantity = Quantity::UncalibratedVoltage;
        }
    }
    if stated.clipped.is_empty() {
        return;
    }
    for (index, signal) in signals.iter_mut().enumerate() {
        let spans = stated.clipped.iter().filter(|(of, _)| *of == index);
        let spans = spans.fold(Spans::none(), |all, (_, spans)| all.union(spans));
        let end = signal.samples.len();
        let inside = spans.iter().map(|span| Span { start: span.start, end: span.end.min(end) }).collect();
        let samples = signal.samples.clone();
        signal.samples = samples.with_saturated(Spans::from_unordered(inside));
    }
}

/// Samples per second of a signal, at so many `frames`.
pub(super) fn rate(line: &SignalLine, frames: SampleRate) -> Result<SampleRate, Fault> {
    let rate = frames.get() * f64::from(line.samples_per_frame);
    SampleRate::new(rate).ok_or_else(|| {
        Fault::malformed(line.at, "a finite sampling rate", format!("{rate}/s"), "correct the record line")
    })
}

fn signal(line: &SignalLine, storage: Storage, counts: &[i32], rate: SampleRate, length: usize) -> Signal {
    // The first `skew` frames of a lagging signal precede the recording; as many are missing at its end.
    let skew =
        usize::try_from(line.skew.saturating_mul(u64::from(line.samples_per_frame))).unwrap_or(usize::MAX);
    let counts = counts.get(skew..).unwrap_or_default();
    let missing = Spans::from_unordered(vec![Span { start: counts.len(), end: length }]);
    let gaps = match storage.invalid() {
        Some(invalid) => Spans::of_true(counts.iter().map(|&count| count == invalid)).union(&missing),
        None => missing,
    };
    let (quantity, factor) = quantity(line);
    let gain = line.gain.unwrap_or(DEFAULT_GAIN);
    let value = |count: i64| (count as f64 - line.baseline as f64) * factor / gain;
    let mut values: Vec<f64> = counts.iter().map(|&count| value(count.into())).collect();
    values.resize(length, 0.0);
    let limits = converter_limits(line, storage, counts).map(value);
    let samples = clipping::marked(Samples::new(rate, values, gaps), limits);
    Signal { name: line.description.clone(), quantity, resolution: Some(step(line)), samples }
}

/// What is measured, and how many units of the samples one unit of the header is.
pub(super) fn quantity(line: &SignalLine) -> (Quantity, f64) {
    let factor = match line.unit.as_deref() {
        None => 1.0,
        Some(unit) => match millivolts_per(unit) {
            Some(factor) => factor,
            None => return (Quantity::Other(unit.to_owned()), 1.0),
        },
    };
    match line.gain {
        Some(_) => (Quantity::Voltage, factor),
        None => (Quantity::UncalibratedVoltage, factor),
    }
}

/// One count in the unit of the samples.
pub(super) fn step(line: &SignalLine) -> f64 {
    (quantity(line).1 / line.gain.unwrap_or(DEFAULT_GAIN)).abs()
}

/// The smallest and largest count that the converter gives. Where a sample lies beyond them, the header
/// is wrong about the converter, and those of the storage format hold.
fn converter_limits(line: &SignalLine, storage: Storage, counts: &[i32]) -> [i64; 2] {
    let limits = |bits: u32, zero: i64| {
        let half = 1i64 << (bits.clamp(1, 32) - 1);
        [zero.saturating_sub(half), zero.saturating_add(half - 1)]
    };
    let own = limits(storage.bits(), 0);
    let Some(bits) = line.converter_bits.filter(|&bits| bits < storage.bits()) else { return own };
    let [low, high] = limits(bits, line.converter_zero);
    let beyond = counts
        .iter()
        .any(|&count| Some(count) != storage.invalid() && !(low..=high).contains(&i64::from(count)));
    if beyond { own } else { [low, high] }
}

fn unit_notes(header: &Header, notes: &mut Vec<Note>) {
    let mut unusual: Vec<&str> = header.signals.iter().filter_map(|line| line.unit.as_deref()).collect();
    unusual.retain(|unit| millivolts_per(unit) == Some(1.0) && *unit != "mV");
    unusual.sort_unstable();
    unusual.dedup();
    for unit in unusual {
        notes.push(Note::information(format!("the unit is written `{unit}` and read as mV")));
    }
}

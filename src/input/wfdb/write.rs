//! A record written: one header and one signal file.

use super::comments::{Stated, written};
use super::counts::{Counts, Width};
use crate::input::ExportError;
use crate::recording::{Decoded, Quantity, Signal, StartTime, Weight};
use std::fmt::Write as _;

/// `NAME.hea` and `NAME.dat`, in format 16, 24 or 32: the narrowest that holds every signal.
pub(in crate::input) fn write(decoded: &Decoded, name: &str) -> Result<Vec<(String, Vec<u8>)>, ExportError> {
    let allowed = |c: char| c.is_alphanumeric() || matches!(c, '_' | '-' | '.');
    if name.is_empty() || name.starts_with('.') || !name.chars().all(allowed) {
        return Err(ExportError::Name(name.to_owned()));
    }
    let frame = Frame::of(&decoded.signals)?;
    let counted: Result<Vec<Counts>, ExportError> = decoded.signals.iter().map(Counts::of).collect();
    let counted = counted?;
    let width = counted.iter().map(|counts| counts.width).max().unwrap_or(Width::Bits16);
    let file = format!("{name}.dat");
    let mut header = record_line(decoded, name, &frame);
    for ((signal, counts), samples) in decoded.signals.iter().zip(&counted).zip(&frame.samples) {
        header.push_str(&signal_line(signal, counts, width, &file, *samples, frame.count));
    }
    for comment in written(&stated(decoded)) {
        let _ = writeln!(header, "# {comment}");
    }
    let data = interleaved(&counted, &frame, width);
    Ok(vec![(format!("{name}.hea"), header.into_bytes()), (file, data)])
}

/// How samples of several rates share frames.
struct Frame {
    /// Frames per second.
    rate: f64,
    /// Samples of each signal in one frame.
    samples: Vec<usize>,
    /// Frames of the record; a signal that ends earlier is filled with gaps.
    count: usize,
}

impl Frame {
    fn of(signals: &[Signal]) -> Result<Self, ExportError> {
        let rates: Vec<f64> = signals.iter().map(|signal| signal.samples.rate().get()).collect();
        let refused = || {
            let mut rates = rates.clone();
            rates.sort_unstable_by(f64::total_cmp);
            rates.dedup();
            ExportError::Rates(rates)
        };
        let rate = rates.iter().copied().reduce(common_divisor).ok_or(ExportError::Empty)?;
        let samples: Vec<usize> = rates.iter().map(|own| (own / rate).round() as usize).collect();
        // The reader multiplies: the products must be the rates.
        let exact = |(own, samples): (&f64, &usize)| (rate * *samples as f64 - own).abs() <= 1e-12 * own;
        let small = samples.iter().sum::<usize>() <= 1 << 16;
        if !small || !rates.iter().zip(&samples).all(exact) {
            return Err(refused());
        }
        let count = signals
            .iter()
            .zip(&samples)
            .map(|(signal, samples)| signal.samples.len().div_ceil(*samples))
            .max();
        Ok(Self { rate, samples, count: count.unwrap_or(0) })
    }
}

/// The greatest rate of which both are whole multiples, by Euclid; the remainders of whole multiples are
/// nothing but rounding.
fn common_divisor(a: f64, b: f64) -> f64 {
    let (mut high, mut low) = (a.max(b), a.min(b));
    let rounding = 1e-9 * low;
    while low > rounding {
        let rest = high % low;
        (high, low) = (low, if low - rest < rounding { 0.0 } else { rest });
    }
    high
}

fn record_line(decoded: &Decoded, name: &str, frame: &Frame) -> String {
    let mut line = format!("{name} {} {} {}", decoded.signals.len(), frame.rate, frame.count);
    if let Some(StartTime { local, .. }) = decoded.occasion.start {
        let _ = write!(line, " {}", local.format("%H:%M:%S%.f %d/%m/%Y"));
    }
    line.push('\n');
    line
}

fn signal_line(
    signal: &Signal,
    counts: &Counts,
    width: Width,
    file: &str,
    samples: usize,
    frames: usize,
) -> String {
    let several = if samples > 1 { format!("x{samples}") } else { String::new() };
    let unit = match &signal.quantity {
        Quantity::Voltage | Quantity::UncalibratedVoltage => "mV".to_owned(),
        Quantity::Other(unit) => unit.split_ascii_whitespace().collect::<Vec<_>>().join("_"),
    };
    let bits = width.bits();
    let sum = counts.checksum(width, samples * frames);
    let first = counts.at(0, width);
    let name = signal.name.lines().collect::<Vec<_>>().join(" ");
    let gain = counts.gain;
    format!("{file} {bits}{several} {gain}({})/{unit} {bits} 0 {first} {sum} 0 {name}", counts.baseline)
        .trim_end()
        .to_owned()
        + "\n"
}

fn stated(decoded: &Decoded) -> Stated {
    let signals = decoded.signals.iter().enumerate();
    let uncalibrated = signals.clone().filter(|(_, signal)| signal.quantity == Quantity::UncalibratedVoltage);
    let clipped = signals.map(|(index, signal)| (index, signal.samples.saturated().clone()));
    let cautions = decoded.notes.iter().filter(|note| note.weight == Weight::Caution);
    Stated {
        subject: decoded.subject.clone(),
        occasion: decoded.occasion.clone(),
        zone: decoded.occasion.start.and_then(|start| start.zone),
        notes: cautions.cloned().collect(),
        uncalibrated: uncalibrated.map(|(index, _)| index).collect(),
        clipped: clipped.filter(|(_, spans)| !spans.is_empty()).collect(),
    }
}

fn interleaved(counted: &[Counts], frame: &Frame, width: Width) -> Vec<u8> {
    let per_frame: usize = frame.samples.iter().sum();
    let mut data = Vec::with_capacity(frame.count * per_frame * width.bits() as usize / 8);
    for index in 0..frame.count {
        for (counts, &samples) in counted.iter().zip(&frame.samples) {
            for at in index * samples..(index + 1) * samples {
                let bytes = counts.at(at, width).to_le_bytes();
                data.extend_from_slice(&bytes[..width.bits() as usize / 8]);
            }
        }
    }
    data
}

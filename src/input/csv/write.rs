//! A table written, with its sidecar.

use super::sidecar::Sidecar;
use crate::recording::{Decoded, Quantity, Samples, Signal};
use crate::units::SampleRate;
use std::fmt::Write as _;

/// `NAME.csv` and `NAME.toml` with the signals of the most common rate; for every other rate a pair
/// `NAME_125Hz.csv` and `NAME_125Hz.toml`.
pub(in crate::input) fn write(decoded: &Decoded, name: &str) -> Vec<(String, Vec<u8>)> {
    let mut files = Vec::new();
    for (place, rate) in rates(&decoded.signals).into_iter().enumerate() {
        let name = if place == 0 { name.to_owned() } else { format!("{name}_{}Hz", rate.get()) };
        let signals: Vec<&Signal> =
            decoded.signals.iter().filter(|signal| signal.samples.rate() == rate).collect();
        let sidecar = Sidecar::of(decoded, &signals, rate).text();
        files.push((format!("{name}.csv"), table(&signals).into_bytes()));
        files.push((format!("{name}.toml"), sidecar.into_bytes()));
    }
    files
}

/// Every rate once, the one of most signals first (of equals the earlier), the others as they come.
fn rates(signals: &[Signal]) -> Vec<SampleRate> {
    let mut rates: Vec<(SampleRate, usize)> = Vec::new();
    for signal in signals {
        let rate = signal.samples.rate();
        match rates.iter_mut().find(|(known, _)| *known == rate) {
            Some((_, count)) => *count += 1,
            None => rates.push((rate, 1)),
        }
    }
    rates.sort_by_key(|(_, count)| std::cmp::Reverse(*count));
    rates.into_iter().map(|(rate, _)| rate).collect()
}

fn table(signals: &[&Signal]) -> String {
    let headings: Vec<String> = signals.iter().map(|signal| heading(signal)).collect();
    let length = signals.iter().map(|signal| signal.samples.len()).max().unwrap_or(0);
    let decimals: Vec<Option<usize>> = signals.iter().map(|signal| decimals(signal.resolution)).collect();
    let mut text = headings.join(",");
    text.push('\n');
    for index in 0..length {
        for (column, (signal, decimals)) in signals.iter().zip(&decimals).enumerate() {
            if column > 0 {
                text.push(',');
            }
            cell(&mut text, &signal.samples, index, *decimals, signals.len() == 1);
        }
        text.push('\n');
    }
    text
}

/// The name and unit, always in quotes, so that no name can be taken for something else.
fn heading(signal: &Signal) -> String {
    let unit = match &signal.quantity {
        Quantity::Voltage | Quantity::UncalibratedVoltage => "mV",
        Quantity::Other(unit) => unit,
    };
    let text = format!("{} [{unit}]", signal.name);
    format!("\"{}\"", text.replace('"', "\"\"").replace(['\r', '\n'], " "))
}

/// Digits that tell a tenth of a step.
fn decimals(resolution: Option<f64>) -> Option<usize> {
    resolution.map(|step| ((-step.log10()).ceil() + 1.0).clamp(0.0, 15.0) as usize)
}

fn cell(text: &mut String, samples: &Samples, index: usize, decimals: Option<usize>, alone: bool) {
    let Some(value) = samples.at(index) else {
        // An empty line would be no row at all.
        text.push_str(if alone { "\"\"" } else { "" });
        return;
    };
    let start = text.len();
    let _ = match decimals {
        Some(decimals) => write!(text, "{value:.decimals$}"),
        None => write!(text, "{value}"),
    };
    if text[start..].contains('.') {
        text.truncate(text.trim_end_matches('0').trim_end_matches('.').len());
    }
    if &text[start..] == "-0" {
        text.replace_range(start.., "0");
    }
}

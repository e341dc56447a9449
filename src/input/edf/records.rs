//! Data records: the samples of all signals, one signal after the other.

use super::annotations::Annotations;
use super::header::{Header, Width};
use super::timeline::Timeline;
use crate::input::pieces::Pieces;
use crate::input::{Error, clipping};
use crate::recording::{Samples, Signal};
use crate::units::SampleRate;

/// What all data records hold.
pub(super) struct Held {
    /// Values of each signal that holds samples, in the order of the header.
    pub values: Vec<Vec<f64>>,
    /// The time that each data record states, in seconds from the start in the header.
    pub onsets: Vec<Option<f64>>,
    pub annotations: Annotations,
}

/// Reads `count` data records; the caller has compared it with the length of the file.
pub(super) fn read(header: &Header, count: u64, pieces: &mut Pieces) -> Result<Held, Error> {
    let capacity = |samples: u64| Vec::with_capacity((samples * count) as usize);
    let mut values: Vec<Vec<f64>> = header.ordinary().map(|signal| capacity(signal.samples)).collect();
    let mut onsets = Vec::new();
    let mut annotations = Annotations::default();
    for _ in 0..count {
        let mut rest = pieces.take(header.record_bytes(), "data records")?;
        let mut values = values.iter_mut();
        let mut onset = None;
        let mut first = true;
        for signal in &header.signals {
            let bytes;
            (bytes, rest) = rest.split_at((signal.samples * header.width.bytes()) as usize);
            if signal.annotations {
                let stated = annotations.take(bytes);
                onset = if first { stated } else { onset };
                first = false;
            } else if let Some(values) = values.next() {
                extend(values, bytes, header.width, |count| signal.value(count));
            }
        }
        if !first {
            onsets.push(onset);
        }
    }
    Ok(Held { values, onsets, annotations })
}

fn extend(values: &mut Vec<f64>, bytes: &[u8], width: Width, value: impl Fn(f64) -> f64) {
    match width {
        Width::Bits16 => {
            let counts = bytes.as_chunks::<2>().0.iter().map(|&word| i16::from_le_bytes(word));
            values.extend(counts.map(|count| value(count.into())));
        }
        Width::Bits24 => {
            let counts =
                bytes.as_chunks::<3>().0.iter().map(|&[a, b, c]| i32::from_le_bytes([0, a, b, c]) >> 8);
            values.extend(counts.map(|count| value(count.into())));
        }
    }
}

/// The signals, each value at its time.
pub(super) fn signals(header: &Header, values: Vec<Vec<f64>>, timeline: &Timeline) -> Vec<Signal> {
    let signals = header.ordinary().zip(values).filter_map(|(signal, values)| {
        let rate = SampleRate::new(signal.samples as f64 / header.duration)?;
        let (values, gaps) = timeline.spread(values, signal.samples as usize, rate);
        let samples = Samples::new(rate, values, gaps);
        let [low, high] = samples.extremes().map_or([0.0; 2], |(low, high)| [low, high]);
        // Where a sample lies beyond the limits in the header, it is wrong about them, and only those of the
        // storage hold.
        let stated = signal.digital_limits().map(|count| signal.value(count));
        let sound = low >= stated[0].min(stated[1]) && high <= stated[0].max(stated[1]);
        let limits = if sound { stated } else { header.width.limits().map(|count| signal.value(count)) };
        Some(Signal {
            name: signal.label.clone(),
            quantity: signal.quantity(),
            resolution: Some(signal.step()),
            samples: clipping::marked(samples, limits),
        })
    });
    signals.collect()
}

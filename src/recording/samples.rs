//! The samples of one signal.

use crate::units::{SampleRate, Span, Spans};

/// Equally spaced samples with their gaps.
///
/// A value inside a gap is never handed out as a sample: read through [`Samples::runs`] or
/// [`Samples::at`].
#[derive(Clone, Debug, PartialEq)]
pub struct Samples {
    rate: SampleRate,
    values: Vec<f64>,
    gaps: Spans,
    saturated: Spans,
}

impl Samples {
    /// Values in the unit of the signal that holds them (mV for a lead). Values that are not finite
    /// become gaps, and so does what `gaps` names.
    pub fn new(rate: SampleRate, mut values: Vec<f64>, gaps: Spans) -> Self {
        let broken = Spans::of_true(values.iter().map(|value| !value.is_finite()));
        let gaps = gaps.union(&broken);
        let length = values.len();
        let gaps = Spans::from_unordered(
            gaps.iter().map(|gap| Span { start: gap.start, end: gap.end.min(length) }).collect(),
        );
        for gap in gaps.iter() {
            values[gap.start..gap.end].fill(0.0);
        }
        Self { rate, values, gaps, saturated: Spans::none() }
    }

    /// The same samples, known to be clipped at the converter's limit in `saturated`.
    pub fn with_saturated(mut self, saturated: Spans) -> Self {
        self.saturated = saturated;
        self
    }

    /// The same gaps and clipped spans over other values, as a filter gives them.
    ///
    /// # Panics
    /// When the count differs: a filter keeps the length.
    pub fn with_values(&self, values: Vec<f64>) -> Self {
        assert_eq!(values.len(), self.values.len(), "a filter keeps the length");
        Self { rate: self.rate, values, gaps: self.gaps.clone(), saturated: self.saturated.clone() }
    }

    /// Samples per second.
    pub fn rate(&self) -> SampleRate {
        self.rate
    }

    /// The count of samples, gaps included.
    pub fn len(&self) -> usize {
        self.values.len()
    }

    /// Whether there are none.
    pub fn is_empty(&self) -> bool {
        self.values.is_empty()
    }

    /// Where nothing was recorded.
    pub fn gaps(&self) -> &Spans {
        &self.gaps
    }

    /// Where the converter stood at its limit.
    pub fn saturated(&self) -> &Spans {
        &self.saturated
    }

    /// One sample; `None` in a gap or outside.
    pub fn at(&self, index: usize) -> Option<f64> {
        if self.gaps.contains(index) { None } else { self.values.get(index).copied() }
    }

    /// The stretches without a gap: first index and values.
    pub fn runs(&self) -> impl Iterator<Item = (usize, &[f64])> {
        let spans: Vec<Span> = self.gaps.complement(self.values.len()).iter().collect();
        spans.into_iter().map(|span| (span.start, &self.values[span.start..span.end]))
    }

    /// All values; those in a gap mean nothing, so a caller must mask them with [`Samples::gaps`].
    pub fn values_with_gaps(&self) -> &[f64] {
        &self.values
    }

    /// Smallest and largest valid value; `None` when all is gap.
    pub fn extremes(&self) -> Option<(f64, f64)> {
        let mut extremes: Option<(f64, f64)> = None;
        for (_, run) in self.runs() {
            for &value in run {
                let (low, high) = extremes.unwrap_or((value, value));
                extremes = Some((low.min(value), high.max(value)));
            }
        }
        extremes
    }
}

//! Traces of one page: every row with its gain, every lead with its vertices at sample times.

use super::layout::{Area, Shown};
use super::sheet::Sheet;
use super::timing::Stay;
use crate::case::Case;
use crate::recording::{Channel, Samples};
use crate::units::{Span, Spans};

/// Without a low cut, a lead whose middle lies farther from 0 than this, in mV, is moved, and says so.
const FAR_FROM_ZERO: f64 = 1.0;
/// Rounding of products of times, in samples.
const ROUNDING: f64 = 1e-6;

/// One row of one page.
#[derive(Clone, Debug)]
pub(super) struct Row {
    /// The zero line, in mm from the paper's top.
    pub base: f64,
    pub top: f64,
    pub bottom: f64,
    /// In mm/mV.
    pub gain: f64,
    pub segments: Vec<Segment>,
}

/// One lead on a row.
#[derive(Clone, Debug)]
pub(super) struct Segment {
    pub shown: Shown,
    pub left: f64,
    pub right: f64,
    /// From the first sample of the recording, in s.
    pub from: f64,
    pub to: f64,
    /// What was subtracted, in mV, because the lead lies far from 0.
    pub offset: f64,
    pub content: Content,
}

/// What a segment shows.
#[derive(Clone, Debug)]
pub(super) enum Content {
    /// Stretches without a gap, each with x in mm and potential in mV; and what breaks them.
    Trace { pieces: Vec<Vec<(f64, f64)>>, breaks: Vec<Break> },
    /// Why there is nothing.
    Nothing(String),
}

/// Where a trace is broken.
#[derive(Clone, Copy, Debug)]
pub(super) struct Break {
    pub left: f64,
    pub right: f64,
    /// Whether the converter stood at its limit; otherwise nothing was recorded.
    pub saturated: bool,
}

/// The rows of a page, `page` counting from 0.
pub(super) fn rows(sheet: &Sheet, page: usize) -> Vec<Row> {
    let (timing, field, traces_left) = (&sheet.timing, sheet.geometry.field, sheet.traces_left());
    let speed = sheet.options.speed.get();
    let page_from = page as f64 * timing.row;
    let count = timing.rows.len().max(1);
    let height = (field.height / count as f64).floor();
    let above = ((field.height - height * count as f64) / 2.0).floor();
    let mut rows = Vec::new();
    for (index, stays) in timing.rows.iter().enumerate() {
        let top = field.top + above + height * index as f64;
        let segments = stays
            .iter()
            .filter_map(|stay| cut(stay, page_from, timing.row))
            .map(|stay| segment(sheet.case, &stay, traces_left - page_from * speed, speed))
            .collect();
        let mut row = Row {
            base: top + (height / 2.0).round(),
            top,
            bottom: top + height,
            gain: sheet.options.gain.get(),
            segments,
        };
        halve_until_inside(&mut row, field);
        rows.push(row);
    }
    rows
}

/// What of a stay falls on the page that starts at `from`.
fn cut(stay: &Stay, from: f64, length: f64) -> Option<Stay> {
    let left = stay.sheet_from.max(from);
    let right = (stay.sheet_from + stay.length).min(from + length);
    let moved = left - stay.sheet_from;
    (right - left > 1e-6).then(|| Stay {
        sheet_from: left,
        source_from: stay.source_from + moved,
        length: right - left,
        ..*stay
    })
}

fn segment(case: &Case, stay: &Stay, sheet_left: f64, speed: f64) -> Segment {
    let rate = case.display.rate.get();
    let left = sheet_left + stay.sheet_from * speed;
    let (from, to) = (stay.source_from, stay.source_from + stay.length);
    let mut segment = Segment {
        shown: stay.shown,
        left,
        right: left + stay.length * speed,
        from,
        to,
        offset: 0.0,
        content: Content::Nothing(String::new()),
    };
    let samples = match (&case.recording.leads[stay.shown.lead], &case.display.leads[stay.shown.lead]) {
        (Channel::Absent(why), _) => {
            segment.content = Content::Nothing(why.to_string());
            return segment;
        }
        (_, None) => {
            segment.content = Content::Nothing("not recorded".to_owned());
            return segment;
        }
        (_, Some(samples)) => samples,
    };
    let span = Span {
        start: (from * rate - ROUNDING).ceil().max(0.0) as usize,
        end: ((to * rate + ROUNDING).floor() as usize + 1).min(samples.len()),
    };
    let broken = samples.gaps().union(samples.saturated());
    let valid: Vec<Span> = within(&broken.complement(samples.len()), span);
    if valid.iter().all(|piece| piece.len() < 2) {
        segment.content = Content::Nothing(format!("nothing recorded from {from:.1} to {to:.1} s"));
        return segment;
    }
    if case.display.chain.low_cut.is_none() {
        segment.offset = offset(samples, &valid);
    }
    let sign = if stay.shown.inverted { -1.0 } else { 1.0 };
    let values = samples.values_with_gaps();
    let x = |index: usize| left + (index as f64 / rate - from) * speed;
    let pieces = valid
        .iter()
        .filter(|piece| piece.len() > 1)
        .map(|piece| {
            (piece.start..piece.end)
                .map(|index| (x(index), sign * (values[index] - segment.offset)))
                .collect()
        })
        .collect();
    let breaks = within(&broken, span)
        .iter()
        .map(|gap| Break {
            left: x(gap.start).max(segment.left),
            right: x(gap.end).min(segment.right),
            saturated: samples.saturated().touches(*gap),
        })
        .collect();
    segment.content = Content::Trace { pieces, breaks };
    segment
}

fn within(spans: &Spans, outer: Span) -> Vec<Span> {
    spans
        .iter()
        .map(|span| Span { start: span.start.max(outer.start), end: span.end.min(outer.end) })
        .filter(|span| !span.is_empty())
        .collect()
}

/// The middle value, to 0.1 mV, where it lies far from 0.
fn offset(samples: &Samples, valid: &[Span]) -> f64 {
    let all = samples.values_with_gaps();
    let mut values: Vec<f64> =
        valid.iter().flat_map(|span| all[span.start..span.end].iter().copied()).collect();
    let middle = values.len() / 2;
    let median = *values.select_nth_unstable_by(middle, f64::total_cmp).1;
    if median.abs() > FAR_FROM_ZERO { (median * 10.0).round() / 10.0 } else { 0.0 }
}

/// Halves a row's gain until every trace of it lies inside the field.
fn halve_until_inside(row: &mut Row, field: Area) {
    let (mut low, mut high) = (0.0f64, 0.0f64);
    for segment in &row.segments {
        if let Content::Trace { pieces, .. } = &segment.content {
            for &(_, value) in pieces.iter().flatten() {
                low = low.min(value);
                high = high.max(value);
            }
        }
    }
    // Half a line's width stays inside too.
    let (above, below) = (row.base - field.top - 0.2, field.bottom() - row.base - 0.2);
    while row.gain > f64::MIN_POSITIVE && (high * row.gain > above || -low * row.gain > below) {
        row.gain /= 2.0;
    }
}

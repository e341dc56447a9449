//! Traces of one page: every row with its gain, every lead with its vertices at sample times.

use super::given::Sheet;
use super::layout::{Area, Shown};
use super::timing::Stay;
use crate::case::Case;
use crate::recording::{Channel, Samples};
use crate::units::{Span, Spans};

/// Without a low cut, a lead whose middle lies farther from 0 than this, in mV, is moved, and says so.
const FAR_FROM_ZERO: f64 = 1.0;
/// Height of the calibration pulse.
pub(super) const PULSE_MILLIVOLTS: f64 = 1.0;
/// A trace stays so far inside the field, half of its line included.
const MARGIN: f64 = 0.2;
/// The part of the rows' distance that is given up before a gain is halved (own choice).
const SQUEEZE: f64 = 0.25;
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

impl Row {
    /// The lowest and the highest potential, in mV, the calibration pulse included.
    fn reach(&self) -> (f64, f64) {
        let traces = self.segments.iter().filter_map(|segment| match &segment.content {
            Content::Trace { pieces, .. } => Some(pieces),
            Content::Nothing(_) => None,
        });
        traces.flatten().flatten().fold((0.0, PULSE_MILLIVOLTS), |(low, high): (f64, f64), &(_, value)| {
            (low.min(value), high.max(value))
        })
    }
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
    let (timing, field) = (&sheet.timing, sheet.geometry.field);
    let speed = sheet.options.speed.get();
    let page_from = page as f64 * timing.row;
    let left = sheet.traces_left() - page_from * speed;
    let mut rows: Vec<Row> = timing
        .rows
        .iter()
        .map(|stays| {
            let parts = stays.iter().filter_map(|stay| cut(stay, page_from, timing.row));
            let segments = parts.map(|stay| segment(sheet.case, &stay, left, speed)).collect();
            Row { base: 0.0, top: 0.0, bottom: 0.0, gain: sheet.options.gain.get(), segments }
        })
        .collect();
    arrange(&mut rows, field);
    rows
}

/// Spreads the rows evenly over the field; the first moves down and the last up, by whole mm, where that
/// keeps their traces inside at full gain. A row that still leaves the field gets half of its gain.
fn arrange(rows: &mut [Row], field: Area) {
    let count = rows.len().max(1);
    let height = (field.height / count as f64).floor();
    let above = ((field.height - height * count as f64) / 2.0).floor();
    let (mut first, mut last) = (above + (height / 2.0).round(), 0.0);
    last += first + height * (count - 1) as f64;
    let mut spare = (SQUEEZE * height * (count - 1) as f64).floor();
    if let [top, .., bottom] = &*rows {
        let down = (top.reach().1 * top.gain + MARGIN - first).ceil().max(0.0);
        if down <= spare {
            first += down;
            spare -= down;
        }
        let up = (MARGIN - bottom.reach().0 * bottom.gain - (field.height - last)).ceil().max(0.0);
        if up <= spare {
            last -= up;
        }
    }
    let pitch = (last - first) / (count - 1).max(1) as f64;
    for (index, row) in rows.iter_mut().enumerate() {
        row.base = field.top + (first + pitch * index as f64).round();
        row.top = (row.base - height / 2.0).max(field.top);
        row.bottom = (row.base + height / 2.0).min(field.bottom());
        let (low, high) = row.reach();
        let (above, below) = (row.base - field.top - MARGIN, field.bottom() - row.base - MARGIN);
        while row.gain > f64::MIN_POSITIVE && (high * row.gain > above || -low * row.gain > below) {
            row.gain /= 2.0;
        }
    }
}

/// What of a stay falls on the page that starts at `from`.
fn cut(stay: &Stay, from: f64, length: f64) -> Option<Stay> {
    let left = stay.sheet_from.max(from);
    let right = (stay.sheet_from + stay.length).min(from + length);
    let moved = left - stay.sheet_from;
    let part =
        Stay { sheet_from: left, source_from: stay.source_from + moved, length: right - left, ..*stay };
    (part.length > ROUNDING).then_some(part)
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

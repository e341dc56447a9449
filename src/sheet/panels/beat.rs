//! A representative beat, magnified, with the marks that were made on it.

use super::super::draw::{artifact, dashed, paragraph, pen, polyline};
use super::super::given::{Sheet, plain};
use super::super::layout::{Area, Line};
use super::super::{ComposeError, Element, Role, Shape};
use crate::average::RepresentativeBeat;
use crate::recording::Lead;

/// Speeds and gains of magnified beats; the largest that fit are taken.
const SPEEDS: [f64; 3] = [100.0, 50.0, 25.0];
const SLOWEST: f64 = 12.5;
const GAINS: [f64; 7] = [40.0, 20.0, 10.0, 5.0, 2.5, 1.0, 0.5];
/// The part of the height that the focus may fill.
const FOCUS: f64 = 0.6;
/// Between a bracket and its name.
const NAME_GAP: f64 = 0.8;
/// Distance between the rows of brackets.
const BRACKET: f64 = 2.9;

/// A stretch of the beat with a name, such as RP; times in s from the fiducial.
#[derive(Clone, Debug)]
pub(super) struct Bracket {
    pub from: f64,
    pub to: f64,
    pub text: String,
}

/// What is drawn.
pub(super) struct View<'a> {
    pub beat: &'a RepresentativeBeat,
    pub lead: Lead,
    /// The stretch that must be seen, in s from the fiducial.
    pub from: f64,
    pub to: f64,
    /// The stretch that sets the gain; the rest may leave the box.
    pub focus: (f64, f64),
    pub brackets: Vec<Bracket>,
}

/// The beat in a box of this width and height, its scale above and its brackets below.
pub(super) fn elements(sheet: &Sheet, area: Area, view: &View) -> Result<Vec<Element>, ComposeError> {
    let Some(signal) = view.beat.lead(view.lead) else { return Ok(Vec::new()) };
    let (name, label) = (sheet.lead_name(), sheet.label());
    let lines = sheet.layout.lines;
    let caption = area.top + name.cap();
    let below = BRACKET * view.brackets.len() as f64;
    let plot = Area { top: caption + 1.2, height: area.height - name.cap() - 1.2 - below, ..area };
    let mut ends = vec![(view.to, 0.0)];
    for bracket in &view.brackets {
        ends.push((bracket.to, NAME_GAP + label.width(&bracket.text)?));
    }
    let fits = |speed: &f64| ends.iter().all(|(to, name)| (to - view.from) * speed + name <= plot.width);
    let speed = SPEEDS.into_iter().find(fits).unwrap_or(SLOWEST);
    let to = view.from + plot.width / speed;
    let value = |time: f64| -> Option<f64> {
        let index = view.beat.fiducial.0 as f64 + time * view.beat.rate.get();
        let index = index.round();
        (index >= view.beat.valid.start as f64 && index < view.beat.valid.end as f64)
            .then(|| signal.get(index as usize).copied())
            .flatten()
    };
    let rate = view.beat.rate.get();
    let samples: Vec<(f64, f64)> = ((view.from * rate).ceil() as i64..=(to * rate).floor() as i64)
        .filter_map(|offset| Some((offset as f64 / rate, value(offset as f64 / rate)?)))
        .collect();
    let range = |from: f64, to: f64| {
        samples.iter().filter(|(time, _)| (from..=to).contains(time)).fold(
            None,
            |range: Option<(f64, f64)>, &(_, value)| {
                Some(range.map_or((value, value), |(low, high)| (low.min(value), high.max(value))))
            },
        )
    };
    let Some((low, high)) = range(view.focus.0, view.focus.1) else { return Ok(Vec::new()) };
    let room = plot.height * FOCUS;
    let gain = GAINS.into_iter().find(|gain| (high - low) * gain <= room).unwrap_or(0.5);
    let middle = (low + high) / 2.0;
    let x = |time: f64| plot.left + (time - view.from) * speed;
    let y = |value: f64| plot.top + plot.height / 2.0 - (value - middle) * gain;

    let inside: Vec<(f64, f64)> = samples.iter().map(|&(time, value)| (x(time), y(value))).collect();
    let (pieces, cut) = clip(&inside, plot.top, plot.bottom());
    let mut marks = Vec::new();
    let mark = lines.mark;
    let thin = dashed(Line { width: 0.1, ..mark }, 0.5, 0.5);
    let mut texts = Vec::new();
    let mut foot = plot.bottom();
    // The one that reaches farthest comes first, so that no name is crossed by another's end line.
    let mut brackets: Vec<&Bracket> = view.brackets.iter().collect();
    brackets.sort_by(|a, b| b.to.total_cmp(&a.to));
    for bracket in brackets {
        let (left, right) = (x(bracket.from), x(bracket.to).min(plot.right()));
        let line = foot + 1.3;
        marks.push(polyline(&[(left, plot.top), (left, line)], thin));
        marks.push(polyline(&[(right, plot.top), (right, line)], thin));
        marks.push(polyline(&[(left, line), (right, line)], pen(Line { width: 0.3, ..mark })));
        let room = (area.right() - label.width(&bracket.text)?).max(area.left);
        let text_left = (right + NAME_GAP).min(room);
        texts.push(label.inked(mark.ink).left(text_left, line + label.cap() / 2.0, &bracket.text));
        foot += BRACKET;
    }
    let beside = area.left + name.width(view.lead.name())? + 1.2;
    let mut scale = format!("{} mm/s, {} mm/mV", plain(speed), plain(gain));
    let alt = format!("Representative beat in lead {}, {scale}", view.lead);
    if cut {
        let longer = format!("{scale}, QRS cut");
        let fits = label.width(&longer)? <= area.right() - beside;
        scale = if fits { longer } else { format!("{scale}, cut") };
    }
    let trace = Line { width: lines.trace.width * 0.9, ..lines.trace };
    let shapes: Vec<Shape> = pieces.iter().map(|piece| polyline(piece, pen(trace))).collect();
    Ok(vec![
        artifact(marks),
        Element { role: Role::Figure { alt }, shapes },
        paragraph(vec![
            name.left(area.left, caption, view.lead.name()),
            label.left(beside, caption, &label.fit(&scale, area.right() - beside)?),
        ]),
        paragraph(texts),
    ])
}

/// The line within two heights, in pieces, and whether anything was left out.
fn clip(points: &[(f64, f64)], top: f64, bottom: f64) -> (Vec<Vec<(f64, f64)>>, bool) {
    let mut pieces: Vec<Vec<(f64, f64)>> = Vec::new();
    let mut cut = false;
    let mut open = false;
    for pair in points.windows(2) {
        let (start, end) = (pair[0], pair[1]);
        // The part of the edge between both heights, as parameters along it.
        let (mut from, mut to) = (0.0f64, 1.0f64);
        let rise = end.1 - start.1;
        if rise.abs() < 1e-9 {
            if start.1 < top || start.1 > bottom {
                to = -1.0;
            }
        } else {
            let (a, b) = ((top - start.1) / rise, (bottom - start.1) / rise);
            from = from.max(a.min(b));
            to = to.min(a.max(b));
        }
        if from >= to {
            cut = true;
            open = false;
            continue;
        }
        cut |= from > 0.0 || to < 1.0;
        let at = |part: f64| (start.0 + (end.0 - start.0) * part, start.1 + rise * part);
        match pieces.last_mut().filter(|_| open && from <= 0.0) {
            Some(piece) => piece.push(at(to)),
            None => pieces.push(vec![at(from), at(to)]),
        }
        open = to >= 1.0;
    }
    (pieces, cut)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn what_leaves_the_box_is_cut_at_its_edge_and_said() {
        let points = [(0.0, 5.0), (1.0, 5.0), (2.0, -5.0), (3.0, 5.0)];
        let (pieces, cut) = clip(&points, 0.0, 10.0);
        assert!(cut);
        assert_eq!(pieces, [vec![(0.0, 5.0), (1.0, 5.0), (1.5, 0.0)], vec![(2.5, 0.0), (3.0, 5.0)]]);
        assert_eq!(clip(&points[..2], 0.0, 10.0), (vec![vec![(0.0, 5.0), (1.0, 5.0)]], false));
    }
}

//! The grid field: grid, calibration pulses, traces, separators, lead names.

use super::draw::{Style, artifact, paragraph, pen, polyline, rect};
use super::given::{Sheet, plain};
use super::layout::Area;
use super::occupied::Occupied;
use super::thin;
use super::trace::{Content, PULSE_MILLIVOLTS, Row, Segment};
use super::{ComposeError, Element, Grid, Role, Shape};

/// Duration of the calibration pulse (a square of 1 mV and 200 ms).
const PULSE_SECONDS: f64 = 0.2;
/// Flat line before and after the pulse.
const PULSE_FOOT: f64 = 1.5;
/// A separator's strokes, from and to this far from the zero line.
const SEPARATOR: (f64, f64) = (4.0, 7.0);
/// Least distance between a text and a line.
const CLEAR: f64 = 0.4;
/// Below the baseline of a name.
const DESCENT: f64 = 0.6;
/// Between a name and what is said beside it.
const GAP: f64 = 1.0;

/// All of a page's grid field, bottom first.
pub(super) fn elements(sheet: &Sheet, rows: &[Row]) -> Result<Vec<Element>, ComposeError> {
    let field = sheet.geometry.field;
    let lines = sheet.layout.lines;
    let mut occupied = Occupied::new(field.left, field.right());
    let mut elements = vec![artifact(vec![Shape::Grid(Grid {
        field: rect(field),
        fine: pen(lines.fine_ruling),
        coarse: pen(lines.coarse_ruling),
    })])];
    let mut marks = Vec::new();
    for row in rows {
        for stroke in separators(row) {
            occupied.line(&stroke, lines.separator.width / 2.0);
            marks.push(polyline(&stroke, pen(lines.separator)));
        }
        let pulse = pulse(sheet, row);
        occupied.line(&pulse, lines.pulse.width / 2.0);
        marks.push(polyline(&pulse, pen(lines.pulse)));
    }
    elements.push(artifact(marks));
    for row in rows {
        elements.extend(row.segments.iter().filter_map(|segment| figure(sheet, row, segment, &mut occupied)));
    }
    let mut names = Vec::new();
    for row in rows.iter().filter(|row| row.gain != sheet.options.gain.get()) {
        names.push(own_gain(sheet, row, &mut occupied)?);
    }
    for row in rows {
        for segment in &row.segments {
            names.extend(label(sheet, row, segment, &mut occupied)?);
            names.extend(breaks(sheet, row, segment, &mut occupied)?);
        }
    }
    elements.push(paragraph(names));
    Ok(elements)
}

/// The pulse of a row, in the middle of its column, at the row's gain.
fn pulse(sheet: &Sheet, row: &Row) -> Vec<(f64, f64)> {
    let width = PULSE_SECONDS * sheet.options.speed.get();
    let left = sheet.geometry.field.left + (sheet.layout.strips.pulse_column - width) / 2.0;
    let top = row.base - PULSE_MILLIVOLTS * row.gain;
    vec![
        (left - PULSE_FOOT, row.base),
        (left, row.base),
        (left, top),
        (left + width, top),
        (left + width, row.base),
        (left + width + PULSE_FOOT, row.base),
    ]
}

/// Short strokes above and below the zero line between one lead and the next.
fn separators(row: &Row) -> impl Iterator<Item = [(f64, f64); 2]> {
    let between = row.segments.iter().skip(1).map(|segment| segment.left);
    let (near, far) = SEPARATOR;
    between.flat_map(move |x| {
        [[(x, row.base - far), (x, row.base - near)], [(x, row.base + near), (x, row.base + far)]]
    })
}

/// A lead's trace, its vertices at sample times.
fn figure(sheet: &Sheet, row: &Row, segment: &Segment, occupied: &mut Occupied) -> Option<Element> {
    let Content::Trace { pieces, .. } = &segment.content else { return None };
    let line = sheet.layout.lines.trace;
    let mut shapes = Vec::with_capacity(pieces.len());
    for piece in pieces {
        let heights: Vec<f64> = piece.iter().map(|(_, value)| row.base - value * row.gain).collect();
        let points: Vec<(f64, f64)> =
            thin::kept(&heights).into_iter().map(|(index, y)| (piece[index].0, y)).collect();
        occupied.line(&points, line.width / 2.0);
        shapes.push(polyline(&points, pen(line)));
    }
    let alt = format!(
        "Lead {}, {:.1} to {:.1} s, {} mm/s, {} mm/mV",
        name(segment),
        segment.from,
        segment.to,
        plain(sheet.options.speed.get()),
        plain(row.gain)
    );
    Some(Element { role: Role::Figure { alt }, shapes })
}

/// As printed: −aVR when turned round.
fn name(segment: &Segment) -> String {
    let sign = if segment.shown.inverted { "−" } else { "" };
    format!("{sign}{}", segment.shown.lead)
}

/// The lead's name and what must be said beside it, where no trace runs. Where a dense trace leaves no
/// room for both, the name stands alone (the notes say the rest), then smaller.
fn label(
    sheet: &Sheet,
    row: &Row,
    segment: &Segment,
    occupied: &mut Occupied,
) -> Result<Vec<Shape>, ComposeError> {
    let beside = sheet.label();
    let small = Style { size: beside.size, ..sheet.lead_name() };
    let name = name(segment);
    let said = said(sheet, segment);
    let mut last = None;
    for (style, said) in [(sheet.lead_name(), said.as_str()), (sheet.lead_name(), ""), (small, "")] {
        let name_width = style.width(&name)?;
        let rest = if said.is_empty() { 0.0 } else { GAP + beside.width(said)? };
        let (width, cap) = (name_width + rest, style.cap());
        let Some((taken, (x, y))) = place(sheet, row, segment, (width, cap), occupied) else { continue };
        let mut shapes = vec![style.left(x, y, &name)];
        if !said.is_empty() {
            shapes.push(beside.left(x + name_width + GAP, y, said));
        }
        last = Some((around((x, y), width, cap), shapes));
        if taken == 0 {
            break;
        }
    }
    Ok(last.map_or(Vec::new(), |(area, shapes)| {
        occupied.area(area);
        shapes
    }))
}

/// What must be said beside a lead's name.
fn said(sheet: &Sheet, segment: &Segment) -> String {
    let mut said: Vec<String> = Vec::new();
    if sheet.derived(segment.shown.lead) {
        said.push("derived".to_owned());
    }
    if segment.offset != 0.0 {
        said.push(format!("moved by {} mV", plain(-segment.offset).replace('-', "−")));
    }
    if let Content::Nothing(why) = &segment.content {
        said.push(format!("absent: {why}"));
    }
    said.join(", ")
}

/// The box of a text with what must stay clear around it.
fn around(at: (f64, f64), width: f64, cap: f64) -> Area {
    Area {
        left: at.0 - CLEAR,
        top: at.1 - cap - CLEAR,
        width: width + 2.0 * CLEAR,
        height: cap + DESCENT + 2.0 * CLEAR,
    }
}

/// Says in a break what broke the trace, where there is room.
fn breaks(
    sheet: &Sheet,
    row: &Row,
    segment: &Segment,
    occupied: &mut Occupied,
) -> Result<Vec<Shape>, ComposeError> {
    let Content::Trace { breaks, .. } = &segment.content else { return Ok(Vec::new()) };
    let style = sheet.label();
    let mut shapes = Vec::new();
    for gap in breaks {
        let text = if gap.saturated { "at limit" } else { "no signal" };
        let width = style.width(text)?;
        let middle = (gap.left + gap.right) / 2.0;
        let area = around((middle - width / 2.0, row.base), width, style.cap());
        if gap.right - gap.left > area.width && occupied.taken(area) == 0 {
            occupied.area(area);
            shapes.push(style.middle(middle, row.base, text));
        }
    }
    Ok(shapes)
}

/// The place for a text of this width and height that is nearest to the segment's top left corner and free
/// of lines; behind the trace or below the row's pulse where the segment has none; and where there is none at
/// all, the one that touches least. Also how much it touches.
fn place(
    sheet: &Sheet,
    row: &Row,
    segment: &Segment,
    (width, cap): (f64, f64),
    occupied: &Occupied,
) -> Option<(usize, (f64, f64))> {
    let field = sheet.geometry.field;
    let (first_x, last_x) = (segment.left + 1.5 * GAP, segment.right - width - GAP);
    let (first_y, last_y) = (row.top + cap + 0.8, row.bottom - 1.0);
    let taken = |at| occupied.taken(around(at, width, cap));
    let mut best: Option<(usize, f64, (f64, f64))> = None;
    for x in steps(first_x, last_x, 1.0) {
        let sideways = x - first_x;
        if best.is_some_and(|(taken, cost, _)| taken == 0 && cost <= sideways) {
            break;
        }
        for y in steps(first_y, last_y, 0.5) {
            let cost = sideways + (y - first_y) * 0.5;
            let taken = taken((x, y));
            if best.is_none_or(|(least, lowest, _)| (taken, cost) < (least, lowest)) {
                best = Some((taken, cost, (x, y)));
            }
        }
    }
    if best.is_some_and(|(taken, _, _)| taken > 0) {
        let behind = (segment.right + GAP, row.base + cap / 2.0);
        let column = (field.left + GAP, below_foot(sheet, row, cap));
        let has_behind = behind.0 + width + CLEAR < field.right();
        let has_column =
            segment.left <= sheet.traces_left() + 0.1 && width < sheet.layout.strips.pulse_column - 2.0;
        let others = [has_behind.then_some(behind), has_column.then_some(column)];
        if let Some(at) = others.into_iter().flatten().find(|&at| taken(at) == 0) {
            return Some((0, at));
        }
    }
    best.map(|(taken, _, at)| (taken, at))
}

fn steps(from: f64, to: f64, step: f64) -> impl Iterator<Item = f64> {
    let count = ((to - from) / step).floor().max(0.0) as u32;
    (0..=count).map(move |index| from + f64::from(index) * step)
}

/// Baseline of a text under the foot of a row's pulse.
fn below_foot(sheet: &Sheet, row: &Row, cap: f64) -> f64 {
    row.base + cap + CLEAR + sheet.layout.lines.pulse.width
}

/// Says below the pulse, or above it, that a row has a gain of its own.
fn own_gain(sheet: &Sheet, row: &Row, occupied: &mut Occupied) -> Result<Shape, ComposeError> {
    let style = sheet.label().bold().inked(sheet.layout.texts.ink);
    let text = format!("{} mm/mV", plain(row.gain));
    let width = style.width(&text)?;
    let middle = sheet.geometry.field.left + sheet.layout.strips.pulse_column / 2.0;
    let above = row.base - PULSE_MILLIVOLTS * row.gain - CLEAR - DESCENT - sheet.layout.lines.pulse.width;
    let area = |y| around((middle - width / 2.0, y), width, style.cap());
    let y = [below_foot(sheet, row, style.cap()), above]
        .into_iter()
        .min_by_key(|&y| occupied.taken(area(y)))
        .unwrap_or(above);
    occupied.area(area(y));
    Ok(style.middle(middle, y, &text))
}

//! The head of a page: who, when, where, how; and its foot: the caution and the page number.

use super::draw::{Style, artifact, paragraph, pen, polyline};
use super::given::{Sheet, plain};
use super::layout::Area;
use super::{ComposeError, Element, Role, Shape};
use crate::case::CAUTION;
use crate::lettering;
use crate::recording::{Age, StartTime};

/// High cuts up to this one change J points and voltages (1582 adults; 40 Hz instead of 150 Hz).
const LOW_HIGH_CUT: f64 = 40.0;
/// Below this age no adult limit holds without saying so.
pub(super) const ADULT: f64 = 18.0;

/// One field: its label, what the source has, and the part of the row's width that it takes.
pub(super) struct Field {
    pub label: &'static str,
    pub value: Option<String>,
    part: f64,
}

/// The upper and the lower row of fields.
fn fields(sheet: &Sheet) -> [Vec<Field>; 2] {
    let subject = &sheet.case.recording.subject;
    let occasion = &sheet.case.recording.occasion;
    let field = |label, value: Option<String>, part| Field { label, value, part };
    [
        vec![
            field("Name", subject.name.clone(), 0.38),
            field("Number", subject.id.clone(), 0.24),
            field("Born", subject.birth_date.map(|date| date.to_string()), 0.15),
            field("Sex", subject.sex.as_ref().map(ToString::to_string), 0.11),
            field("Age", subject.age.map(age), 0.12),
        ],
        vec![
            field("Recorded", occasion.start.map(start_time), 0.38),
            field("Place", occasion.place.clone(), 0.24),
            field("Operator", occasion.operator.clone(), 0.15),
            field("Recorder", occasion.device.clone(), 0.23),
        ],
    ]
}

/// The area of the fields: without alerts it takes theirs too.
fn area(sheet: &Sheet) -> Area {
    let (own, alerts) = (sheet.geometry.identification, sheet.geometry.alerts);
    if alert_texts(sheet).is_empty() && alerts.left > own.left {
        Area { width: alerts.right() - own.left, ..own }
    } else {
        own
    }
}

/// What a field has room for.
fn room(area: Area, field: &Field) -> f64 {
    area.width * field.part - 3.0
}

/// The fields whose value is longer than the head has room for.
pub(super) fn cut_short(sheet: &Sheet) -> Result<Vec<Field>, ComposeError> {
    let mut cut = Vec::new();
    for field in fields(sheet).into_iter().flatten() {
        let value = field.value.as_deref().unwrap_or_default();
        if sheet.label().width(value)? > room(area(sheet), &field) {
            cut.push(field);
        }
    }
    Ok(cut)
}

/// What the faces can't draw of the fields and the remarks: where, and which characters.
pub(super) fn undrawable(sheet: &Sheet) -> Vec<(&'static str, Vec<char>)> {
    let fields = fields(sheet).into_iter().flatten();
    let mut texts: Vec<(&'static str, String)> =
        fields.filter_map(|field| Some((field.label, field.value?))).collect();
    texts.push(("Remarks", sheet.case.recording.occasion.remarks.concat()));
    texts.push(("File name", sheet.case.recording.source.file.clone()));
    texts
        .into_iter()
        .map(|(label, text)| (label, lettering::printable(&text).1))
        .filter(|(_, characters)| !characters.is_empty())
        .collect()
}

/// Identification and alerts.
pub(super) fn elements(sheet: &Sheet) -> Result<Vec<Element>, ComposeError> {
    let area = area(sheet);
    let [first, second] = fields(sheet);
    let mut rules = Vec::new();
    let name = row(sheet, &first[..1], area, sheet.name(), &mut rules)?;
    let rest = Area { left: area.left + area.width * first[0].part, ..area };
    let mut others = row(sheet, &first[1..], rest, sheet.value(), &mut rules)?;
    let below = Area { top: area.top + area.height / 2.0 + 0.6, ..area };
    others.extend(row(sheet, &second, below, sheet.value(), &mut rules)?);
    let mut elements =
        vec![Element { role: Role::Heading, shapes: name }, paragraph(others), artifact(rules)];
    let alerts = alerts(sheet)?;
    if !alerts.is_empty() {
        elements.push(paragraph(alerts));
    }
    Ok(elements)
}

/// A row of fields; what the source doesn't have is a line to write on.
fn row(
    sheet: &Sheet,
    fields: &[Field],
    area: Area,
    style: Style,
    rules: &mut Vec<Shape>,
) -> Result<Vec<Shape>, ComposeError> {
    let label = sheet.label();
    let (top, mut left) = (area.top, area.left);
    let baseline = top + label.cap() + 1.0 + sheet.value().cap() + 0.9;
    let mut shapes = Vec::new();
    for field in fields {
        let room = room(area, field);
        shapes.push(label.left(left, top + label.cap(), field.label));
        match &field.value {
            Some(value) => {
                let style = style.shrunk(value, room, label.size)?;
                shapes.push(style.left(left, baseline, &style.fit(value, room)?));
            }
            None => rules.push(polyline(
                &[(left, baseline + 0.4), (left + room, baseline + 0.4)],
                pen(sheet.layout.lines.rule),
            )),
        }
        left += area.width * field.part;
    }
    Ok(shapes)
}

fn age(age: Age) -> String {
    if age.years < 2.0 {
        format!("{:.0} months", (age.years * 12.0).floor())
    } else {
        plain(age.years.floor())
    }
}

/// Local time as stated, with its zone or the words that there is none.
fn start_time(start: StartTime) -> String {
    let local = start.local.format("%Y-%m-%d %H:%M:%S");
    match start.zone {
        Some(zone) => format!("{local} (UTC{zone})"),
        None => format!("{local}, zone not stated"),
    }
}

/// What must be seen before anything is read, as large as it fits.
fn alerts(sheet: &Sheet) -> Result<Vec<Shape>, ComposeError> {
    let area = sheet.geometry.alerts;
    let texts = alert_texts(sheet);
    let mut style = sheet.alert();
    let smallest = sheet.layout.texts.label;
    loop {
        let mut lines = Vec::new();
        for text in &texts {
            lines.extend(style.wrap(text, area.width)?);
        }
        let leading = style.size * 1.2;
        let fits = style.cap() + leading * (lines.len().max(1) - 1) as f64 <= area.height;
        if fits || style.size <= smallest {
            let y = |index: usize| area.top + style.cap() + leading * index as f64;
            return Ok(lines
                .iter()
                .enumerate()
                .take_while(|(index, _)| y(*index) <= area.bottom() + 0.01)
                .map(|(index, line)| style.left(area.left, y(index), line))
                .collect());
        }
        style.size = (style.size - 0.2).max(smallest);
    }
}

/// The alerts, most weighty first.
pub(super) fn alert_texts(sheet: &Sheet) -> Vec<String> {
    let occasion = &sheet.case.recording.occasion;
    let mut texts = Vec::new();
    let mut say = |what: &str, value: &Option<String>| {
        if let Some(value) = value {
            texts.push(format!("{what}: {value}"));
        }
    };
    say("Electrodes", &occasion.placement);
    say("Manoeuvre", &occasion.manoeuvre);
    say("Drug", &occasion.drug);
    let high_cuts = [sheet.case.display.chain.high_cut, occasion.filters.high_cut];
    if let Some(corner) = high_cuts.into_iter().flatten().find(|corner| corner.get() <= LOW_HIGH_CUT) {
        texts.push(format!(
            "High cut {} Hz: J point, ST and small deflections are changed",
            plain(corner.get())
        ));
    }
    texts
}

/// The caution and the page's number.
pub(super) fn foot(sheet: &Sheet, number: usize, of: usize) -> Result<Vec<Element>, ComposeError> {
    let area = sheet.geometry.caution;
    let style = sheet.label();
    let y = area.bottom() - 0.8;
    let page = format!("page {number} of {of}");
    let room = area.width - style.width(&page)? - 4.0;
    let caution = style.inked(sheet.layout.texts.ink).fit(CAUTION, room)?;
    Ok(vec![
        paragraph(vec![style.inked(sheet.layout.texts.ink).left(area.left, y, &caution)]),
        paragraph(vec![style.right(area.right(), y, &page)]),
    ])
}

//! Suspected findings, each with the beat that shows it and boxes for a reader; or why there is none.

use super::super::draw::{artifact, frame, paragraph, pen};
use super::super::given::{Sheet, listed};
use super::super::layout::Area;
use super::super::{ComposeError, Element, Role};
use super::HEADING;
use super::beat::{self, Bracket, View};
use crate::average::RepresentativeBeat;
use crate::findings::{Search, SearchDone, Suspected};
use crate::measure::Wave;
use crate::recording::Lead;

/// Between two findings.
const GUTTER: f64 = 3.0;
/// Height of a finding's cell on a page of its own.
const CELL: f64 = 46.0;
/// Its least width: the choices of a reader side by side.
const NARROWEST: f64 = 33.0;
/// What is shown after a QRS, in s.
const AFTER_QRS: f64 = 0.14;
/// Side of a box to tick.
const BOX: f64 = 1.9;
/// What a reader may do with a finding.
const CHOICES: [&str; 3] = ["confirm", "reject", "leave open"];

/// The panel, and the findings that didn't fit.
pub(super) fn elements<'a>(
    sheet: &'a Sheet,
    area: Area,
) -> Result<(Vec<Element>, Vec<&'a Suspected>), ComposeError> {
    let analysis = &sheet.case.analysis;
    let Search::Done(done) = &analysis.findings.retrograde_p else {
        return Ok((none(sheet, area)?, Vec::new()));
    };
    if done.suspected.is_empty() {
        return Ok((none(sheet, area)?, Vec::new()));
    }
    let all: Vec<&Suspected> = done.suspected.iter().collect();
    let (elements, shown) = cells(sheet, area, "Suspected, for a reader to confirm", &all)?;
    Ok((elements, all[shown..].to_vec()))
}

/// Findings that the panel had no room for, and how many were shown.
pub(super) fn continued(
    sheet: &Sheet,
    area: Area,
    findings: &[&Suspected],
) -> Result<(Vec<Element>, usize), ComposeError> {
    if findings.is_empty() {
        return Ok((Vec::new(), 0));
    }
    cells(sheet, area, "Suspected, continued", findings)
}

/// A heading and as many cells as fit, and how many those are.
fn cells(
    sheet: &Sheet,
    area: Area,
    title: &str,
    findings: &[&Suspected],
) -> Result<(Vec<Element>, usize), ComposeError> {
    let (mut heading, rule) = super::heading(sheet, area, title);
    if findings.iter().any(|finding| finding.needs_sinus_recording) {
        let y = area.top + sheet.heading().cap() + 0.2;
        heading.push(sheet.label().right(area.right(), y, "* sinus recording needed to call it"));
    }
    let mut elements = vec![Element { role: Role::Heading, shapes: heading }, rule];
    let most = (((area.width + GUTTER) / (NARROWEST + GUTTER)).floor() as usize).max(1);
    let per_row = most.min(findings.len().max(2));
    let width = (area.width - GUTTER * (per_row - 1) as f64) / per_row as f64;
    let below = area.height - HEADING;
    let rows = ((below / CELL).floor() as usize).max(1);
    let height = below.min(CELL);
    let shown = findings.len().min(per_row * rows);
    for (index, finding) in findings.iter().take(shown).enumerate() {
        let (row, column) = (index / per_row, index % per_row);
        let cell = Area {
            left: area.left + (width + GUTTER) * column as f64,
            top: area.top + HEADING + height * row as f64,
            width,
            height: if rows > 1 { height - 3.0 } else { height },
        };
        elements.extend(cell_of(sheet, cell, finding)?);
    }
    Ok((elements, shown))
}

fn cell_of(sheet: &Sheet, area: Area, finding: &Suspected) -> Result<Vec<Element>, ComposeError> {
    let body = sheet.body();
    let leading = body.size * 1.22;
    let mut lines = body.bold().wrap(finding.sign.name(), area.width)?;
    let bold = lines.len();
    for text in numbers(finding) {
        lines.extend(body.wrap(&text, area.width)?);
    }
    let boxes = BOX + 2.0;
    let text_height = leading * lines.len() as f64 + 1.2;
    let plot = Area { height: area.height - text_height - boxes, ..area };
    let mut elements = beat_of(sheet, plot, finding)?;
    let mut y = plot.bottom() + 1.2 + body.cap();
    let mut texts = Vec::new();
    for (index, line) in lines.iter().enumerate() {
        let style = if index < bold { body.bold() } else { body };
        texts.push(style.left(area.left, y, line));
        y += leading;
    }
    elements.push(paragraph(texts));
    elements.extend(choices(sheet, area, area.bottom() - BOX - 0.6)?);
    Ok(elements)
}

/// The finding in numbers, one statement a line.
fn numbers(finding: &Suspected) -> Vec<String> {
    let rp = finding.rp.map_or("onset in QRS".to_owned(), |rp| format!("RP {:.0} ms", rp.ms()));
    let sign = if finding.amplitude.get() < 0.0 { "−" } else { "" };
    let amplitude = format!("{sign}{:.2} mV in {}", finding.amplitude.get().abs(), finding.clearest);
    let evidence = finding.evidence;
    let star = if finding.needs_sinus_recording { "*" } else { "" };
    vec![
        format!("{}{star}: {amplitude}", listed(&finding.leads)),
        format!("{rp}; {} of {} beats", evidence.showing, evidence.examined),
    ]
}

fn choices(sheet: &Sheet, area: Area, top: f64) -> Result<Vec<Element>, ComposeError> {
    let label = sheet.label().inked(sheet.layout.texts.ink);
    let mut left = area.left;
    let (mut boxes, mut texts) = (Vec::new(), Vec::new());
    let mut all = 0.0;
    for choice in CHOICES {
        all += BOX + 0.6 + label.width(choice)?;
    }
    let gap = ((area.width - all) / 2.0).clamp(0.6, 3.0);
    for choice in CHOICES {
        let square = Area { left, top, width: BOX, height: BOX };
        boxes.push(frame(square, pen(sheet.layout.lines.bar)));
        texts.push(label.left(left + BOX + 0.6, top + BOX - 0.25, choice));
        left += BOX + 0.6 + label.width(choice)? + gap;
    }
    Ok(vec![artifact(boxes), paragraph(texts)])
}

/// QRS onset and offset of the representative beat, in s from its fiducial.
fn qrs(sheet: &Sheet) -> Option<(f64, f64)> {
    let marks = sheet.case.analysis.measurements.representative.as_ref()?;
    let Wave { onset, peak, offset } = marks.qrs;
    Some((onset.unwrap_or(peak).get(), offset.get()))
}

fn beat_of(sheet: &Sheet, area: Area, finding: &Suspected) -> Result<Vec<Element>, ComposeError> {
    let Some(beat) = &sheet.case.analysis.representative else { return Ok(Vec::new()) };
    let Some((onset, offset)) = qrs(sheet) else { return Ok(Vec::new()) };
    let (from, to) = (onset + finding.span.0.get(), onset + finding.span.1.get());
    let mut brackets =
        vec![Bracket { from: onset, to: offset, text: format!("QRS {:.0} ms", (offset - onset) * 1000.0) }];
    brackets.push(match finding.rp {
        Some(rp) => Bracket { from: onset, to: onset + rp.get(), text: format!("RP {:.0} ms", rp.ms()) },
        None => Bracket { from, to, text: "suspected".to_owned() },
    });
    let view = View {
        beat,
        lead: finding.clearest,
        from: onset - 0.06,
        to: (to + 0.06).max(offset + 0.1),
        focus: (from, to + 0.04),
        brackets,
    };
    beat::elements(sheet, area, &view)
}

/// Nothing suspected, or no search: said as a normal result, with the beat for a reader to look at.
fn none(sheet: &Sheet, area: Area) -> Result<Vec<Element>, ComposeError> {
    let body = sheet.body();
    let (title, text) = match &sheet.case.analysis.findings.retrograde_p {
        Search::Done(done) => ("Retrograde P: nothing separable, a normal result", gate(done)),
        Search::NotDone(why) => ("Retrograde P: not searched", why.to_string()),
    };
    let (heading, rule) = super::heading(sheet, area, title);
    let mut elements = vec![Element { role: Role::Heading, shapes: heading }, rule];
    let leading = body.size * 1.22;
    let mut y = area.top + HEADING + body.cap() - 0.4;
    let mut lines = Vec::new();
    for line in body.wrap(&text, area.width)? {
        lines.push(body.left(area.left, y, &line));
        y += leading;
    }
    elements.push(paragraph(lines));
    let Some(beat) = &sheet.case.analysis.representative else { return Ok(elements) };
    let leads: Vec<Lead> =
        [Lead::II, Lead::V1].into_iter().filter(|lead| beat.lead(*lead).is_some()).collect();
    let top = y - body.cap() + 1.4;
    let height = (area.bottom() - top).min(40.0);
    let width = (area.width - GUTTER) / 2.0;
    for (index, lead) in (0u32..).zip(leads) {
        let left = area.left + (width + GUTTER) * f64::from(index);
        elements.extend(plain_beat(sheet, Area { left, top, width, height }, beat, lead)?);
    }
    Ok(elements)
}

/// The representative beat with its global marks.
fn plain_beat(
    sheet: &Sheet,
    area: Area,
    beat: &RepresentativeBeat,
    lead: Lead,
) -> Result<Vec<Element>, ComposeError> {
    let measurements = &sheet.case.analysis.measurements;
    let Some(marks) = &measurements.representative else { return Ok(Vec::new()) };
    let Some((onset, offset)) = qrs(sheet) else { return Ok(Vec::new()) };
    let mut brackets = Vec::new();
    let mut from = onset - 0.08;
    if let Some(p_onset) = marks.p.as_ref().and_then(|p| p.onset).map(|onset| onset.get()) {
        from = p_onset - 0.04;
        let ms = measurements.pr.value().map_or(String::new(), |pr| format!(" {:.0} ms", pr.ms()));
        brackets.push(Bracket { from: p_onset, to: onset, text: format!("PR{ms}") });
    }
    let ms = measurements.qrs.value().map_or(String::new(), |qrs| format!(" {:.0} ms", qrs.ms()));
    brackets.push(Bracket { from: onset, to: offset, text: format!("QRS{ms}") });
    // A search looks at the end of the QRS and at ST; without one the whole beat is of interest.
    let searched = matches!(sheet.case.analysis.findings.retrograde_p, Search::Done(_));
    let mut to = offset + AFTER_QRS;
    if let (Some(t), Some(qt), false) = (&marks.t, measurements.qt.value(), searched) {
        to = t.offset.get() + 0.04;
        brackets.push(Bracket { from: onset, to: t.offset.get(), text: format!("QT {:.0} ms", qt.ms()) });
    }
    beat::elements(sheet, area, &View { beat, lead, from, to, focus: (from, to), brackets })
}

fn gate(done: &SearchDone) -> String {
    format!("Searched: {}", done.gate.join("; "))
}

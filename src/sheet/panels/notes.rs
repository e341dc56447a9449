//! Notes, most weighty first, and the lines for the reader.

use super::super::draw::{artifact, paragraph, pen, polyline};
use super::super::given::{Sheet, listed, plain};
use super::super::identification::{self, ADULT};
use super::super::layout::Area;
use super::super::trace::Row;
use super::super::{ComposeError, Element, Role};
use super::HEADING;
use crate::findings::{Observation, RpClass, Search, Tachycardia, WaveAtEnd};
use crate::recording::{Absence, Channel, Lead, Note, Weight};
use crate::units::Spans;

/// Height of the reader's block.
const READER: f64 = 9.6;
/// What a reader signs with.
const LINES: [(&str, f64); 3] = [("Reader", 0.44), ("Date", 0.2), ("Signature", 0.36)];

/// One line of a note, and whether it is printed strong.
type Printed = (String, bool);

/// The panel, and the lines that didn't fit.
pub(super) fn elements(
    sheet: &Sheet,
    area: Area,
    halved: &[String],
) -> Result<(Vec<Element>, Vec<Printed>), ComposeError> {
    let (heading, rule) = super::heading(sheet, area, "Notes");
    let mut elements = vec![Element { role: Role::Heading, shapes: heading }, rule];
    let body = sheet.body();
    let mut lines: Vec<Printed> = Vec::new();
    for note in all(sheet, halved)? {
        let strong = note.weight == Weight::Caution;
        let style = if strong { body.bold() } else { body };
        lines.extend(style.wrap(&note.text, area.width)?.into_iter().map(|line| (line, strong)));
    }
    let room = area.height - HEADING - READER;
    let fit = (room / leading(sheet)).floor().max(0.0) as usize;
    let left = if lines.len() > fit { lines.split_off(fit.saturating_sub(1)) } else { Vec::new() };
    let mut shown = lines;
    if !left.is_empty() {
        shown.push(("continued on the next page".to_owned(), false));
    }
    elements.push(set(sheet, area, area.top + HEADING, &shown));
    elements.extend(reader(sheet, area));
    Ok((elements, left))
}

/// Lines that the panel had no room for, and how many were set.
pub(super) fn continued(
    sheet: &Sheet,
    area: Area,
    lines: &[Printed],
) -> Result<(Vec<Element>, usize), ComposeError> {
    if lines.is_empty() {
        return Ok((Vec::new(), 0));
    }
    let (heading, rule) = super::heading(sheet, area, "Notes, continued");
    let fit = (((area.height - HEADING) / leading(sheet)).floor() as usize).max(1);
    let shown = lines.len().min(fit);
    let elements = vec![
        Element { role: Role::Heading, shapes: heading },
        rule,
        set(sheet, area, area.top + HEADING, &lines[..shown]),
    ];
    Ok((elements, shown))
}

fn leading(sheet: &Sheet) -> f64 {
    sheet.body().size * 1.22
}

fn set(sheet: &Sheet, area: Area, top: f64, lines: &[Printed]) -> Element {
    let body = sheet.body();
    let mut y = top + body.cap() - 0.4;
    let mut shapes = Vec::new();
    for (line, strong) in lines {
        let style = if *strong { body.bold() } else { body };
        shapes.push(style.left(area.left, y, line));
        y += leading(sheet);
    }
    paragraph(shapes)
}

fn reader(sheet: &Sheet, area: Area) -> Vec<Element> {
    let label = sheet.label();
    let line = area.bottom() - 2.4;
    let (mut rules, mut texts) = (Vec::new(), Vec::new());
    let mut left = area.left;
    for (text, part) in LINES {
        let width = area.width * part - 2.0;
        rules.push(polyline(&[(left, line), (left + width, line)], pen(sheet.layout.lines.rule)));
        texts.push(label.left(left, line + label.cap() + 0.7, text));
        left += area.width * part;
    }
    vec![artifact(rules), paragraph(texts)]
}

/// Everything to be said, cautions first.
fn all(sheet: &Sheet, halved: &[String]) -> Result<Vec<Note>, ComposeError> {
    let recording = &sheet.case.recording;
    let mut notes: Vec<Note> = recording.notes.clone();
    notes.extend(halved.iter().map(Note::caution));
    if let Some(age) = recording.subject.age.filter(|age| age.years < ADULT) {
        let years = plain(age.years.floor());
        notes.push(Note::caution(format!(
            "age {years}: RP cut-offs, rate, PR and QRS limits come from adults"
        )));
    }
    for (place, characters) in identification::undrawable(sheet) {
        notes.push(Note::caution(format!(
            "{place}: shown as � where there is no glyph: {}",
            codes(&characters)
        )));
    }
    notes.push(Note::information(shown(sheet)));
    notes.extend(leads(sheet));
    notes.extend(sheet.case.analysis.findings.tachycardias.iter().filter_map(tachycardia));
    notes.extend(rp_class(&sheet.case.analysis.findings.retrograde_p));
    notes.extend(sheet.case.analysis.findings.observations.iter().map(observation));
    let compared = matches!(&sheet.case.analysis.findings.retrograde_p, Search::Done(done) if done.compared);
    if let Some(sinus) = sheet.case.sinus.as_ref().filter(|_| compared) {
        let hash: String = sinus.recording.source.sha256.chars().take(12).collect();
        notes.push(Note::information(format!(
            "compared with the sinus recording {}, SHA-256 {hash}",
            sinus.recording.source.file
        )));
    }
    if !recording.occasion.remarks.is_empty() {
        let remarks = joined(&recording.occasion.remarks);
        notes.push(Note::information(format!("The source remarks: {remarks}")));
    }
    for field in identification::cut_short(sheet)? {
        let value = field.value.unwrap_or_default();
        notes.push(Note::information(format!("{} in full: {value}", field.label)));
    }
    notes.sort_by_key(|note| std::cmp::Reverse(note.weight));
    Ok(notes)
}

/// The first of these characters, as Unicode numbers them.
fn codes(characters: &[char]) -> String {
    const FIRST: usize = 8;
    let mut codes: Vec<String> =
        characters.iter().take(FIRST).map(|character| format!("U+{:04X}", u32::from(*character))).collect();
    if characters.len() > FIRST {
        codes.push(format!("and {} more", characters.len() - FIRST));
    }
    codes.join(" ")
}

/// Remarks in one text, a semicolon between those that end without a stop.
fn joined(remarks: &[String]) -> String {
    let mut text = String::new();
    for remark in remarks {
        if !text.is_empty() {
            text.push_str(if text.ends_with(['.', ':', ';', '!', '?']) { " " } else { "; " });
        }
        text.push_str(remark.trim());
    }
    text
}

/// Which part is shown and how the columns lie in time.
fn shown(sheet: &Sheet) -> String {
    let part = sheet.timing.part();
    match sheet.timing.columns() {
        Some(columns) => format!("Shown: {part}; {columns}"),
        None => format!("Shown: {part}"),
    }
}

/// Derived and absent leads, gaps, clipping.
fn leads(sheet: &Sheet) -> Vec<Note> {
    let leads = &sheet.case.recording.leads;
    let mut notes = Vec::new();
    let which = |wanted: &dyn Fn(&Channel) -> bool| -> Vec<Lead> {
        leads.iter().filter(|(_, channel)| wanted(channel)).map(|(lead, _)| lead).collect()
    };
    let derived = which(&|channel| matches!(channel, Channel::Derived(_)));
    if !derived.is_empty() {
        notes.push(Note::information(format!("{} derived from I and II", listed(&derived))));
    }
    let mut reasons: Vec<&Absence> = Vec::new();
    for (_, channel) in leads.iter() {
        match channel {
            Channel::Absent(why) if !reasons.contains(&why) => reasons.push(why),
            _ => {}
        }
    }
    for why in reasons {
        let absent = which(&|channel| matches!(channel, Channel::Absent(own) if own == why));
        notes.push(Note::caution(format!("{} absent: {why}", listed(&absent))));
    }
    let rate = sheet.case.recording.rate.get();
    let mut broken = |what: &str, spans: &dyn Fn(&Channel) -> Option<Spans>| {
        let with: Vec<Lead> = which(&|channel| spans(channel).is_some_and(|spans| !spans.is_empty()));
        let total: usize = leads.iter().filter_map(|(_, channel)| Some(spans(channel)?.total())).sum();
        if !with.is_empty() {
            let seconds = total as f64 / rate;
            notes.push(Note::caution(format!(
                "{what} in {}: {seconds:.2} s in all; traces are broken there",
                listed(&with)
            )));
        }
    };
    broken("gaps", &|channel| channel.samples().map(|samples| samples.gaps().clone()));
    broken("converter at its limit", &|channel| channel.samples().map(|samples| samples.saturated().clone()));
    notes
}

/// Rows of a page that have a gain of their own.
pub(in super::super) fn own_gains(sheet: &Sheet, rows: &[Row]) -> Vec<String> {
    rows.iter()
        .filter(|row| row.gain != sheet.options.gain.get())
        .map(|row| {
            let leads: Vec<Lead> = row.segments.iter().map(|segment| segment.shown.lead).collect();
            format!("row {} drawn at {} mm/mV to stay on the grid", listed(&leads), plain(row.gain))
        })
        .collect()
}

fn tachycardia(found: &Tachycardia) -> Option<Note> {
    let mut said = Vec::new();
    if let Some(start) = found.start {
        said.push(format!("starts at {:.2} s", start.get()));
        if let (Some(before), Some(first)) = (found.pr_before, found.first_pr) {
            said.push(format!("PR {:.0} ms before it, {:.0} ms in its first beat", before.ms(), first.ms()));
        }
        if let Some(coupling) = found.coupling {
            said.push(format!("premature P coupled at {:.0} ms", coupling.ms()));
        }
    }
    if let Some(end) = found.end {
        let wave = match found.ends_with {
            Some(WaveAtEnd::P) => " with a P",
            Some(WaveAtEnd::Qrs) => " with a QRS",
            None => "",
        };
        said.push(format!("ends at {:.2} s{wave}", end.get()));
    }
    // One that fills the recording is what the whole sheet shows.
    (!said.is_empty())
        .then(|| Note::information(format!("Tachycardia of {:.0}/min {}", found.rate.get(), said.join("; "))))
}

/// How RP lies against PR and the cut-offs of the literature; a sentence, never a verdict.
fn rp_class(search: &Search) -> Option<Note> {
    let Search::Done(done) = search else { return None };
    let text = match done.rp_class? {
        RpClass::Short => "RP is shorter than the time from that P to the next QRS",
        RpClass::Long => "RP is longer than the time from that P to the next QRS",
        RpClass::AtTheLimit => {
            "RP lies at the limit of the cut-offs, or halfway to the next QRS: no class is named"
        }
    };
    Some(Note::information(text))
}

fn observation(found: &Observation) -> Note {
    let mut text = found.what.clone();
    if !found.leads.is_empty() {
        text.push_str(&format!(" in {}", listed(&found.leads)));
    }
    if let Some((value, unit)) = found.value {
        text.push_str(&format!(": {} {unit}", plain(value)));
    }
    if let Some(evidence) = found.evidence {
        text.push_str(&format!(", {} of {} beats", evidence.showing, evidence.examined));
    }
    Note { weight: found.weight, text }
}

//! From the text of a layout file to a layout, or to everything that is wrong with it.

use super::reader::{Reader, Report};
use super::{Area, Geometry, Layout, Line, Lines, Shown, Strips, Texts, Violation};
use crate::recording::Lead;
use crate::sheet::Paper;
use toml::Spanned;
use toml::de::{DeTable, DeValue};

/// Smallest text, 6 pt.
const SMALLEST_TEXT: f64 = 2.2;
/// What the time ruler needs below the field.
const RULER: f64 = 4.5;
/// Where the upright check bar stands, to the right of the field.
pub(in crate::sheet) const BAR_GAP: f64 = 2.5;
/// The check bars.
pub(in crate::sheet) const BAR: f64 = 100.0;
/// No printer reaches nearer to the paper's edge.
const EDGE: f64 = 4.0;
/// Each lead gets a quarter of the row at least: 2.5 s at 25 mm/s.
const MOST_LEADS_A_ROW: usize = 4;

/// Reads a layout.
pub(super) fn layout(name: &str, text: &str) -> Result<Layout, Vec<Violation>> {
    let mut report = Report::new(text);
    let (root, errors) = DeTable::parse_recoverable(text);
    for error in &errors {
        report.add(&error.span().unwrap_or(0..0), format!("not TOML: {}", error.message()));
    }
    if !errors.is_empty() {
        return Err(sorted(report));
    }
    let mut root = Reader::root(&root);
    let about = root.text("about", &mut report).unwrap_or_default().to_owned();
    let strips = strips(root.table("strips", &mut report), &mut report);
    let lines = lines(root.table("lines", &mut report), &mut report);
    let texts = texts(root.table("texts", &mut report), &mut report);
    let a4 = geometry(root.table("a4", &mut report), Paper::A4, &strips, &mut report);
    let letter = geometry(root.table("letter", &mut report), Paper::Letter, &strips, &mut report);
    root.finish(&mut report);
    if report.violations.is_empty() {
        Ok(Layout { name: name.to_owned(), about, strips, lines, texts, a4, letter })
    } else {
        Err(sorted(report))
    }
}

fn sorted(mut report: Report) -> Vec<Violation> {
    report.violations.sort_by_key(|violation| violation.line);
    report.violations
}

fn strips(mut table: Reader, report: &mut Report) -> Strips {
    let mut rows = Vec::new();
    if let Some(value) = table.value("rows", report) {
        for row in array(value, "`strips.rows` must be a list of rows", report) {
            let leads = leads(row, report);
            if leads.is_empty() || leads.len() > MOST_LEADS_A_ROW {
                let found = leads.len();
                report.add(&row.span(), format!("a row holds 1 to {MOST_LEADS_A_ROW} leads, found {found}"));
            }
            rows.push(leads);
        }
    }
    let rhythm = table.value("rhythm", report).map_or(Vec::new(), |value| leads(value, report));
    let mut seen: Vec<Lead> = Vec::new();
    for shown in rows.iter().flatten() {
        if seen.contains(&shown.lead) {
            report.add(&table.place_of("rows"), format!("lead {} stands in `rows` twice", shown.lead));
        }
        seen.push(shown.lead);
    }
    let count = rows.len() + rhythm.len();
    let most = Layout::MOST_ROWS;
    if count == 0 || count > most {
        report.add(&table.place(), format!("1 to {most} rows are drawn, found {count}"));
    }
    let strips = Strips {
        rows,
        rhythm,
        pulse_column: table.number("pulse_column", 12.0..30.0, report),
        trace_width: table.number("trace_width", 100.0..250.0, report),
    };
    for (key, length) in [("pulse_column", strips.pulse_column), ("trace_width", strips.trace_width)] {
        if length % 5.0 != 0.0 {
            report.add(
                &table.place_of(key),
                format!("`strips.{key}` must be whole large boxes of 5 mm, found {length}"),
            );
        }
    }
    table.finish(report);
    strips
}

fn array<'a>(value: &'a Spanned<DeValue<'a>>, what: &str, report: &mut Report) -> &'a [Spanned<DeValue<'a>>] {
    match value.get_ref().as_array() {
        Some(array) => array,
        None => {
            report.add(&value.span(), what);
            &[]
        }
    }
}

fn leads<'a>(value: &'a Spanned<DeValue<'a>>, report: &mut Report) -> Vec<Shown> {
    let mut leads = Vec::new();
    for item in array(value, "leads stand in a list, like [\"II\"]", report) {
        let text = item.get_ref().as_str().unwrap_or_default();
        match shown(text) {
            Some(shown) => leads.push(shown),
            None => report.add(
                &item.span(),
                format!("a lead is one of I II III aVR aVL aVF V1 … V6 or one of them turned round, like \"-aVR\"; found {text:?}"),
            ),
        }
    }
    leads
}

fn shown(text: &str) -> Option<Shown> {
    let bare = text.strip_prefix(['-', '−']);
    let lead = Lead::ALL.into_iter().find(|lead| lead.name() == bare.unwrap_or(text))?;
    Some(Shown { lead, inverted: bare.is_some() })
}

fn lines(mut table: Reader, report: &mut Report) -> Lines {
    let mut line = |key, report: &mut Report| {
        let mut table = table.table(key, report);
        let line = Line { width: table.number("width", 0.05..1.0, report), ink: table.ink("ink", report) };
        table.finish(report);
        line
    };
    let lines = Lines {
        trace: line("trace", report),
        pulse: line("pulse", report),
        fine_ruling: line("fine_ruling", report),
        coarse_ruling: line("coarse_ruling", report),
        separator: line("separator", report),
        rule: line("rule", report),
        bar: line("bar", report),
        mark: line("mark", report),
    };
    // After a photocopy or a fax weight alone tells the rulings apart, and both from the trace.
    if lines.coarse_ruling.width < 1.5 * lines.fine_ruling.width {
        report.add(
            &table.place_of("coarse_ruling"),
            format!(
                "`lines.coarse_ruling` must be at least 1.5 times as wide as `lines.fine_ruling` ({} mm), found {} mm",
                lines.fine_ruling.width, lines.coarse_ruling.width
            ),
        );
    }
    table.finish(report);
    lines
}

fn texts(mut table: Reader, report: &mut Report) -> Texts {
    let mut size = |key, report: &mut Report| table.number(key, SMALLEST_TEXT..8.0, report);
    let texts = Texts {
        lead_name: size("lead_name", report),
        name: size("name", report),
        alert: size("alert", report),
        heading: size("heading", report),
        value: size("value", report),
        body: size("body", report),
        label: size("label", report),
        ink: table.ink("ink", report),
        quiet_ink: table.ink("quiet_ink", report),
    };
    table.finish(report);
    texts
}

fn geometry(mut table: Reader, paper: Paper, strips: &Strips, report: &mut Report) -> Geometry {
    let (width, height) = (paper.size().0.get(), paper.size().1.get());
    let mut margins = table.table("margins", report);
    let mut margin = |key, report: &mut Report| margins.number(key, EDGE..60.0, report);
    let (left, right) = (margin("left", report), margin("right", report));
    let (top, bottom) = (margin("top", report), margin("bottom", report));
    margins.finish(report);
    let inside = Area { left, top, width: width - left - right, height: height - top - bottom };

    let mut field_table = table.table("field", report);
    let field = Area {
        left: field_table.number("left", 0.0..width, report),
        top: field_table.number("top", 0.0..height, report),
        width: strips.pulse_column + strips.trace_width,
        height: field_table.number("height", BAR..height, report),
    };
    field_table.finish(report);
    let mut area = |key, report: &mut Report| {
        let mut table = table.table(key, report);
        let area = Area {
            left: table.number("left", 0.0..width, report),
            top: table.number("top", 0.0..height, report),
            width: table.number("width", 0.0..width, report),
            height: table.number("height", 0.0..height, report),
        };
        table.finish(report);
        area
    };
    let mut geometry = Geometry {
        identification: area("identification", report),
        alerts: area("alerts", report),
        field,
        legend: area("legend", report),
        panels_on_own_page: false,
        measurements: area("measurements", report),
        findings: area("findings", report),
        notes: area("notes", report),
        caution: area("caution", report),
    };
    match table.text("panels_on", report) {
        Some("own page") => geometry.panels_on_own_page = true,
        Some("same page") | None => {}
        Some(other) => report.add(
            &table.place_of("panels_on"),
            format!("`panels_on` must be \"same page\" or \"own page\", found {other:?}"),
        ),
    }
    arrangement(&table, &geometry, inside, report);
    table.finish(report);
    geometry
}

/// Whether everything lies inside the margins and nothing lies on anything else.
fn arrangement(table: &Reader, geometry: &Geometry, inside: Area, report: &mut Report) {
    let Geometry { field, legend, .. } = *geometry;
    if field.height % 5.0 != 0.0 {
        report.add(&table.place_of("field"), "the field's height must be whole large boxes of 5 mm");
    }
    if legend.width < BAR + 60.0 || legend.height < 7.0 {
        report.add(&table.place_of("legend"), "the legend holds a 100 mm bar: at least 160 × 7 mm");
    }
    for (key, area, least) in [
        ("identification", geometry.identification, (150.0, 12.0)),
        ("alerts", geometry.alerts, (40.0, 10.0)),
        ("measurements", geometry.measurements, (70.0, 40.0)),
        ("findings", geometry.findings, (70.0, 40.0)),
        ("notes", geometry.notes, (60.0, 40.0)),
        ("caution", geometry.caution, (200.0, 3.0)),
    ] {
        if area.width < least.0 || area.height < least.1 {
            report
                .add(&table.place_of(key), format!("`{key}` must be at least {} × {} mm", least.0, least.1));
        }
    }
    let ruled = Area { width: field.width + BAR_GAP + 1.0, height: field.height + RULER, ..field };
    let strips = [("field", ruled), ("legend", legend)];
    let framing = [
        ("identification", geometry.identification),
        ("alerts", geometry.alerts),
        ("caution", geometry.caution),
    ];
    let panels =
        [("measurements", geometry.measurements), ("findings", geometry.findings), ("notes", geometry.notes)];
    let pages: Vec<Vec<(&str, Area)>> = if geometry.panels_on_own_page {
        vec![[&framing[..], &strips].concat(), [&framing[..], &panels].concat()]
    } else {
        vec![[&framing[..], &strips, &panels].concat()]
    };
    let mut said: Vec<(&str, &str)> = Vec::new();
    for page in &pages {
        for (index, (key, area)) in page.iter().enumerate() {
            // Half a tenth of a mm is no violation but arithmetic.
            let outside = area.left < inside.left - 0.05
                || area.top < inside.top - 0.05
                || area.right() > inside.right() + 0.05
                || area.bottom() > inside.bottom() + 0.05;
            if outside && !said.contains(&(key, key)) {
                said.push((key, key));
                let rest = if *key == "field" { " with its time ruler and check bar" } else { "" };
                report.add(&table.place_of(key), format!("`{key}`{rest} reaches outside the margins"));
            }
            for (other, its) in &page[index + 1..] {
                if area.overlaps(its) && !said.contains(&(key, other)) {
                    said.push((key, other));
                    report.add(&table.place_of(other), format!("`{other}` overlaps `{key}`"));
                }
            }
        }
    }
}

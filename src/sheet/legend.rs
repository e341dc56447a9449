//! Below the grid field: time ruler, legend, check bars.

use super::draw::{artifact, paragraph, pen, polyline};
use super::given::{Sheet, plain};
use super::layout::{BAR, BAR_GAP, Line};
use super::{ComposeError, Element, Shape};
use crate::condition::FilterChain;
use crate::recording::SourceFilters;
use crate::units::Hertz;

/// How many hex digits of the source's hash are printed; the JSON has them all.
const HASH_DIGITS: usize = 12;
/// Half the stroke at a bar's end.
const END: f64 = 0.9;

/// Ruler, legend and bars of a page, `page` counting from 0.
pub(super) fn elements(sheet: &Sheet, page: usize) -> Result<Vec<Element>, ComposeError> {
    let (ticks, numbers) = ruler(sheet, page);
    let (bars, caption) = bars(sheet);
    let mut lines = legend(sheet)?;
    lines.push(caption);
    Ok(vec![artifact(ticks), artifact(bars), paragraph(numbers), paragraph(lines)])
}

/// Whole seconds with their number, half seconds with a shorter stroke.
fn ruler(sheet: &Sheet, page: usize) -> (Vec<Shape>, Vec<Shape>) {
    let field = sheet.geometry.field;
    let timing = &sheet.timing;
    let speed = sheet.options.speed.get();
    let pen = pen(Line { width: 0.2, ..sheet.layout.lines.bar });
    let style = sheet.label();
    let left = sheet.traces_left();
    let top = field.bottom() + 0.5;
    let from = page as f64 * timing.row;
    let mut ticks = Vec::new();
    let mut numbers = Vec::new();
    let halves = (timing.row * 2.0 + 1e-6).floor() as u32;
    for half in 0..=halves {
        let x = left + f64::from(half) / 2.0 * speed;
        let whole = half % 2 == 0;
        ticks.push(polyline(&[(x, top), (x, top + if whole { 1.4 } else { 0.7 })], pen));
        // In the part's own time where the columns follow each other, so in the recording's.
        let second = timing.start + from + f64::from(half) / 2.0;
        if whole && second <= timing.start + timing.length + 1e-6 {
            let unit = if half == 0 { " s" } else { "" };
            numbers.push(style.middle(x, field.bottom() + 4.0, &format!("{}{unit}", plain(second))));
        }
    }
    (ticks, numbers)
}

/// The bar along, below the field's right end, and the bar up beside it.
fn bars(sheet: &Sheet) -> (Vec<Shape>, Shape) {
    let (field, legend) = (sheet.geometry.field, sheet.geometry.legend);
    let pen = pen(sheet.layout.lines.bar);
    let (left, right, y) = (legend.right() - BAR, legend.right(), legend.top + 1.6);
    let (x, foot) = (field.right() + BAR_GAP, field.bottom());
    let shapes = vec![
        polyline(&[(left, y), (right, y)], pen),
        polyline(&[(left, y - END), (left, y + END)], pen),
        polyline(&[(right, y - END), (right, y + END)], pen),
        polyline(&[(x, foot), (x, foot - BAR)], pen),
        polyline(&[(x - END, foot), (x + END, foot)], pen),
        polyline(&[(x - END, foot - BAR), (x + END, foot - BAR)], pen),
    ];
    let style = sheet.label();
    let caption = "Both bars are 100 mm long: if yours are not, the sheet was printed scaled.";
    (shapes, style.right(right, y + 3.9, caption))
}

/// Scale, filters, source.
fn legend(sheet: &Sheet) -> Result<Vec<Shape>, ComposeError> {
    let area = sheet.geometry.legend;
    let room = area.width - BAR - 4.0;
    let (strong, body) = (sheet.heading(), sheet.body());
    let recording = &sheet.case.recording;
    let scale =
        format!("{} mm/s   {} mm/mV", plain(sheet.options.speed.get()), plain(sheet.options.gain.get()));
    let after = strong.width(&scale)? + 3.0;
    let chain = format!(
        "Traces {}; measured {}; {}",
        chain(&sheet.case.display.chain),
        chain(&sheet.case.analysis.chain),
        source_filters(&recording.occasion.filters)
    );
    let hash: String = recording.source.sha256.chars().take(HASH_DIGITS).collect();
    let source = format!(
        "{} samples/s   {}   SHA-256 {hash}   leadsheet {}",
        plain(recording.rate.get()),
        recording.source.file,
        env!("CARGO_PKG_VERSION")
    );
    let (first, second) = (area.top + 2.2, area.top + 5.7);
    Ok(vec![
        strong.left(area.left, first, &scale),
        body.left(area.left + after, first, &body.fit(&chain, room - after)?),
        body.left(area.left, second, &body.fit(&source, room)?),
    ])
}

/// A chain in words.
fn chain(chain: &FilterChain) -> String {
    let band = match (chain.low_cut, chain.high_cut) {
        (None, None) => "unfiltered".to_owned(),
        (Some(low), Some(high)) => format!("{} to {} Hz", plain(low.get()), plain(high.get())),
        (Some(low), None) => format!("from {} Hz", plain(low.get())),
        (None, Some(high)) => format!("up to {} Hz", plain(high.get())),
    };
    chain.mains.map_or(band.clone(), |mains| format!("{band}, {} Hz mains rejected", plain(mains.get())))
}

/// What the source says of its own filters.
fn source_filters(filters: &SourceFilters) -> String {
    let mut said = Vec::new();
    let mut say = |what: &str, corner: Option<Hertz>| {
        if let Some(corner) = corner {
            said.push(format!("{what} {} Hz", plain(corner.get())));
        }
    };
    say("low cut", filters.low_cut);
    say("high cut", filters.high_cut);
    say("mains", filters.mains);
    if said.is_empty() {
        "source's filters not stated".to_owned()
    } else {
        format!("source: {}", said.join(", "))
    }
}

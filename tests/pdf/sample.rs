//! A page built by hand: grid, traces, pulses and texts at places that the tests know.

use leadsheet::lettering::Face;
use leadsheet::pdf::DocumentInfo;
use leadsheet::sheet::{Anchor, Element, Grid, Ink, Page, Paper, Pen, Point, Rect, Role, Shape, Text};
use leadsheet::units::Millimetres;

/// Names that must come out of the file as they went in.
pub const NAMES: [&str; 3] = ["Łucja Żółtowska-Ďurić", "Ελένη Παπαδοπούλου", "Ґанна Щербаківська"];
/// Left and top of the grid field: not whole millimetres, so that a rounding to them would show.
pub const FIELD: (f64, f64) = (14.35, 24.15);
/// Its width and height.
pub const SIZE: (f64, f64) = (250.0, 124.0);
/// Samples of a trace: 10 s at 500 Hz, 0.05 mm apart at 25 mm/s.
pub const SAMPLES: usize = 5001;
/// Traces on the page.
pub const TRACES: usize = 13;
/// Width of a trace's pen.
pub const TRACE_WIDTH: f64 = 0.3;

const BLACK: Ink = Ink { r: 0, g: 0, b: 0 };

pub fn mm(value: f64) -> Millimetres {
    Millimetres::new(value).expect("finite")
}

pub fn point((x, y): (f64, f64)) -> Point {
    Point { x: mm(x), y: mm(y) }
}

pub fn pen(width: f64, ink: Ink) -> Pen {
    Pen { width: mm(width), ink, dash: None }
}

/// The vertices of a trace, in mm: not on any lattice, with steps of up to 2 mm.
pub fn trace(number: usize) -> Vec<(f64, f64)> {
    let middle = FIELD.1 + 8.0 + 9.0 * number as f64;
    (0..SAMPLES)
        .map(|sample| {
            let t = sample as f64 / 500.0;
            let spike = if sample % 190 == 40 { 6.0 } else { 0.0 };
            let wave = 1.7 * (7.3 * t + number as f64).sin() + 0.311 * (91.0 * t).sin();
            (FIELD.0 + sample as f64 * 0.05, middle - wave - spike)
        })
        .collect()
}

/// The corners of a calibration pulse of 5 × 10 mm at the field's left edge.
pub fn pulse(number: usize) -> Vec<(f64, f64)> {
    let (x, y) = (FIELD.0 + 1.0, FIELD.1 + 20.0 + 30.0 * number as f64);
    vec![(x, y), (x + 1.0, y), (x + 1.0, y - 10.0), (x + 6.0, y - 10.0), (x + 6.0, y), (x + 7.0, y)]
}

fn line(points: Vec<(f64, f64)>, width: f64) -> Shape {
    Shape::Polyline { points: points.into_iter().map(point).collect(), pen: pen(width, BLACK) }
}

pub fn text(at: (f64, f64), size: f64, face: Face, text: &str) -> Text {
    Text {
        at: point(at),
        anchor: Anchor::Left,
        vertical: false,
        size: mm(size),
        face,
        ink: BLACK,
        text: text.to_owned(),
    }
}

fn element(role: Role, shapes: Vec<Shape>) -> Element {
    Element { role, shapes }
}

/// The page.
pub fn page(paper: Paper) -> Page {
    let field = Rect { x: mm(FIELD.0), y: mm(FIELD.1), width: mm(SIZE.0), height: mm(SIZE.1) };
    let grid = Grid {
        field,
        fine: pen(0.1, Ink { r: 0xF0, g: 0xA8, b: 0xA8 }),
        coarse: pen(0.25, Ink { r: 0xD8, g: 0x70, b: 0x70 }),
    };
    let mut elements = vec![
        element(Role::Artifact, vec![Shape::Grid(grid)]),
        element(
            Role::Heading,
            vec![Shape::Text(text((14.0, 12.0), 4.0, Face::Bold, "A sheet made by hand"))],
        ),
    ];
    for (row, name) in NAMES.iter().enumerate() {
        let y = 160.0 + 5.0 * row as f64;
        let mut value = text((120.0, y), 2.5, Face::Bold, "1234 µV");
        value.anchor = Anchor::Right;
        let cells = vec![Shape::Text(text((14.0, y), 2.5, Face::Regular, name)), Shape::Text(value)];
        elements.push(element(Role::TableRow, cells));
    }
    let mut up = text((8.0, 100.0), 2.5, Face::Regular, "bottom to top ≥ 100 mm");
    (up.anchor, up.vertical) = (Anchor::Middle, true);
    elements.push(element(Role::Paragraph, vec![Shape::Text(up)]));
    let mut shapes: Vec<Shape> = (0..4).map(|number| line(pulse(number), 0.3)).collect();
    shapes.extend((0..TRACES).map(|number| line(trace(number), TRACE_WIDTH)));
    elements.push(element(Role::Figure { alt: "Thirteen (invented) traces; ≤ 10 s".to_owned() }, shapes));
    let frame = Rect { x: mm(14.0), y: mm(180.0), width: mm(60.0), height: mm(12.0) };
    let box_ =
        Shape::Rect { rect: frame, fill: Some(Ink { r: 230, g: 230, b: 230 }), pen: Some(pen(0.2, BLACK)) };
    elements.push(element(Role::Artifact, vec![box_]));
    Page { paper, number: 1, of: 1, elements }
}

/// What the document says about itself.
pub fn info() -> DocumentInfo {
    DocumentInfo {
        title: "Sheet of Łucja & <Co>".to_owned(),
        subject: "Hand-made page".to_owned(),
        language: "en",
        creator: "leadsheet test".to_owned(),
        date: chrono::NaiveDate::from_ymd_opt(2024, 2, 29)
            .and_then(|day| day.and_hms_opt(13, 5, 9))
            .map(|local| (local, chrono::FixedOffset::west_opt(12_600))),
    }
}

/// The document of one page.
pub fn document(paper: Paper) -> Vec<u8> {
    leadsheet::pdf::write(&[page(paper)], &info()).expect("the page can be written")
}

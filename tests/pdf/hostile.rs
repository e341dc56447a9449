//! Pages that no layout should make: a sound document all the same.

use super::sample::{info, mm, page, pen, text};
use leadsheet::lettering::Face;
use leadsheet::pdf::write;
use leadsheet::sheet::{Element, Grid, Ink, Page, Paper, Point, Rect, Role, Shape};
use leadsheet::units::Millimetres;
use lopdf::Document;

fn with_shapes(shapes: Vec<Shape>) -> Page {
    Page { elements: vec![Element { role: Role::Paragraph, shapes }], ..page(Paper::A4) }
}

#[test]
fn empty_shapes_and_absurd_lengths_leave_a_sound_document() {
    let black = Ink { r: 0, g: 0, b: 0 };
    let pen = pen(0.1, black);
    let far = Millimetres::literal(f64::MAX);
    let corner = Point { x: far, y: -far };
    let field = Rect { x: far, y: -far, width: mm(2.0), height: mm(-3.0) };
    let shapes = vec![
        Shape::Polyline { points: Vec::new(), pen },
        Shape::Polyline { points: vec![corner], pen },
        Shape::Polyline { points: vec![corner; 300], pen },
        Shape::Rect { rect: field, fill: None, pen: None },
        Shape::Rect { rect: Rect { width: far, height: far, ..field }, fill: Some(black), pen: Some(pen) },
        Shape::Grid(Grid { field, fine: pen, coarse: pen }),
        Shape::Text(text((-1e300, 1e300), 1e300, Face::Regular, "far")),
        Shape::Text(text((0.0, 0.0), 0.0, Face::Regular, "")),
    ];
    for pages in [Vec::new(), vec![with_shapes(Vec::new())], vec![with_shapes(shapes)]] {
        let bytes = write(&pages, &info()).expect("they are written");
        let document = Document::load_mem(&bytes).expect("the file can be read back");
        assert_eq!(document.get_pages().len(), pages.len());
    }
}

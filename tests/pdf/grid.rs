//! The grid's form: shared where equal, untouched by what the page drew before.

use super::paths::{Path, stroked_on};
use super::sample::{FIELD, SIZE, info, mm, page, pen, point};
use leadsheet::pdf::write;
use leadsheet::sheet::{Element, Ink, Paper, Pen, Role, Shape};
use lopdf::Document;

/// Half a unit of 2.5 µm, and the sixth decimal of the file's matrix.
const EXACT: f64 = 0.0016;

fn assert_grid(paths: &[Path]) {
    let rulings: Vec<&Path> = paths.iter().filter(|path| path.points.len() == 2).collect();
    assert_eq!(rulings.len(), (SIZE.0 + SIZE.1) as usize + 2);
    let (left, top) = FIELD;
    for ruling in rulings {
        for &(x, y) in &ruling.points {
            let inside =
                |at: f64, from: f64, length: f64| (from - EXACT..from + length + EXACT).contains(&at);
            assert!(inside(x, left, SIZE.0) && inside(y, top, SIZE.1), "({x}, {y}) is outside the field");
        }
        assert_eq!((ruling.cap_and_join.0, ruling.dashed), (0, false), "solid, ending at the field's edge");
        let ink = if ruling.width > 0.2 { [0xD8, 0x70, 0x70] } else { [0xF0, 0xA8, 0xA8] };
        for (drawn, wanted) in ruling.colour.iter().zip(ink) {
            assert!((drawn - f64::from(wanted) / 255.0).abs() < 0.001, "{drawn} for {wanted}/255");
        }
    }
}

#[test]
fn pages_of_two_papers_share_a_grid_and_each_has_it_in_its_place() {
    let pages = [page(Paper::A4), page(Paper::Letter), page(Paper::A4)];
    let bytes = write(&pages, &info()).expect("the pages can be written");
    (0..pages.len()).for_each(|index| assert_grid(&stroked_on(&bytes, index)));
    let document = Document::load_mem(&bytes).expect("the file can be read back");
    let streams = document.objects.values().filter_map(|object| object.as_stream().ok());
    assert_eq!(streams.filter(|stream| stream.dict.has_type(b"XObject")).count(), 1);
}

#[test]
fn a_dashed_line_before_the_grid_leaves_it_solid() {
    let mut page = page(Paper::A4);
    let dashed = Pen { dash: Some((mm(1.0), mm(0.5))), ..pen(0.2, Ink { r: 0, g: 0, b: 0 }) };
    let points = [1.0, 2.0, 3.0].map(|x| point((x, 5.0))).to_vec();
    let shapes = vec![Shape::Polyline { points, pen: dashed }];
    page.elements.insert(0, Element { role: Role::Artifact, shapes });
    let paths = stroked_on(&write(&[page], &info()).expect("the page can be written"), 0);
    assert!(paths[0].dashed);
    assert_eq!(paths.iter().filter(|path| path.dashed).count(), 1);
    assert_grid(&paths);
}

//! The page of the case made by hand, as text in mm that a reader has approved.

use super::geometry::shapes;
use crate::support::golden::assert_golden;
use crate::support::project;
use crate::support::sheets::case_by_hand;
use leadsheet::sheet::{Layout, Page, Paper, Role, Shape, SheetOptions, compose};
use leadsheet::units::{Millimetres, PaperSpeed};
use std::fmt::Write;

fn mm(length: Millimetres) -> String {
    let text = format!("{:.2}", length.get());
    text.trim_end_matches('0').trim_end_matches('.').to_owned()
}

/// One line for each shape; of a long line its ends and how many vertices it has.
fn dump(pages: &[Page]) -> String {
    let mut out = String::new();
    for page in pages {
        let _ = writeln!(out, "page {} of {}, {:?}", page.number, page.of, page.paper);
        for element in &page.elements {
            match &element.role {
                Role::Figure { alt } => {
                    let _ = writeln!(out, "figure: {alt}");
                }
                role => {
                    let _ = writeln!(out, "{}", format!("{role:?}").to_lowercase());
                }
            }
            for shape in &element.shapes {
                let _ = writeln!(out, "  {}", line(shape));
            }
        }
    }
    out
}

fn line(shape: &Shape) -> String {
    match shape {
        Shape::Grid(grid) => format!(
            "grid {} {} {} × {}, {} and {}",
            mm(grid.field.x),
            mm(grid.field.y),
            mm(grid.field.width),
            mm(grid.field.height),
            mm(grid.fine.width),
            mm(grid.coarse.width)
        ),
        Shape::Polyline { points, pen } => {
            let at = |index: usize| format!("{} {}", mm(points[index].x), mm(points[index].y));
            if points.len() <= 6 {
                let all: Vec<String> = (0..points.len()).map(at).collect();
                format!("line {} wide: {}", mm(pen.width), all.join(", "))
            } else {
                let last = points.len() - 1;
                format!("line {} wide: {} vertices, {} to {}", mm(pen.width), points.len(), at(0), at(last))
            }
        }
        Shape::Rect { rect, .. } => {
            format!("box {} {} {} × {}", mm(rect.x), mm(rect.y), mm(rect.width), mm(rect.height))
        }
        Shape::Text(text) => format!(
            "{} {} {:?} {} {:?}: {}",
            mm(text.at.x),
            mm(text.at.y),
            text.anchor,
            mm(text.size),
            text.face,
            text.text
        ),
    }
}

fn assert_page(name: &str, layout: &str, options: &SheetOptions) {
    let layout = Layout::load(layout).unwrap_or_else(|error| panic!("{error}"));
    let pages = compose(&case_by_hand(), &layout, options).unwrap_or_else(|error| panic!("{error}"));
    let version = format!("leadsheet {}", env!("CARGO_PKG_VERSION"));
    let text = dump(&pages).replace(&version, "leadsheet VERSION");
    assert_golden(&project().join("tests/sheet").join(name), &text);
}

#[test]
fn the_standard_page_is_as_approved() {
    assert_page("standard.txt", "standard", &SheetOptions::default());
}

#[test]
fn the_orderly_pages_at_50_mm_a_second_on_letter_are_as_approved() {
    let speed = PaperSpeed::literal(50.0);
    let options = SheetOptions { paper: Paper::Letter, speed, ..SheetOptions::default() };
    assert_page("orderly-50.txt", "orderly", &options);
}

#[test]
fn a_pages_texts_say_what_a_reader_must_know() {
    let layout = Layout::load("standard").unwrap_or_else(|error| panic!("{error}"));
    let pages =
        compose(&case_by_hand(), &layout, &SheetOptions::default()).unwrap_or_else(|error| panic!("{error}"));
    let all: Vec<&str> = shapes(&pages[0])
        .filter_map(|shape| match shape {
            Shape::Text(text) => Some(text.text.as_str()),
            _ => None,
        })
        .collect();
    let all = all.join(" ");
    for wanted in [
        "Łucja Żółtowska-Ďurić",
        "Manoeuvre: Valsalva",
        "25 mm/s",
        "10 mm/mV",
        "unfiltered",
        "500 samples/s",
        "by-hand.hea",
        "0123456789ab",
        "III, aVR, aVL, aVF derived from I and II",
        "columns follow each other in time",
        "24 of 25 beats averaged",
        "RR 398 to 402 ms",
        "RP 120 ms",
        "23 of 24 beats",
        "confirm",
        "reject",
        "leave open",
        "Signature",
        "Not a diagnosis",
        "100 mm",
        "page 1 of 1",
    ] {
        assert!(all.contains(wanted), "{wanted:?} is not on the sheet:\n{all}");
    }
}

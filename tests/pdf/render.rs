//! True scale, measured on pictures: at 254 dpi 10 pixels are 1 mm.

use super::sample::{FIELD, NAMES, SIZE, info, mm, page, pen, point};
use crate::support::TempDir;
use crate::support::tools::judge;
use leadsheet::lettering::{Face, width};
use leadsheet::sheet::{Anchor, Element, Ink, Page, Paper, Role, Shape};
use std::path::Path;

/// A picture in shades of grey.
struct Picture {
    width: usize,
    height: usize,
    pixels: Vec<u8>,
}

impl Picture {
    /// Binary PGM: `P5`, width, height, 255, pixels.
    fn parse(bytes: &[u8]) -> Self {
        let mut at = 0;
        let mut field = || {
            while bytes[at].is_ascii_whitespace() || bytes[at] == b'#' {
                at += if bytes[at] == b'#' {
                    bytes[at..].iter().position(|&b| b == b'\n').expect("a line's end")
                } else {
                    1
                };
            }
            let start = at;
            at += bytes[at..].iter().position(u8::is_ascii_whitespace).expect("an end");
            String::from_utf8_lossy(&bytes[start..at]).into_owned()
        };
        assert_eq!(field(), "P5");
        let (width, height, depth) =
            (field().parse().expect("width"), field().parse().expect("height"), field());
        assert_eq!(depth, "255");
        Self { width, height, pixels: bytes[at + 1..].to_vec() }
    }

    fn darkness(&self, x: usize, y: usize) -> f64 {
        255.0 - f64::from(self.pixels[y * self.width + x])
    }
}

fn pictures(page: Page) -> Vec<(&'static str, Picture)> {
    let folder = TempDir::new();
    let at = |name: &str| folder.path().join(name).to_str().expect("UTF-8").to_owned();
    let file = at("page.pdf");
    std::fs::write(&file, leadsheet::pdf::write(&[page], &info()).expect("the page can be written"))
        .expect("written");
    let read = |name: &str| Picture::parse(&std::fs::read(Path::new(&at(name))).expect("a picture"));
    let mut pictures = Vec::new();
    if judge("pdftoppm", &["-r", "254", "-gray", "-singlefile", &file, &at("poppler")]).is_some() {
        pictures.push(("pdftoppm", read("poppler.pgm")));
    }
    if judge("mutool", &["draw", "-q", "-r", "254", "-c", "gray", "-F", "pgm", "-o", &at("mupdf.pgm"), &file])
        .is_some()
    {
        pictures.push(("mutool", read("mupdf.pgm")));
    }
    pictures
}

/// Only the grid: traces would hide it.
fn bare(paper: Paper) -> Page {
    let mut page = page(paper);
    page.elements.truncate(1);
    page
}

#[test]
fn in_two_renderers_every_ruling_lies_within_a_pixel_of_its_millimetre() {
    for paper in [Paper::A4, Paper::Letter] {
        for (renderer, picture) in pictures(bare(paper)) {
            let (wide, high) = paper.size();
            assert!(
                (picture.width as f64 - wide.get() * 10.0).abs() <= 1.0,
                "{renderer}: {} wide",
                picture.width
            );
            assert!(
                (picture.height as f64 - high.get() * 10.0).abs() <= 1.0,
                "{renderer}: {} high",
                picture.height
            );
            // Profiles between two rulings of the other direction, so that these don't count.
            let row = ((FIELD.1 + 62.5) * 10.0) as usize;
            let column = ((FIELD.0 + 122.5) * 10.0) as usize;
            let across: Vec<f64> = (0..picture.width).map(|x| picture.darkness(x, row)).collect();
            let down: Vec<f64> = (0..picture.height).map(|y| picture.darkness(column, y)).collect();
            for (profile, start, length) in [(across, FIELD.0, SIZE.0), (down, FIELD.1, SIZE.1)] {
                for ruling in 0..=length as usize {
                    let wanted = (start + ruling as f64) * 10.0;
                    let near = (wanted as usize - 4)..(wanted as usize + 5);
                    let ink: f64 = near.clone().map(|at| profile[at]).sum();
                    assert!(ink > 20.0, "{renderer}, {paper:?}: ruling {ruling} can't be seen");
                    let seen = near.map(|at| (at as f64 + 0.5) * profile[at]).sum::<f64>() / ink;
                    assert!(
                        (seen - wanted).abs() <= 1.0,
                        "{renderer}, {paper:?}: ruling {ruling} at {seen} px, not {wanted}"
                    );
                }
            }
        }
    }
}

// Source: the renderers' own layout of the embedded fonts.
#[test]
fn a_text_is_as_wide_on_paper_as_lettering_says() {
    let black = Ink { r: 0, g: 0, b: 0 };
    let size = mm(8.0);
    let mut shapes = Vec::new();
    let mut wanted = Vec::new();
    for (row, name) in NAMES.iter().enumerate() {
        // Strokes of one glyph at both ends, so that side bearings are the same at both.
        let line = format!("I{name} AVToWA 1111I");
        let face = if row == 1 { Face::Bold } else { Face::Regular };
        let y = 40.0 + 30.0 * row as f64;
        let mut text = super::sample::text((20.0, y), 8.0, face, &line);
        text.anchor = Anchor::Left;
        let last = width(face, size, "I").expect("a glyph").get();
        wanted.push((y, width(face, size, &line).expect("glyphs").get() - last));
        shapes.push(Shape::Text(text));
    }
    shapes.push(Shape::Polyline { points: vec![point((1.0, 1.0)), point((2.0, 1.0))], pen: pen(0.2, black) });
    let page = Page {
        paper: Paper::A4,
        number: 1,
        of: 1,
        elements: vec![Element { role: Role::Paragraph, shapes }],
    };
    for (renderer, picture) in pictures(page) {
        for &(y, between) in &wanted {
            // Through the middle of the capitals, where an I is a plain stem.
            let row = ((y - 2.8) * 10.0) as usize;
            let stem = |from: &mut dyn Iterator<Item = usize>| {
                let dark: Vec<usize> = from
                    .skip_while(|&x| picture.darkness(x, row) < 60.0)
                    .take_while(|&x| picture.darkness(x, row) >= 1.0)
                    .collect();
                let ink: f64 = dark.iter().map(|&x| picture.darkness(x, row)).sum();
                dark.iter().map(|&x| x as f64 * picture.darkness(x, row)).sum::<f64>() / ink
            };
            let first = stem(&mut (0..picture.width));
            let last = stem(&mut (0..picture.width).rev());
            let seen = (last - first) / 10.0;
            assert!((seen - between).abs() <= 0.1, "{renderer}: {seen} mm between the ends, not {between}");
        }
    }
}

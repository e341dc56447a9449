//! The content stream of a page, in whole units of 2.5 µm.

use super::fonts::{self, Fonts};
use super::structure::PageTags;
use super::{Error, objects};
use crate::sheet::{Anchor, Element, Grid, Ink, Page, Pen, Point, Rect, Role, Shape, Text};
use crate::units::Millimetres;
use lopdf::{Dictionary, Document, Object, ObjectId, dictionary};
use std::fmt::Write;

/// What a page is drawn with.
pub(super) struct Content {
    pub bytes: Vec<u8>,
    pub xobjects: Dictionary,
}

/// The grids of a document; equal ones are written once.
#[derive(Default)]
pub(super) struct Grids(Vec<(Grid, ObjectId)>);

/// Units of a page's content in a millimetre. A unit of 2.5 µm moves no vertex by more than 1.25 µm:
/// 0.25 µV at 5 mm/mV, 0.05 ms at 25 mm/s. Finer units only make the file longer: 1 µm by 3 %.
const PER_MM: i64 = 400;

/// No number may be farther from 0 than this, so that neither sums nor the numbers of a PDF overflow.
const FARTHEST: f64 = 1e9;

/// Whole units of the content.
fn units(length: Millimetres) -> i64 {
    (length.get() * PER_MM as f64).round().clamp(-FARTHEST, FARTHEST) as i64
}

/// Draws a page.
pub(super) fn page(
    page: &Page,
    fonts: &Fonts,
    grids: &mut Grids,
    document: &mut Document,
    tags: &mut PageTags,
) -> Result<Content, Error> {
    let mut painter = Painter {
        out: String::with_capacity(192 * 1024),
        height: units(page.paper.size().1),
        fonts,
        state: State::default(),
    };
    let mut xobjects = Dictionary::new();
    let unit = 72.0 / 25.4 / PER_MM as f64;
    painter.line(format_args!("{unit:.16} 0 0 {unit:.16} 0 0 cm"));
    painter.line(format_args!("1 J 1 j"));
    for element in &page.elements {
        painter.element(element, tags, |grid| {
            let id = grids.place(document, grid)?;
            let name = format!("Grid{}", id.0);
            xobjects.set(name.as_str(), id);
            Ok(name)
        })?;
    }
    Ok(Content { bytes: painter.out.into_bytes(), xobjects })
}

impl Grids {
    /// The form that draws a grid of this size and look; its origin is the field's top left corner.
    fn place(&mut self, document: &mut Document, grid: &Grid) -> Result<ObjectId, Error> {
        let same = |known: &Grid| {
            (known.field.width, known.field.height, known.fine, known.coarse)
                == (grid.field.width, grid.field.height, grid.fine, grid.coarse)
        };
        if let Some((_, id)) = self.0.iter().find(|(known, _)| same(known)) {
            return Ok(*id);
        }
        let (width, height) = (units(grid.field.width), units(grid.field.height));
        let mut out = "0 J [] 0 d\n".to_owned();
        for (coarse, pen) in [(false, &grid.fine), (true, &grid.coarse)] {
            let _ = writeln!(out, "{} w {} RG", units(pen.width), colour(pen.ink));
            let rulings = |end: i64| {
                (0..=end).step_by(PER_MM as usize).filter(move |at| (at % (5 * PER_MM) == 0) == coarse)
            };
            for x in rulings(width) {
                let _ = writeln!(out, "{x} {} m {x} 0 l", -height);
            }
            for y in rulings(height) {
                let _ = writeln!(out, "0 {} m {width} {} l", -y, -y);
            }
            out.push_str("S\n");
        }
        let edge = units(grid.coarse.width.max(grid.fine.width));
        let bounds = [-edge, -height - edge, width + edge, edge].map(Object::from).to_vec();
        let dictionary = dictionary! {
            "Type" => "XObject", "Subtype" => "Form", "BBox" => bounds, "Resources" => dictionary! {},
        };
        let id = document.add_object(objects::compressed(dictionary, out.as_bytes())?);
        self.0.push((grid.clone(), id));
        Ok(id)
    }
}

/// What the graphics state holds, so that it is set only when it changes.
#[derive(Default)]
struct State {
    width: Option<i64>,
    stroke: Option<Ink>,
    fill: Option<Ink>,
    dash: Option<(i64, i64)>,
}

struct Painter<'a> {
    out: String,
    height: i64,
    fonts: &'a Fonts,
    state: State,
}

fn colour(ink: Ink) -> String {
    let part = |value: u8| {
        let text = format!("{:.3}", f64::from(value) / 255.0);
        text.trim_end_matches('0').trim_end_matches('.').to_owned()
    };
    format!("{} {} {}", part(ink.r), part(ink.g), part(ink.b))
}

impl Painter<'_> {
    fn line(&mut self, text: std::fmt::Arguments<'_>) {
        // Writing to a String can't fail.
        let _ = self.out.write_fmt(text);
        self.out.push('\n');
    }

    fn element(
        &mut self,
        element: &Element,
        tags: &mut PageTags,
        mut grid: impl FnMut(&Grid) -> Result<String, Error>,
    ) -> Result<(), Error> {
        if element.role != Role::TableRow {
            self.begin(&element.role, tags);
        }
        for shape in &element.shapes {
            if element.role == Role::TableRow {
                match shape {
                    Shape::Text(_) => self.begin(&Role::TableRow, tags),
                    _ => self.begin(&Role::Artifact, tags),
                }
            }
            self.shape(shape, &mut grid)?;
            if element.role == Role::TableRow {
                self.out.push_str("EMC\n");
            }
        }
        if element.role == Role::TableRow {
            tags.end_row();
        } else {
            self.out.push_str("EMC\n");
        }
        Ok(())
    }

    fn begin(&mut self, role: &Role, tags: &mut PageTags) {
        match tags.next(role) {
            None => self.out.push_str("/Artifact BMC\n"),
            Some((tag, id)) => self.line(format_args!("/{tag} <</MCID {id}>> BDC")),
        }
    }

    fn shape(
        &mut self,
        shape: &Shape,
        grid: &mut impl FnMut(&Grid) -> Result<String, Error>,
    ) -> Result<(), Error> {
        match shape {
            Shape::Grid(shape) => {
                let name = grid(shape)?;
                let (x, y) = self.place(&Point { x: shape.field.x, y: shape.field.y });
                self.line(format_args!("q 1 0 0 1 {x} {y} cm /{name} Do Q"));
            }
            Shape::Polyline { points, pen } => self.polyline(points, pen),
            Shape::Rect { rect, fill, pen } => self.rect(rect, *fill, pen.as_ref()),
            Shape::Text(text) => self.text(text)?,
        }
        Ok(())
    }

    fn stroke_with(&mut self, pen: &Pen) {
        let width = units(pen.width);
        if self.state.width != Some(width) {
            self.state.width = Some(width);
            self.line(format_args!("{width} w"));
        }
        if self.state.stroke != Some(pen.ink) {
            self.state.stroke = Some(pen.ink);
            self.line(format_args!("{} RG", colour(pen.ink)));
        }
        let dash = pen.dash.map(|(on, off)| (units(on), units(off)));
        if self.state.dash != dash {
            self.state.dash = dash;
            match dash {
                Some((on, off)) => self.line(format_args!("[{on} {off}] 0 d")),
                None => self.line(format_args!("[] 0 d")),
            }
        }
    }

    fn fill_with(&mut self, ink: Ink) {
        if self.state.fill != Some(ink) {
            self.state.fill = Some(ink);
            self.line(format_args!("{} rg", colour(ink)));
        }
    }

    fn place(&self, point: &Point) -> (i64, i64) {
        (units(point.x), self.height - units(point.y))
    }

    fn polyline(&mut self, points: &[Point], pen: &Pen) {
        let [first, rest @ ..] = points else { return };
        self.stroke_with(pen);
        let (x, y) = self.place(first);
        // Counted from its own first vertex, a long line's numbers are shorter: 1 to 6 % of the file.
        let long = points.len() > 50;
        let origin = if long { (x, y) } else { (0, 0) };
        if long {
            self.line(format_args!("q 1 0 0 1 {x} {y} cm"));
        }
        let mut last = (x - origin.0, y - origin.1);
        self.vertex(last, " m\n");
        for (index, point) in rest.iter().enumerate() {
            let (x, y) = self.place(point);
            let next = (x - origin.0, y - origin.1);
            // A repeated point draws nothing, unless the line is but a dot.
            if next != last || index == rest.len() - 1 {
                self.vertex(next, " l\n");
            }
            last = next;
        }
        self.out.push_str(if long { "S Q\n" } else { "S\n" });
    }

    fn vertex(&mut self, (x, y): (i64, i64), operator: &str) {
        push_integer(&mut self.out, x);
        self.out.push(' ');
        push_integer(&mut self.out, y);
        self.out.push_str(operator);
    }

    fn rect(&mut self, rect: &Rect, fill: Option<Ink>, pen: Option<&Pen>) {
        if let Some(ink) = fill {
            self.fill_with(ink);
        }
        if let Some(pen) = pen {
            self.stroke_with(pen);
        }
        let operator = match (fill, pen) {
            (Some(_), Some(_)) => "B",
            (Some(_), None) => "f",
            (None, Some(_)) => "S",
            (None, None) => return,
        };
        let bottom = Point { x: rect.x, y: rect.y + rect.height };
        let (x, y) = self.place(&bottom);
        self.line(format_args!("{x} {y} {} {} re {operator}", units(rect.width), units(rect.height)));
    }

    fn text(&mut self, text: &Text) -> Result<(), Error> {
        if text.text.is_empty() {
            return Ok(());
        }
        self.fill_with(text.ink);
        let width = crate::lettering::width(text.face, text.size, &text.text).map_err(Error::Glyph)?;
        let back = units(match text.anchor {
            Anchor::Left => Millimetres::ZERO,
            Anchor::Middle => width * 0.5,
            Anchor::Right => width,
        });
        let (x, y) = self.place(&text.at);
        let mut glyphs = String::with_capacity(text.text.len() * 4);
        self.fonts.encode(text.face, &text.text, &mut glyphs)?;
        let (name, size) = (fonts::name(text.face), units(text.size));
        let matrix = if text.vertical {
            format!("0 1 -1 0 {x} {}", y - back)
        } else {
            format!("1 0 0 1 {} {y}", x - back)
        };
        self.line(format_args!("BT /{name} {size} Tf {matrix} Tm <{glyphs}> Tj ET"));
        Ok(())
    }
}

/// Digits without the machinery of `format!`: a page has some ten thousand vertices.
fn push_integer(out: &mut String, value: i64) {
    if value < 0 {
        out.push('-');
    }
    let mut digits = [0u8; 20];
    let mut start = digits.len();
    let mut rest = value.unsigned_abs();
    loop {
        start -= 1;
        digits[start] = b'0' + (rest % 10) as u8;
        rest /= 10;
        if rest == 0 {
            break;
        }
    }
    out.extend(digits[start..].iter().map(|&digit| digit as char));
}

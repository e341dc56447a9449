//! Finished pages in, PDF bytes out: the only place that knows points. It decides nothing.
//!
//! One unit of a page's content is 2.5 µm, so that every vertex is a whole number and short. Fonts are embedded, cut to the glyphs used; text is searchable; the structure is tagged.
//! Nothing comes from the clock, from chance or from the machine: the same pages give the same bytes.

mod content;
mod fonts;
mod icc;
mod info;
mod objects;
mod structure;

pub use info::DocumentInfo;

use crate::lettering::MissingGlyph;
use crate::sheet::Page;
use lopdf::{Document, Object, dictionary};
use std::fmt;

/// Why pages could not be written.
#[derive(Debug)]
pub enum Error {
    /// A text holds a character without a glyph.
    Glyph(MissingGlyph),
    /// The font could not be cut to its glyphs.
    Font(String),
    /// The document could not be put together.
    Document(String),
}

impl fmt::Display for Error {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Error::Glyph(missing) => write!(f, "{missing}"),
            Error::Font(what) => write!(f, "font not embedded: {what}"),
            Error::Document(what) => write!(f, "PDF not written: {what}"),
        }
    }
}

impl std::error::Error for Error {}

/// Writes `pages` as one PDF document.
///
/// # Errors
/// When a text holds a character without a glyph; anything else is a defect of this program.
pub fn write(pages: &[Page], info: &DocumentInfo) -> Result<Vec<u8>, Error> {
    let mut document = Document::with_version("1.7");
    let fonts = fonts::embed(&mut document, pages)?;
    let mut grids = content::Grids::default();
    let tree = document.new_object_id();
    let mut structure = structure::Structure::default();
    let mut page_ids = Vec::new();
    for (index, page) in pages.iter().enumerate() {
        let id = document.new_object_id();
        let content = content::page(page, &fonts, &mut grids, &mut document, structure.page(id))?;
        let stream = document.add_object(objects::compressed(dictionary! {}, &content.bytes)?);
        let (width, height) = page.paper.size();
        let object = dictionary! {
            "Type" => "Page",
            "Parent" => tree,
            "MediaBox" => vec![0.into(), 0.into(), objects::real(width.points()), objects::real(height.points())],
            "Resources" => dictionary! { "Font" => fonts.resources(), "XObject" => content.xobjects },
            "Contents" => stream,
            "StructParents" => index as i64,
            "Tabs" => "S",
        };
        document.objects.insert(id, object.into());
        page_ids.push(id);
    }
    let kids: Vec<Object> = page_ids.iter().map(|&id| id.into()).collect();
    let pages_object = dictionary! { "Type" => "Pages", "Count" => kids.len() as i64, "Kids" => kids };
    document.objects.insert(tree, pages_object.into());
    let structure_root = structure.finish(&mut document);
    info::finish(&mut document, tree, structure_root, info)?;
    info::save(&mut document)
}

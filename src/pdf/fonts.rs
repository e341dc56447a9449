//! The fonts of a document, cut to the glyphs that it uses.

use super::{Error, objects};
use crate::lettering::Face;
use crate::sheet::{Page, Shape};
use lopdf::{Dictionary, Document, Object, ObjectId, dictionary};
use sha2::{Digest, Sha256};
use std::collections::BTreeMap;
use std::fmt::Write;
use subsetter::GlyphRemapper;

/// One embedded face.
struct Embedded {
    face: Face,
    glyphs: GlyphRemapper,
    font: ObjectId,
}

/// The embedded faces.
pub(super) struct Fonts(Vec<Embedded>);

impl Fonts {
    /// The resource dictionary.
    pub(super) fn resources(&self) -> Dictionary {
        self.0.iter().map(|font| (name(font.face).to_owned(), Object::Reference(font.font))).collect()
    }

    /// Writes the glyphs of a text as hexadecimal digits.
    pub(super) fn encode(&self, face: Face, text: &str, out: &mut String) -> Result<(), Error> {
        for character in text.chars() {
            let glyph = face.glyph(character).map_err(Error::Glyph)?;
            let new = self.0.iter().find(|font| font.face == face).and_then(|font| font.glyphs.get(glyph));
            let new = new.ok_or_else(|| Error::Font(format!("glyph {glyph} was not embedded")))?;
            let _ = write!(out, "{new:04X}");
        }
        Ok(())
    }
}

/// The resource name of a face.
pub(super) fn name(face: Face) -> &'static str {
    match face {
        Face::Regular => "Regular",
        Face::Bold => "Bold",
    }
}

/// Embeds every face that the pages use.
pub(super) fn embed(document: &mut Document, pages: &[Page]) -> Result<Fonts, Error> {
    let mut used: BTreeMap<Face, BTreeMap<u16, char>> = BTreeMap::new();
    let shapes = pages.iter().flat_map(|page| &page.elements).flat_map(|element| &element.shapes);
    for shape in shapes {
        let Shape::Text(text) = shape else { continue };
        let characters = used.entry(text.face).or_default();
        for character in text.text.chars() {
            characters.insert(text.face.glyph(character).map_err(Error::Glyph)?, character);
        }
    }
    used.into_iter()
        .map(|(face, glyphs)| embed_face(document, face, &glyphs))
        .collect::<Result<_, _>>()
        .map(Fonts)
}

fn embed_face(document: &mut Document, face: Face, used: &BTreeMap<u16, char>) -> Result<Embedded, Error> {
    let old: Vec<u16> = used.keys().copied().collect();
    let glyphs = GlyphRemapper::new_from_glyphs_sorted(&old);
    let cut = subsetter::subset(face.bytes(), 0, &glyphs).map_err(|error| Error::Font(error.to_string()))?;
    let length = cut.len() as i64;
    let file = document.add_object(objects::compressed(dictionary! { "Length1" => length }, &cut)?);
    let base = format!("{}+NotoSans-{}", subset_tag(&cut), name(face));
    let [left, bottom, right, top, ascent, descent, cap_height] = face.descriptor();
    let descriptor = document.add_object(dictionary! {
        "Type" => "FontDescriptor",
        "FontName" => base.as_str(),
        "Flags" => 4,
        "FontBBox" => [left, bottom, right, top].map(objects::real).to_vec(),
        "ItalicAngle" => 0,
        "Ascent" => objects::real(ascent),
        "Descent" => objects::real(descent),
        "CapHeight" => objects::real(cap_height),
        "StemV" => if face == Face::Bold { 140 } else { 80 },
        "FontFile2" => file,
    });
    let mut order: Vec<(u16, u16, char)> =
        used.iter().filter_map(|(&old, &character)| Some((glyphs.get(old)?, old, character))).collect();
    order.sort_unstable();
    // The new numbers of the glyphs follow each other from 1 (0 is the sign for a missing one).
    let widths: Vec<Object> = order.iter().map(|&(_, old, _)| objects::real(face.advance(old))).collect();
    let descendant = document.add_object(dictionary! {
        "Type" => "Font",
        "Subtype" => "CIDFontType2",
        "BaseFont" => base.as_str(),
        "CIDSystemInfo" => dictionary! {
            "Registry" => Object::string_literal("Adobe"),
            "Ordering" => Object::string_literal("Identity"),
            "Supplement" => 0,
        },
        "FontDescriptor" => descriptor,
        "DW" => 0,
        "W" => vec![1.into(), widths.into()],
        "CIDToGIDMap" => "Identity",
    });
    let map = document.add_object(objects::compressed(dictionary! {}, unicode_map(&order).as_bytes())?);
    let font = document.add_object(dictionary! {
        "Type" => "Font",
        "Subtype" => "Type0",
        "BaseFont" => base.as_str(),
        "Encoding" => "Identity-H",
        "DescendantFonts" => vec![descendant.into()],
        "ToUnicode" => map,
    });
    Ok(Embedded { face, glyphs, font })
}

/// Six capitals that tell this subset from others of the same font (ISO 32000-1, 9.6.4).
fn subset_tag(cut: &[u8]) -> String {
    Sha256::digest(cut).iter().take(6).map(|byte| char::from(b'A' + byte % 26)).collect()
}

/// The ToUnicode map (ISO 32000-1, 9.10.3), at most 100 entries a block.
fn unicode_map(order: &[(u16, u16, char)]) -> String {
    let mut map = "/CIDInit /ProcSet findresource begin\n12 dict begin\nbegincmap\n\
        /CIDSystemInfo << /Registry (Adobe) /Ordering (UCS) /Supplement 0 >> def\n\
        /CMapName /Adobe-Identity-UCS def\n/CMapType 2 def\n\
        1 begincodespacerange\n<0000> <FFFF>\nendcodespacerange\n"
        .to_owned();
    for block in order.chunks(100) {
        let _ = writeln!(map, "{} beginbfchar", block.len());
        for (new, _, character) in block {
            let mut units = [0; 2];
            let units: String =
                character.encode_utf16(&mut units).iter().map(|unit| format!("{unit:04X}")).collect();
            let _ = writeln!(map, "<{new:04X}> <{units}>");
        }
        map.push_str("endbfchar\n");
    }
    map.push_str("endcmap\nCMapName currentdict /CMap defineresource pop\nend\nend\n");
    map
}

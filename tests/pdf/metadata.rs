//! What the file says about itself and its fonts, down to the bytes.

use super::sample::{info, mm, page, text};
use leadsheet::lettering::{Face, width};
use leadsheet::pdf::{DocumentInfo, write};
use leadsheet::sheet::{Element, Page, Paper, Role, Shape};
use lopdf::{Dictionary, Document, Object};

fn with_text(words: &str) -> Page {
    let shapes = vec![Shape::Text(text((20.0, 20.0), 3.0, Face::Regular, words))];
    Page { elements: vec![Element { role: Role::Paragraph, shapes }], ..page(Paper::A4) }
}

fn read_back(page: Page, info: &DocumentInfo) -> Document {
    let bytes = write(&[page], info).expect("the page can be written");
    Document::load_mem(&bytes).expect("the file can be read back")
}

fn followed<'a>(document: &'a Document, dictionary: &Dictionary, key: &[u8]) -> &'a Object {
    let id = dictionary.get(key).and_then(Object::as_reference).expect("a reference");
    document.get_object(id).expect("its object")
}

fn metadata(document: &Document) -> String {
    let catalogue = document.catalog().expect("a catalogue");
    let stream = followed(document, catalogue, b"Metadata").as_stream().expect("a stream");
    String::from_utf8(stream.content.clone()).expect("UTF-8, not packed")
}

#[test]
fn other_words_drawn_by_the_same_glyph_numbers_give_another_identifier() {
    // Both are glyphs 1 2 3 of a font cut to three letters.
    let identifier = |words| read_back(with_text(words), &info()).trailer.get(b"ID").expect("an ID").clone();
    assert_eq!(identifier("abc"), identifier("abc"));
    assert_ne!(identifier("abc"), identifier("def"));
}

#[test]
fn what_xml_forbids_never_reaches_the_metadata() {
    let hostile = DocumentInfo { title: "A <b> & \u{1}Ω\u{FFFF}".to_owned(), ..info() };
    let document = read_back(page(Paper::A4), &hostile);
    let xmp = metadata(&document);
    assert!(xmp.contains(">A &lt;b&gt; &amp;  Ω </rdf:li>"), "{xmp}");
}

#[test]
fn no_date_is_written_where_none_is_known() {
    let dated = read_back(page(Paper::A4), &info());
    assert!(metadata(&dated).contains("<xmp:CreateDate>2024-02-29T13:05:09-03:30</xmp:CreateDate>"));
    let undated = read_back(page(Paper::A4), &DocumentInfo { date: None, ..info() });
    assert!(!metadata(&undated).contains("Date"));
    let own = followed(&undated, &undated.trailer, b"Info").as_dict().expect("a dictionary");
    assert!(!own.has(b"CreationDate") && !own.has(b"ModDate"));
}

#[test]
fn a_font_is_cut_to_its_glyphs_and_has_the_widths_that_were_measured() {
    let document = read_back(with_text("Ελλάς Żółć"), &info());
    let font = |kind: &[u8]| {
        let is_kind = |d: &&Dictionary| d.get(b"Subtype").and_then(Object::as_name).is_ok_and(|n| n == kind);
        let mut found = document.objects.values().filter_map(|object| object.as_dict().ok()).filter(is_kind);
        let font = found.next().expect("a font");
        assert!(found.next().is_none(), "one face is used, one is embedded");
        font
    };
    assert!(followed(&document, font(b"Type0"), b"ToUnicode").as_stream().is_ok());
    let font = font(b"CIDFontType2");
    let descriptor = followed(&document, font, b"FontDescriptor").as_dict().expect("a descriptor");
    let file = followed(&document, descriptor, b"FontFile2").as_stream().expect("a font file");
    let program = file.decompressed_content().expect("a font");
    assert_eq!(file.dict.get(b"Length1").and_then(Object::as_i64).expect("a length"), program.len() as i64);
    let tables = ttf_parser::RawFace::parse(&program, 0).expect("a TrueType font");
    let profile = tables.table(ttf_parser::Tag::from_bytes(b"maxp")).expect("a count of glyphs");
    let count = u16::from_be_bytes([profile[4], profile[5]]);
    // Eight letters and the space, the sign for a missing glyph, and parts of composed letters.
    assert!((10..=20).contains(&count), "{count} glyphs");

    let widths = font.get(b"W").and_then(Object::as_array).expect("widths");
    assert_eq!(widths[0].as_i64().expect("the first glyph"), 1);
    let number = |width: &Object| f64::from(width.as_float().expect("a number"));
    let sum: f64 = widths[1].as_array().expect("widths").iter().map(number).sum();
    // Each of these characters once.
    let measured = width(Face::Regular, mm(1000.0), "Ελάς Żółć").expect("glyphs").get();
    assert!((sum - measured).abs() < 1e-3, "{sum} for {measured}");
}

//! The file as a whole: the same every time, valid, searchable, told not to be scaled.

use super::sample::{NAMES, document, info, page};
use crate::support::TempDir;
use crate::support::tools::{judge, judge_text};
use leadsheet::lettering::Face;
use leadsheet::pdf::{Error, write};
use leadsheet::sheet::{Paper, Shape};
use lopdf::{Dictionary, Document, Object};

fn in_file<T>(bytes: &[u8], look: impl FnOnce(&str) -> T) -> T {
    let folder = TempDir::new();
    let file = folder.path().join("page.pdf");
    std::fs::write(&file, bytes).expect("the file can be written");
    look(file.to_str().expect("UTF-8"))
}

fn identifier(bytes: &[u8]) -> Vec<u8> {
    let document = Document::load_mem(bytes).expect("the file can be read back");
    let pair = document.trailer.get(b"ID").and_then(Object::as_array).expect("an identifier");
    pair[0].as_str().expect("a string").to_vec()
}

fn has(dictionary: &Dictionary, key: &[u8], value: &Object) {
    assert_eq!(dictionary.get(key).ok(), Some(value), "{}", String::from_utf8_lossy(key));
}

#[test]
fn the_same_pages_give_the_same_bytes_and_others_another_identifier() {
    let (first, second) = (document(Paper::A4), document(Paper::A4));
    assert!(first == second);
    let mut other = page(Paper::A4);
    for shape in other.elements.iter_mut().flat_map(|element| &mut element.shapes) {
        if let Shape::Text(text) = shape {
            // The same glyphs in another order.
            text.text = text.text.chars().rev().collect();
        }
    }
    let other = write(&[other], &info()).expect("the page can be written");
    assert_ne!(identifier(&first), identifier(&other));
}

#[test]
fn viewers_are_told_not_to_scale_and_to_show_the_title() {
    let bytes = document(Paper::A4);
    let document = Document::load_mem(&bytes).expect("the file can be read back");
    let catalogue = document.catalog().expect("a catalogue");
    has(catalogue, b"Lang", &Object::string_literal("en"));
    let preferences = catalogue.get(b"ViewerPreferences").and_then(Object::as_dict).expect("preferences");
    has(preferences, b"PrintScaling", &"None".into());
    has(preferences, b"Enforce", &vec!["PrintScaling".into()].into());
    has(preferences, b"DisplayDocTitle", &true.into());
}

#[test]
fn a_character_without_a_glyph_is_an_error_that_names_it() {
    let mut page = page(Paper::A4);
    if let Some(Shape::Text(text)) = page
        .elements
        .iter_mut()
        .flat_map(|element| &mut element.shapes)
        .find(|shape| matches!(shape, Shape::Text(_)))
    {
        text.text = "名".to_owned();
    }
    match write(&[page], &info()) {
        Err(Error::Glyph(missing)) => assert_eq!((missing.character, missing.face), ('名', Face::Bold)),
        other => panic!("{:?}", other.map(|bytes| bytes.len())),
    }
}

#[test]
fn qpdf_finds_no_fault() {
    in_file(&document(Paper::A4), |file| {
        if let Some(report) = judge_text("qpdf", &["--check", file]) {
            assert!(report.contains("No syntax or stream encoding errors found"), "{report}");
        }
    });
}

#[test]
fn every_font_is_embedded_cut_and_has_its_unicode_map() {
    in_file(&document(Paper::A4), |file| {
        let Some(report) = judge_text("pdffonts", &[file]) else { return };
        let fonts: Vec<Vec<&str>> =
            report.lines().skip(2).map(|line| line.split_whitespace().collect()).collect();
        assert_eq!(fonts.len(), 2, "{report}");
        for font in fonts {
            // name, type (two words), encoding, emb, sub, uni, object
            assert_eq!(font[1..7], ["CID", "TrueType", "Identity-H", "yes", "yes", "yes"], "{report}");
        }
        let tags: Vec<&str> = report.lines().skip(2).map(|line| &line[..7]).collect();
        assert!(tags.iter().all(|tag| tag.ends_with('+')), "{report}");
    });
}

#[test]
fn the_file_says_its_title_date_size_and_that_it_is_tagged() {
    for (paper, size) in [(Paper::A4, "841.89 x 595.276 pts (A4)"), (Paper::Letter, "792 x 612 pts (letter)")]
    {
        in_file(&document(paper), |file| {
            let Some(report) = judge_text("pdfinfo", &["-isodates", file]) else { return };
            let field = |name: &str| {
                let line = report
                    .lines()
                    .find_map(|line| line.strip_prefix(name))
                    .unwrap_or_else(|| panic!("no {name} in {report}"));
                line.trim_start_matches(':').trim().to_owned()
            };
            assert_eq!(field("Title"), "Sheet of Łucja & <Co>");
            assert_eq!(field("CreationDate"), "2024-02-29T13:05:09-03:30");
            assert_eq!(field("Tagged"), "yes");
            assert_eq!(field("Pages"), "1");
            assert_eq!(field("Page size"), size);
        });
    }
}

#[test]
fn names_in_every_script_can_be_searched_and_copied() {
    in_file(&document(Paper::A4), |file| {
        if let Some(text) = judge_text("pdftotext", &["-layout", file, "-"]) {
            for wanted in NAMES.iter().chain(&["A sheet made by hand", "1234 µV"]) {
                assert!(text.contains(wanted), "{wanted} is not in\n{text}");
            }
        }
        if let Some(text) = judge("mutool", &["draw", "-q", "-F", "text", file]) {
            let text = String::from_utf8(text).expect("UTF-8");
            for wanted in NAMES {
                assert!(text.contains(wanted), "{wanted} is not in\n{text}");
            }
        }
    });
}

// Source: pdfinfo's own reading of the structure tree (ISO 32000-1, 14.7).
#[test]
fn the_structure_has_heading_table_paragraph_and_figure_with_its_words() {
    in_file(&document(Paper::A4), |file| {
        let Some(tree) = judge_text("pdfinfo", &["-struct-text", file]) else { return };
        for wanted in [
            "H1",
            "\"A sheet made by hand\"",
            "Table",
            "TR",
            "TD",
            "\"Łucja Żółtowska-Ďurić\"",
            "P (block)",
            "Figure",
        ] {
            assert!(tree.contains(wanted), "{wanted} is not in\n{tree}");
        }
        assert_eq!(tree.matches("Table").count(), 1, "rows that follow each other are one table\n{tree}");
        assert_eq!(tree.matches("    TR\n").count(), 3, "{tree}");
        assert_eq!(tree.matches("      TD\n").count(), 6, "{tree}");
    });
}

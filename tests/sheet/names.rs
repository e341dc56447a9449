//! Names in any script: drawn where the faces can, said where they can't.

use super::geometry::texts;
use crate::support::project;
use crate::support::sheets::case_by_hand;
use leadsheet::lettering::printable;
use leadsheet::sheet::{DEFAULT_LAYOUT, Layout, Page, SheetOptions, compose};
use std::path::Path;

fn named(name: &str) -> Vec<Page> {
    let mut case = case_by_hand();
    case.recording.subject.name = Some(name.to_owned());
    let layout = Layout::load(DEFAULT_LAYOUT).unwrap_or_else(|error| panic!("{error}"));
    compose(&case, &layout, &SheetOptions::default()).unwrap_or_else(|error| panic!("{error}"))
}

fn has(pages: &[Page], wanted: &str) -> bool {
    pages.iter().any(|page| texts(page).iter().any(|text| text.text.contains(wanted)))
}

#[test]
fn a_name_without_glyphs_is_printed_with_signs_and_said() {
    let pages = named("李明 (Li Ming)");
    assert!(has(&pages, "�� (Li Ming)"));
    assert!(has(&pages, "U+674E") && has(&pages, "U+660E"), "a note says which characters are missing");
    let pages = named("Ελένη Παπαδοπούλου");
    assert!(has(&pages, "Ελένη Παπαδοπούλου") && !has(&pages, "U+"));
}

#[test]
fn a_name_in_pieces_is_put_together() {
    assert!(has(&named("Zu\u{308}leyha A\u{30A}"), "Züleyha Å"));
}

fn signs_of(path: &Path, found: &mut Vec<(String, char)>) {
    if path.is_dir() {
        for entry in std::fs::read_dir(path).expect("a folder") {
            signs_of(&entry.expect("an entry").path(), found);
        }
        return;
    }
    if path.extension().is_none_or(|extension| extension == "bin") {
        return;
    }
    let text = std::fs::read_to_string(path).expect("source is text");
    let program = text.split("#[cfg(test)]").next().unwrap_or_default();
    for line in program.lines().filter(|line| !line.trim_start().starts_with("//")) {
        found.extend(
            line.chars().filter(|sign| !sign.is_ascii()).map(|sign| (path.display().to_string(), sign)),
        );
    }
}

#[test]
fn every_sign_in_the_programs_own_words_has_a_glyph() {
    let mut found = Vec::new();
    for room in
        ["src/sheet", "src/case", "src/findings", "src/measure", "src/condition", "src/recording", "layouts"]
    {
        signs_of(&project().join(room), &mut found);
    }
    assert!(found.iter().any(|(_, sign)| *sign == '−') && found.iter().any(|(_, sign)| *sign == 'µ'));
    for (file, sign) in found {
        assert!(printable(&sign.to_string()).1.is_empty(), "{file} prints {sign}");
    }
}

//! Lines of text.

use super::{Face, MissingGlyph};
use crate::units::Millimetres;
use unicode_normalization::UnicodeNormalization;

/// Stands for a character that no face can draw.
const SUBSTITUTE: char = '\u{FFFD}';
const ELLIPSIS: char = '…';

/// The width of a line at an em of `size`.
///
/// # Errors
/// When a character has no glyph.
pub fn width(face: Face, size: Millimetres, text: &str) -> Result<Millimetres, MissingGlyph> {
    let mut thousandths = 0.0;
    for character in text.chars() {
        thousandths += advance(face, character)?;
    }
    Ok(size * (thousandths / 1000.0))
}

/// In thousandths of the em.
fn advance(face: Face, character: char) -> Result<f64, MissingGlyph> {
    Ok(face.advance(face.glyph(character)?))
}

/// The text as it can be printed, and the characters that were replaced because no face can draw them.
///
/// Letters that came as base and mark are put together (Unicode's canonical composition), which changes
/// nothing that a reader sees. Marks without a shape of their own (soft hyphen, joiners, direction) are
/// left out, line ends and tabs become spaces. Any other character without a glyph, control characters
/// among them, becomes a visible sign.
pub fn printable(text: &str) -> (String, Vec<char>) {
    let mut replaced = Vec::new();
    let line = text
        .nfc()
        .filter(|&character| !is_shapeless(character))
        .map(|character| match character {
            '\t' | '\n' | '\r' => ' ',
            _ if Face::ALL.iter().all(|face| face.glyph(character).is_ok()) => character,
            _ => {
                replaced.push(character);
                SUBSTITUTE
            }
        })
        .collect();
    (line, replaced)
}

fn is_shapeless(character: char) -> bool {
    matches!(
        character,
        '\u{AD}' | '\u{200B}'..='\u{200F}' | '\u{202A}'..='\u{202E}' | '\u{2060}'..='\u{2069}' | '\u{FEFF}'
    )
}

/// The longest beginning of `text` that fits into `room`, with an ellipsis where it was cut; nothing at all
/// where not even the ellipsis fits.
///
/// # Errors
/// When a character has no glyph.
pub fn fit(face: Face, size: Millimetres, text: &str, room: Millimetres) -> Result<String, MissingGlyph> {
    if width(face, size, text)? <= room {
        return Ok(text.to_owned());
    }
    let mut used = advance(face, ELLIPSIS)?;
    if size * (used / 1000.0) > room {
        return Ok(String::new());
    }
    let mut end = 0;
    for (start, character) in text.char_indices() {
        used += advance(face, character)?;
        if size * (used / 1000.0) > room {
            break;
        }
        end = start + character.len_utf8();
    }
    Ok(format!("{}{ELLIPSIS}", text[..end].trim_end()))
}

/// The text broken at spaces, but not at no-break spaces, into lines no wider than `room`; a single word
/// that is wider is broken between characters, of which each line holds at least one.
///
/// # Errors
/// When a character has no glyph.
pub fn wrap(
    face: Face,
    size: Millimetres,
    text: &str,
    room: Millimetres,
) -> Result<Vec<String>, MissingGlyph> {
    let mut lines = Vec::new();
    let mut line = String::new();
    for word in text.split([' ', '\t', '\n', '\r']).filter(|word| !word.is_empty()) {
        let longer = if line.is_empty() { word.to_owned() } else { format!("{line} {word}") };
        if width(face, size, &longer)? <= room {
            line = longer;
            continue;
        }
        if !line.is_empty() {
            lines.push(std::mem::take(&mut line));
        }
        for character in word.chars() {
            if !line.is_empty() && width(face, size, &format!("{line}{character}"))? > room {
                lines.push(std::mem::take(&mut line));
            }
            line.push(character);
        }
    }
    if !line.is_empty() {
        lines.push(line);
    }
    Ok(lines)
}

#[cfg(test)]
mod tests {
    use super::*;

    const SIZE: Millimetres = Millimetres::literal(10.0);

    #[test]
    fn digits_are_tabular_and_widths_add_up() {
        let one = width(Face::Regular, SIZE, "1").unwrap();
        for digit in "023456789".chars() {
            assert_eq!(width(Face::Regular, SIZE, &digit.to_string()).unwrap(), one);
        }
        assert!((width(Face::Regular, SIZE, "111").unwrap() - one * 3.0).abs().get() < 1e-9);
    }

    #[test]
    fn names_in_latin_greek_and_cyrillic_have_glyphs_and_others_are_named() {
        for name in ["Łucja Żółtowska-Ďurić", "Ελένη Παπαδοπούλου", "Ґанна Щербаківська"]
        {
            assert!(width(Face::Bold, SIZE, name).is_ok(), "{name}");
            assert_eq!(printable(name), (name.to_owned(), Vec::new()));
        }
        let missing = width(Face::Regular, SIZE, "名").unwrap_err();
        assert_eq!(missing.character, '名');
        assert_eq!(printable("A名\u{7}"), ("A\u{FFFD}\u{FFFD}".to_owned(), vec!['名', '\u{7}']));
    }

    #[test]
    fn letters_that_came_in_pieces_are_put_together_and_shapeless_marks_left_out() {
        let pieces =
            "A\u{30A}sa Z\u{30C}iz\u{30C}ka \u{395}\u{301}\u{3bb}\u{3b9} \u{418}\u{306}\u{200F}\u{AD}";
        assert_eq!(printable(pieces), ("Åsa Žižka Έλι Й".to_owned(), Vec::new()));
        // A letter that has no composed form keeps its mark, which takes no width.
        let (ogonek, replaced) = printable("e\u{328}\u{301}");
        assert!(replaced.is_empty());
        assert_eq!(width(Face::Regular, SIZE, &ogonek), width(Face::Regular, SIZE, "ę"));
    }

    #[test]
    fn the_signs_of_the_trade_have_glyphs_in_both_faces() {
        let signs = "µμ−·×±÷√½¼⅓°′″²³⁴₁‰–—…„“”‘’«»≤≥≠≈←↑→↓Δ";
        assert_eq!(printable(signs), (signs.to_owned(), Vec::new()));
        for face in Face::ALL {
            assert_eq!(width(face, SIZE, "−"), width(face, SIZE, "+"), "figures stay in their columns");
        }
    }

    #[test]
    fn wrapped_and_fitted_lines_stay_in_their_room() {
        let room = Millimetres::literal(40.0);
        let text = "nothing separable, a normal result Donaudampfschifffahrtsgesellschaft";
        let lines = wrap(Face::Regular, SIZE, text, room).unwrap();
        assert!(lines.len() > 3);
        for line in &lines {
            assert!(width(Face::Regular, SIZE, line).unwrap() <= room, "{line}");
        }
        assert_eq!(lines.concat().replace(' ', ""), text.replace(' ', ""));
        let cut = fit(Face::Regular, SIZE, text, room).unwrap();
        assert!(cut.ends_with('…') && width(Face::Regular, SIZE, &cut).unwrap() <= room);
        assert_eq!(fit(Face::Regular, SIZE, text, Millimetres::literal(1.0)).unwrap(), "");
    }

    #[test]
    fn a_no_break_space_holds_number_and_unit_together() {
        let lines = wrap(Face::Regular, SIZE, "speed 25\u{A0}mm/s", Millimetres::literal(50.0)).unwrap();
        assert_eq!(lines, ["speed", "25\u{A0}mm/s"]);
    }
}

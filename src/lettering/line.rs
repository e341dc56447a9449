//! Lines of text.

use super::{Face, MissingGlyph};
use crate::units::Millimetres;

/// Stands for a character that no face can draw.
const SUBSTITUTE: char = '\u{FFFD}';

/// The width of a line at an em of `size`.
///
/// # Errors
/// When a character has no glyph.
pub fn width(face: Face, size: Millimetres, text: &str) -> Result<Millimetres, MissingGlyph> {
    let mut thousandths = 0.0;
    for character in text.chars() {
        thousandths += face.advance(face.glyph(character)?);
    }
    Ok(size * (thousandths / 1000.0))
}

/// The text with every character that a face lacks, and every control character, replaced by a visible
/// sign; and the characters that were replaced.
pub fn printable(text: &str) -> (String, Vec<char>) {
    let mut replaced = Vec::new();
    let line = text
        .chars()
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

/// The longest beginning of `text` that fits into `room`, with an ellipsis where it was cut.
///
/// # Errors
/// When a character has no glyph.
pub fn fit(face: Face, size: Millimetres, text: &str, room: Millimetres) -> Result<String, MissingGlyph> {
    if width(face, size, text)? <= room {
        return Ok(text.to_owned());
    }
    let mut kept = String::new();
    for character in text.chars() {
        let longer = format!("{kept}{character}");
        if width(face, size, &format!("{}…", longer.trim_end()))? > room {
            break;
        }
        kept = longer;
    }
    Ok(format!("{}…", kept.trim_end()))
}

/// The text broken at spaces into lines no wider than `room`; a single word that is wider is broken
/// between characters.
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
    for word in text.split_whitespace() {
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
    }
}

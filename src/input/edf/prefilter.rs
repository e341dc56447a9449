//! Filters applied before storing, which the header states in free text such as `HP:0.05Hz LP:150Hz N:50Hz`.

use super::header::Header;
use crate::recording::{Note, Occasion, Quantity, SourceFilters};
use crate::units::Hertz;

/// What is stated alike of all potentials goes to the filters; what can't be read stays a remark.
pub(super) fn apply(header: &Header, occasion: &mut Occasion, notes: &mut Vec<Note>) {
    let potentials = header.ordinary().filter(|signal| signal.quantity() == Quantity::Voltage);
    let mut texts: Vec<&str> = potentials.map(|signal| signal.prefilter.as_str()).collect();
    texts.sort_unstable();
    texts.dedup();
    match texts[..] {
        [] | [""] => {}
        [text] => {
            let (filters, whole) = parsed(text);
            occasion.filters = filters;
            if !whole {
                occasion.remarks.push(format!("Filters before storing: {text}"));
            }
        }
        _ => {
            texts.retain(|text| !text.is_empty());
            notes.push(Note::information(format!(
                "filters before storing differ between signals: {}",
                texts.join(", ")
            )));
        }
    }
}

/// The filters, and whether they are all that the text says. `DC` is no filter.
fn parsed(text: &str) -> (SourceFilters, bool) {
    let mut filters = SourceFilters::default();
    let mut whole = true;
    let text = text.to_ascii_lowercase();
    let mut rest = text.as_str();
    while let Some((key, after)) = rest.split_once([':', '=']) {
        let after = after.trim_start();
        let end =
            after.find(|c: char| c.is_ascii_whitespace() || matches!(c, ';' | '/')).unwrap_or(after.len());
        let (value, after) = after.split_at(end);
        let unit = after.trim_start();
        rest = unit.strip_prefix("hz").unwrap_or(unit);
        let place = match key.trim_matches(|c: char| !c.is_ascii_alphabetic()) {
            "hp" => &mut filters.low_cut,
            "lp" => &mut filters.high_cut,
            "n" | "notch" => &mut filters.mains,
            _ => {
                whole = false;
                continue;
            }
        };
        *place = hertz(value);
        whole &= place.is_some() || matches!(value, "dc" | "none" | "off");
    }
    (filters, whole && !rest.contains(|c: char| c.is_ascii_alphanumeric()))
}

fn hertz(text: &str) -> Option<Hertz> {
    let number = text.strip_suffix("hz").unwrap_or(text).replace(',', ".");
    number.parse().ok().and_then(Hertz::new).filter(|frequency| frequency.get() > 0.0)
}

#[cfg(test)]
mod tests {
    use super::*;

    // Source: EDF+ 2.1.3.5 (r) for the first; the others are spellings met in open files.
    #[test]
    fn the_spellings_of_filters() {
        let found = |text| {
            let (SourceFilters { low_cut, high_cut, mains }, whole) = parsed(text);
            ([low_cut, high_cut, mains].map(|cut| cut.map(Hertz::get)), whole)
        };
        assert_eq!(found("HP:0.1Hz LP:75Hz N:50Hz"), ([Some(0.1), Some(75.0), Some(50.0)], true));
        assert_eq!(found("HP: DC; LP: 410"), ([None, Some(410.0), None], true));
        assert_eq!(found("HP=0,05 Hz; LP=150 Hz"), ([Some(0.05), Some(150.0), None], true));
        assert_eq!(found("HP:0.5Hz Wavelet:4"), ([Some(0.5), None, None], false));
        assert_eq!(found("pre1"), ([None; 3], false));
        assert_eq!(found("HP:NaN LP:-5Hz"), ([None; 3], false));
    }
}

//! Numbers as tables spell them.

/// A number of a cell.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Number {
    pub value: f64,
    /// Digits behind the decimal mark.
    pub decimals: u32,
    /// The decimal mark, where there is one.
    pub mark: Option<u8>,
}

/// Far beyond any count or potential, and safe to scale.
const LARGEST: f64 = 1e15;

/// A finite number in decimal or scientific notation, with a point, or a comma where `comma` allows it.
/// `NaN`, `inf` and digit grouping are none, nor is what no unit makes a potential.
pub(super) fn parse(cell: &[u8], comma: bool) -> Option<Number> {
    let at = cell.iter().position(|byte| *byte == b'.' || (comma && *byte == b','));
    let plain = cell
        .iter()
        .all(|byte| byte.is_ascii_digit() || matches!(byte, b'.' | b',' | b'+' | b'-' | b'e' | b'E'));
    if !plain {
        return None;
    }
    let mark = at.map(|at| cell[at]);
    let value: f64 = match (mark, at) {
        (Some(b','), Some(at)) => {
            let mut pointed = cell.to_vec();
            pointed[at] = b'.';
            std::str::from_utf8(&pointed).ok()?.parse().ok()?
        }
        _ => std::str::from_utf8(cell).ok()?.parse().ok()?,
    };
    let decimals = match at {
        Some(at) => cell[at + 1..].iter().take_while(|byte| byte.is_ascii_digit()).count() as u32,
        None => 0,
    };
    let exponent = cell.iter().any(|byte| matches!(byte, b'e' | b'E'));
    (value.abs() <= LARGEST).then_some(Number { value, decimals: if exponent { 15 } else { decimals }, mark })
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn only_finite_numbers_are_numbers() {
        let value = |cell: &str, comma| parse(cell.as_bytes(), comma).map(|number| number.value);
        assert_eq!(value("-0.125", false), Some(-0.125));
        assert_eq!(value("-0,125", true), Some(-0.125));
        assert_eq!(value("1e-3", false), Some(0.001));
        for cell in
            ["NaN", "inf", "-", "", "1,5", "1.5.2", "1e999", "1e300", "0x10", "mV", "1 2", "\u{2212}1"]
        {
            assert_eq!(value(cell, false), None, "{cell}");
        }
        assert_eq!(value("1.234,5", true), None);
        assert_eq!(parse(b"0.0020", false).map(|number| number.decimals), Some(4));
    }
}
